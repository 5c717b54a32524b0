"""Sizes of everything in a network: exact at points, upper bounds over boxes, in one shape for both."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Complexes, Floats
from stresscheck.circuit.direct import Direct, direct, direct_bounds
from stresscheck.circuit.enclosure import LineBounds, Need, line_bounds
from stresscheck.circuit.laws import TAU
from stresscheck.circuit.network import Network
from stresscheck.circuit.phasors import Phasors, phasors
from stresscheck.stress.seen import BranchSeen


@dataclass(frozen=True, slots=True)
class Sizes:
    """Peak sizes: `volt`, `ampere`, `root_watt` = sqrt(R) I, `root_var` = sqrt(|X|) I, [lines, points, branches];
    `node` [lines, points, nodes]; `terminal` one array [points] per drive, at its own frequency; `watt` the real
    power of each drive, [points] each; `omega` (smallest, largest) [lines, points]; `values` (smallest, largest)
    of every axis [points, axes]; `direct` the sizes at omega = 0.
    """

    volt: Floats
    ampere: Floats
    root_watt: Floats
    root_var: Floats
    node: Floats
    terminal: tuple[Floats, ...]
    watt: tuple[Floats, ...]
    omega: tuple[Floats, Floats]
    values: tuple[Floats, Floats]
    direct: Direct

    def branch(self, index: int) -> BranchSeen:
        """What one branch sees."""
        return BranchSeen(
            self.volt[:, :, index],
            self.ampere[:, :, index],
            self.root_watt[:, :, index],
            self.root_var[:, :, index],
            self.direct.volt[:, index],
            self.direct.ampere[:, index],
        )


def sizes_at(network: Network, points: Floats) -> Sizes:
    """Exact sizes at points [points, axes]; NaN where a point can't be solved."""
    lines = [phasors(network, points, line) for line in network.lines]
    omega = np.stack([p.omega for p in lines])
    still = direct(network, points)
    terminal, watt = _drives_at(network, lines, still)
    return Sizes(
        np.stack([np.abs(p.volt) for p in lines]),
        np.stack([np.abs(p.ampere) for p in lines]),
        np.stack([np.sqrt(np.abs(p.ohm.real)) * np.abs(p.ampere) for p in lines]),
        np.stack([np.sqrt(np.abs(p.ohm.imag)) * np.abs(p.ampere) for p in lines]),
        np.stack([np.abs(p.node) for p in lines]),
        terminal,
        watt,
        (omega, omega),
        (points, points),
        still,
    )


def _drives_at(network: Network, lines: list[Phasors], still: Direct) -> tuple[tuple[Floats, ...], tuple[Floats, ...]]:
    terminal, watt = [], []
    for index, source in enumerate(network.sources):
        seen = lines[source.line]
        volt, ampere = terminal_phasors(network, index, seen)
        terminal.append(np.abs(ampere))
        power = 0.5 * (volt * ampere.conj()).real
        watt.append(power + still.watt[:, index])
    return tuple(terminal), tuple(watt)


def terminal_phasors(network: Network, index: int, seen: Phasors) -> tuple[Complexes, Complexes]:
    """Voltage across a drive's terminals and the current it sends into the circuit, complex [points]."""
    source = network.sources[index]
    column = network.lines[source.line].sources.index(index)
    if source.branch is not None:
        return seen.volt[:, source.branch], -seen.ampere[:, source.branch]
    padded = np.concatenate([seen.node, np.zeros((len(seen.node), 1), dtype=np.complex128)], axis=1)
    volt = padded[:, source.first] - padded[:, source.second]
    ampere = seen.level[:, column]
    shunt = network.branch_of(source.name, "source")
    if shunt is not None:
        ampere = ampere - seen.ampere[:, shunt]
    return volt, ampere


def sizes_over(
    network: Network, lows: Floats, highs: Floats, need: Need | None = None
) -> tuple[Sizes, list[LineBounds]]:
    """Upper bounds of every size over boxes [lows, highs], each [boxes, axes]; and what the splitter needs."""
    lines = [line_bounds(network, line, lows, highs, need) for line in network.lines]
    still = direct_bounds(network, lows, highs)
    columns = [line.frequency_axis for line in network.lines]
    volt = np.stack([bound.volt for bound in lines])
    ampere = np.stack([bound.ampere for bound in lines])
    watt = np.stack([bound.root_watt for bound in lines])
    terminal = tuple(
        lines[s.line].terminal[:, network.lines[s.line].sources.index(i)] for i, s in enumerate(network.sources)
    )
    sizes = Sizes(
        volt,
        ampere,
        watt,
        np.stack([bound.root_var for bound in lines]),
        np.stack([bound.node for bound in lines]),
        terminal,
        tuple(_watt_bound(network, index, volt, watt, terminal[index], still) for index in range(len(network.sources))),
        (TAU * lows[:, columns].T, TAU * highs[:, columns].T),
        (lows, highs),
        still,
    )
    return sizes, lines


def _watt_bound(
    network: Network,
    index: int,
    volt: Floats,
    root_watt: Floats,
    terminal: Floats,
    still: Direct,
) -> Floats:
    """Real power of a drive: at most V I / 2, and with a single drive at most the sum of all losses behind it."""
    source = network.sources[index]
    line = source.line
    across = source.branch if source.branch is not None else network.branch_of(source.name, "source")
    best = np.full(volt.shape[1], np.inf)
    if across is not None:
        best = 0.5 * volt[line][:, across] * terminal
    if len(network.sources) == 1:
        lossy = [n for n, branch in enumerate(network.branches) if branch.role != "source"]
        losses = 0.5 * (root_watt[line][:, lossy] ** 2).sum(axis=1)
        best = np.minimum(best, losses)
    return np.asarray(best + still.watt[:, index])

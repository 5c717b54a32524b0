"""Sizes of everything in a network: exact at points, upper bounds over boxes, in one shape for both."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Complexes, Floats
from stresscheck.circuit.direct import Direct, direct, direct_bounds
from stresscheck.circuit.enclosure import LineBounds, Need
from stresscheck.circuit.laws import TAU
from stresscheck.circuit.network import Line, Network
from stresscheck.circuit.phasors import Phasors, phasors
from stresscheck.stress.course import extremes
from stresscheck.stress.course_bounds import Settled, bounded_extremes, bounded_rests, courses_over
from stresscheck.stress.rests import rests_at
from stresscheck.stress.seen import BranchSeen


@dataclass(frozen=True, slots=True)
class Sizes:
    """Peak sizes, line by line: `volt`, `ampere`, `root_watt` = sqrt(R) I, `root_var` = sqrt(|X|) I,
    [lines, points, branches]; `node` [lines, points, nodes]; `terminal` [lines, points, drives], currents at the
    terminals. Behind the lines stands one more for each course with endless harmonics: what they leave out, as the
    sine of the same RMS. `groups`: lines that may coincide share a number.

    `high`, `low` [points, responses]: largest values over time and of the opposite sign, without direct parts, of
    branch currents, branch voltages, node voltages, terminal currents. `watt` [points, drives]: real power of each;
    `omega` (smallest, largest) [lines, points]; `values` (smallest, largest) of every axis [points, axes]; `direct`
    the circuit at omega = 0, signed at points.
    """

    volt: Floats
    ampere: Floats
    root_watt: Floats
    root_var: Floats
    node: Floats
    terminal: Floats
    groups: tuple[int, ...]
    high: Floats
    low: Floats
    watt: Floats
    omega: tuple[Floats, Floats]
    values: tuple[Floats, Floats]
    direct: Direct
    sines: bool = True
    """Every course is a lasting sine, so that peaks follow from the sizes of its line."""

    def branch(self, index: int) -> BranchSeen:
        """What one branch sees."""
        across = index + self.volt.shape[2]
        return BranchSeen(
            self.volt[:, :, index],
            self.ampere[:, :, index],
            self.root_watt[:, :, index],
            self.root_var[:, :, index],
            self.direct.volt[:, index],
            self.direct.ampere[:, index],
            (self.high[:, across], self.low[:, across]),
            (self.high[:, index], self.low[:, index]),
        )

    def node_extremes(self, index: int) -> tuple[Floats, Floats]:
        """Largest values of a node's voltage, either sign, without its direct part."""
        column = 2 * self.volt.shape[2] + index
        return self.high[:, column], self.low[:, column]

    def terminal_extremes(self, index: int) -> tuple[Floats, Floats]:
        """Largest values of a drive's current at its terminals, either sign, without its direct part."""
        column = self.high.shape[1] - self.terminal.shape[2] + index
        return self.high[:, column], self.low[:, column]


def groups_of(network: Network) -> tuple[int, ...]:
    """Group of every line, and of the rest of each course with endless harmonics."""
    known = tuple(line.group for line in network.lines)
    return known + tuple(1000 + number for number in range(len(endless_courses(network))))


def only_sines(network: Network) -> bool:
    """True where every drive is a plain sine."""
    return all(len(course) == 1 for course in network.courses()) and not endless_courses(network)


def endless_courses(network: Network) -> list[tuple[int, ...]]:
    """Courses in which a drive has endless harmonics."""
    return [c for c in network.courses() if any(_endless(network, network.lines[n]) for n in c)]


def _endless(network: Network, line: Line) -> bool:
    return any(network.sources[s].waveform.endless for s in line.sources)


def sizes_at(network: Network, points: Floats, *, rough: bool = False) -> Sizes:
    """Exact sizes at points [points, axes]; NaN where a point can't be solved.

    rough: extremes over time are the sums of the lines' peaks, at most a little too large and far quicker.
    """
    lines = [phasors(network, points, line) for line in network.lines]
    omega = np.stack([p.omega for p in lines])
    still = direct(network, points)
    volt, ampere = [np.abs(p.volt) for p in lines], [np.abs(p.ampere) for p in lines]
    watt = [np.sqrt(np.abs(p.ohm.real)) * np.abs(p.ampere) for p in lines]
    var = [np.sqrt(np.abs(p.ohm.imag)) * np.abs(p.ampere) for p in lines]
    node = [np.abs(p.node) for p in lines]
    flow = np.stack([terminal_ampere(network, line, p) for line, p in zip(network.lines, lines, strict=True)])
    terminal = list(np.abs(flow))
    for course in endless_courses(network):
        rest = rests_at(network, course, points)
        ampere.append(rest.ampere)
        volt.append(rest.volt)
        node.append(rest.node)
        terminal.append(rest.terminal)
        watt.append(np.sqrt(np.abs(lines[course[-1]].ohm.real)) * rest.ampere)
        var.append(np.zeros_like(rest.ampere))
    high, low = _added(lines, flow) if rough else extremes(network, lines, flow, points)
    return Sizes(
        np.stack(volt), np.stack(ampere), np.stack(watt), np.stack(var), np.stack(node), np.stack(terminal),
        groups_of(network), high, low, _watt_at(network, lines, flow, still), (omega, omega), (points, points), still, only_sines(network),
    )  # fmt: skip


def _added(lines: list[Phasors], flow: Complexes) -> tuple[Floats, Floats]:
    """Sum of the peaks of all lines, for either sign."""
    total = np.sum(
        [np.abs(np.concatenate([p.ampere, p.volt, p.node, f], axis=1)) for p, f in zip(lines, flow, strict=True)],
        axis=0,
    )
    return total, total


def _watt_at(network: Network, lines: list[Phasors], flow: Complexes, still: Direct) -> Floats:
    """Real power that each drive sends out, all its frequencies and DC together, [points, drives]."""
    total = still.watt.copy()
    for number, line in enumerate(network.lines):
        for index in line.sources:
            volt = terminal_volt(network, index, lines[number])
            total[:, index] = total[:, index] + 0.5 * (volt * flow[number][:, index].conj()).real
    return total


def terminal_volt(network: Network, index: int, seen: Phasors) -> Complexes:
    """Voltage across a drive's terminals, complex [points]."""
    source = network.sources[index]
    if source.branch is not None:
        return seen.volt[:, source.branch]
    padded = np.concatenate([seen.node, np.zeros((len(seen.node), 1), dtype=np.complex128)], axis=1)
    return np.asarray(padded[:, source.first] - padded[:, source.second])


def terminal_ampere(network: Network, line: Line, seen: Phasors) -> Complexes:
    """Current that every drive sends into the circuit at one line, complex [points, drives]."""
    out = np.zeros((len(seen.volt), len(network.sources)), dtype=np.complex128)
    for index, source in enumerate(network.sources):
        own = source.branch if source.branch is not None else network.branch_of(source.name, "source")
        if own is not None:
            out[:, index] = -seen.ampere[:, own]
        if source.branch is None and index in line.sources:
            out[:, index] += seen.level[:, line.sources.index(index)]
    return out


def sizes_over(
    network: Network,
    lows: Floats,
    highs: Floats,
    need: Need | None = None,
    known: Settled | None = None,
) -> tuple[Sizes, list[LineBounds]]:
    """Upper bounds of every size over boxes [lows, highs], each [boxes, axes]; and what the splitter needs.

    known: what already holds for the network's whole box.
    """
    found = courses_over(network, lows, highs, need, known)
    lines = found.lines
    still = direct_bounds(network, lows, highs)
    volt = np.stack([bound.volt for bound in lines] + [rest.volt for rest in found.rests])
    ampere = np.stack([bound.ampere for bound in lines] + [rest.ampere for rest in found.rests])
    none = [np.zeros_like(rest.ampere) for rest in found.rests]
    watt = np.stack([bound.root_watt for bound in lines] + bounded_rests(network, found, highs))
    node = np.stack([bound.node for bound in lines] + [rest.node for rest in found.rests])
    terminal = np.stack(
        [_terminal_bound(network, line, bound) for line, bound in zip(network.lines, lines, strict=True)]
        + [rest.terminal for rest in found.rests]
    )
    high = bounded_extremes(network, found, terminal)
    omega = (
        np.stack([line.omega(lows) for line in network.lines]),
        np.stack([line.omega(highs) for line in network.lines]),
    )
    sizes = Sizes(
        volt, ampere, watt, np.stack([bound.root_var for bound in lines] + none), node, terminal,
        groups_of(network), high, high, _watt_over(network, volt, watt, terminal, still), omega, (lows, highs), still, only_sines(network),
    )  # fmt: skip
    return sizes, list(lines)


def _terminal_bound(network: Network, line: Line, bound: LineBounds) -> Floats:
    """Bound of every drive's current at one line, [boxes, drives]."""
    out = np.zeros((len(bound.ampere), len(network.sources)))
    for index, source in enumerate(network.sources):
        own = source.branch if source.branch is not None else network.branch_of(source.name, "source")
        if index in line.sources:
            out[:, index] = bound.terminal[:, line.sources.index(index)]
        elif own is not None:
            out[:, index] = bound.ampere[:, own]
    return out


def _watt_over(network: Network, volt: Floats, root_watt: Floats, terminal: Floats, still: Direct) -> Floats:
    """Real power of each drive: at most V I / 2 at each of its lines, and with a single drive at most all losses."""
    total = np.zeros(terminal.shape[1:])
    lossy = [n for n, branch in enumerate(network.branches) if branch.role != "source"]
    for index, source in enumerate(network.sources):
        across = source.branch if source.branch is not None else network.branch_of(source.name, "source")
        for number in range(len(volt)):
            if number < len(network.lines) and index not in network.lines[number].sources:
                continue
            best = np.full(volt.shape[1], np.inf)
            if across is not None:
                best = 0.5 * volt[number][:, across] * terminal[number][:, index]
            if len(network.sources) == 1:
                best = np.minimum(best, 0.5 * (root_watt[number][:, lossy] ** 2).sum(axis=1))
            total[:, index] = total[:, index] + best
    return np.asarray(total + still.watt)


__all__ = ["TAU", "Sizes", "groups_of", "sizes_at", "sizes_over", "terminal_ampere", "terminal_volt"]

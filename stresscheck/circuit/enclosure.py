"""Upper bounds of every response of a line over boxes of the circuit's values."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Flags, Floats
from stresscheck.circuit.corner_rule import MARGIN, corner_rule
from stresscheck.circuit.corners import Pieces, flat
from stresscheck.circuit.entries import Entry, entries
from stresscheck.circuit.laws import TAU, ResistorLaw
from stresscheck.circuit.network import GROUND, Line, Network
from stresscheck.circuit.output_groups import OutputGroup, degree_of, output_groups
from stresscheck.circuit.phasors import weight_of
from stresscheck.circuit.rules import (
    by_power,
    chain_root,
    driven_bound,
    per_watt,
    root_bound,
    series_with,
    tuned_bound,
)


@dataclass(frozen=True, slots=True)
class Need:
    """Which bounds are asked for; the others may stay infinite. `outputs`: rows in `readings` order and then the
    terminals of the line's drives, shape [rows]; `watt`, `var`: sqrt(R) I and sqrt(|X|) I, shape [branches]."""

    outputs: Flags
    watt: Flags
    var: Flags

    @staticmethod
    def everything(network: Network) -> Need:
        """Ask for every bound."""
        count = len(network.branches)
        rows = 2 * count + len(network.nodes) + len(network.sources)
        return Need(np.ones(rows, np.bool_), np.ones(count, np.bool_), np.ones(count, np.bool_))


@dataclass(frozen=True, slots=True)
class LineBounds:
    """Bounds of peak sizes over boxes at one line: `ampere`, `volt` [boxes, branches], `node` [boxes, nodes],
    `terminal` [boxes, sources of the line]: current at the terminals of each drive; `root_watt`, `root_var`
    [boxes, branches]: of sqrt(R) I and sqrt(|X|) I. Infinite where none is found. `groups` let a caller choose where
    to split. `around` [boxes, all outputs]: of each response less a constant times its drive, where that was asked."""

    ampere: Floats
    volt: Floats
    node: Floats
    terminal: Floats
    root_watt: Floats
    root_var: Floats
    groups: tuple[OutputGroup, ...]
    around: Floats | None = None

    @property
    def none_tried(self) -> bool:
        """True where every response depends on too many values for a bound to be tried."""
        return not self.groups


def line_bounds(
    network: Network,
    line: Line,
    lows: Floats,
    highs: Floats,
    need: Need | None = None,
    constant: Floats | None = None,
) -> LineBounds:
    """Bound the responses asked for over boxes [lows, highs], each shape [boxes, axes], SI; all without `need`.

    constant [outputs and terminals of the line's only drive]: what to take from each response for `around`.

    Never below the true maximum over a box: each bound is the smallest that the rules of `rules` give, plus a
    relative margin for rounding. A response whose box has more corners than memory is meant for gets none.
    """
    need = need or Need.everything(network)
    omega = line.omega(lows), line.omega(highs)
    pieces = Pieces.of(*omega, degree_of(network))
    band = line.hertz(lows), line.hertz(highs)
    found = entries(
        network,
        pieces.rows(lows),
        pieces.rows(highs),
        pieces.omega.reshape(-1),
        (pieces.rows(band[0]), pieces.rows(band[1])),
    )
    groups = output_groups(network, line, found, pieces, lows, highs, _rows_to_solve(network, line, need))
    scale = _single_level(network, line, highs)
    delivered = network.sources[line.sources[0]].basis == "delivered_power"
    ohm = _resistance(network, found, pieces)
    bound = _unit_bounds(network, line, need, found, pieces, groups, ohm, delivered) * scale[:, None] * (1.0 + MARGIN)
    count, nodes = len(network.branches), len(network.nodes)
    watt, var = _roots(network, found, groups, bound, scale, delivered, need, band, ohm)
    around = None
    if constant is not None:
        around = np.fmin(bound + np.abs(constant) * scale[:, None], _around(groups, bound, constant, scale))
    return LineBounds(
        bound[:, :count], bound[:, count : 2 * count], bound[:, 2 * count : 2 * count + nodes],
        bound[:, 2 * count + nodes :], watt, var, groups, around,
    )  # fmt: skip


def _unit_bounds(
    network: Network,
    line: Line,
    need: Need,
    found: tuple[Entry, ...],
    pieces: Pieces,
    groups: tuple[OutputGroup, ...],
    ohm: tuple[Floats, Floats],
    delivered: bool,
) -> Floats:
    """The smallest bound that the rules give per unit of the only drive, or with the levels of several in it."""
    outputs = 2 * len(network.branches) + len(network.nodes) + len(line.sources)
    bound = np.full((len(ohm[0]), outputs), np.inf)
    wanted = np.concatenate(
        [need.outputs[: outputs - len(line.sources)], need.outputs[-len(network.sources) :][list(line.sources)]]
    )
    for group in groups:
        if delivered:
            own = network.sources[line.sources[0]].branch
            bound[:, group.rows] = per_watt(group.combined, group.rows, ohm[0], own)
        else:
            bound[:, group.rows] = driven_bound(group.combined, group.corners.denominator)
    if not delivered:
        for group in groups:
            tuned_bound(network, group, bound, wanted)
        _by_currents(network, line, bound)
        if len(network.sources) == 1 and network.sources[0].branch is not None:
            by_power(network, network.sources[0].branch, bound, ohm)
            _by_ohm(network, found, pieces, bound)
            own = network.sources[0].branch
            bound[:, -1] = np.fmin(bound[:, -1], bound[:, own])
    return bound


def _around(groups: tuple[OutputGroup, ...], bound: Floats, constant: Floats, scale: Floats) -> Floats:
    """Bound of |N/D - c| for a constant c of each response: N - cD is of the same kind as N."""
    out = np.full_like(bound, np.inf)
    for group in groups:
        below = group.corners.denominator
        away = np.abs(flat(group.combined - constant[group.rows] * below[..., None], 1))
        out[:, group.rows] = corner_rule(away, flat(below, 0))
    return np.asarray(out * scale[:, None] * (1.0 + MARGIN))


def _rows_to_solve(network: Network, line: Line, need: Need) -> list[int]:
    """All currents (other rules build on them), and what else is asked for."""
    count, nodes = len(network.branches), len(network.nodes)
    rows = list(range(count)) + [row for row in range(count, 2 * count + nodes) if need.outputs[row]]
    return rows + [2 * count + nodes + place for place in range(len(line.sources))]


def _single_level(network: Network, line: Line, highs: Floats) -> Floats:
    """Largest peak level of a line's only drive; 1 where several drives are combined corner by corner instead."""
    if len(line.sources) > 1:
        return np.ones(len(highs))
    source = network.sources[line.sources[0]]
    size = abs(weight_of(network, line, 0))
    return size * _peak_level(source.basis, highs[:, source.level_axis], source.ohm, source.level_scale)


def _peak_level(basis: str, level: Floats, ohm: float, scale: float) -> Floats:
    """Peak level of a drive [V or A]; for delivered power the root of twice the power."""
    if basis == "available_power":
        return np.sqrt(8.0 * level * ohm)
    if basis == "delivered_power":
        return np.sqrt(2.0 * level)
    return level * scale


def _by_currents(network: Network, line: Line, bound: Floats) -> None:
    """A drive's current is at most the sum of the other currents at either of its nodes (Kirchhoff)."""
    first = len(network.nodes) + 2 * len(network.branches)
    for place, index in enumerate(line.sources):
        source = network.sources[index]
        if source.branch is None or network.transformers:
            continue
        mine = network.branches[source.branch]
        for node in (mine.first, mine.second):
            others = [
                n for n, b in enumerate(network.branches)
                if n != source.branch and (b.first == node) != (b.second == node)
            ]  # fmt: skip
            injected = any(s.branch is None and node in (s.first, s.second) for s in network.sources if s is not source)
            if node == GROUND or injected:
                continue
            total = bound[:, others].sum(axis=1)
            for column in (source.branch, first + place):
                bound[:, column] = np.fmin(bound[:, column], total)


def _resistance(network: Network, found: tuple[Entry, ...], pieces: Pieces) -> tuple[Floats, Floats]:
    """Smallest and largest resistance of each branch over each box, [boxes, branches]."""
    low = np.zeros((pieces.omega.size, len(network.branches)))
    high = np.zeros_like(low)
    for entry in found:
        if entry.degree == 1:
            low[:, entry.places[0][0]] += np.minimum(entry.low.real, entry.high.real)
            high[:, entry.places[0][0]] += np.maximum(entry.low.real, entry.high.real)
    shape = (*pieces.omega.shape, -1)
    return low.reshape(shape).min(axis=1), high.reshape(shape).max(axis=1)


def _by_ohm(network: Network, found: tuple[Entry, ...], pieces: Pieces, bound: Floats) -> None:
    """The voltage of a branch without coupled coils is at most |z| times its current."""
    count = len(network.branches)
    size = np.zeros((pieces.omega.size, count))
    for entry in found:
        if entry.degree == 1:
            size[:, entry.places[0][0]] += np.maximum(np.abs(entry.low), np.abs(entry.high))
    largest = size.reshape(*pieces.omega.shape, -1).max(axis=1)
    coupled = {c.first for c in network.couplings} | {c.second for c in network.couplings}
    plain = [n for n, b in enumerate(network.branches) if n not in coupled and b.drive is None]
    with np.errstate(invalid="ignore"):
        product = largest[:, plain] * bound[:, plain]
    columns = [count + n for n in plain]
    bound[:, columns] = np.fmin(bound[:, columns], product)


def _roots(
    network: Network,
    found: tuple[Entry, ...],
    groups: tuple[OutputGroup, ...],
    bound: Floats,
    scale: Floats,
    delivered: bool,
    need: Need,
    band: tuple[Floats, Floats],
    ohm: tuple[Floats, Floats],
) -> tuple[Floats, Floats]:
    """Bounds of sqrt(R) I and sqrt(|X|) I of each branch, from bounds of I and of sqrt(u) I (u: see Entry)."""
    watt = np.full((len(bound), len(network.branches)), np.inf)
    var = np.full_like(watt, np.inf)
    home = {int(row): group for group in groups for row in group.rows}
    omega = TAU * band[0], TAU * band[1]
    single = network.sources[0].branch if len(network.sources) == 1 else None
    chain = [] if single is None else series_with(network, single)
    for entry in found:
        branch = entry.places[0][0]
        if entry.u is None or not (need.watt[branch] or need.var[branch]):
            continue
        ends = tuple(end.reshape(len(bound), -1)[:, 0] for end in entry.u)
        root = np.sqrt(ends[1]) * bound[:, branch]
        if entry.varies and not delivered and branch in home:
            tight = root_bound(home[branch], branch, entry, (ends[0], ends[1]))
            if branch in chain and isinstance(network.branches[branch].law, ResistorLaw):
                tight = np.fmin(tight, chain_root(chain, branch, ohm))
            root = np.fmin(root, tight * scale * (1.0 + MARGIN))
        weight = network.branches[branch].law.powers(band, omega)
        watt[:, branch] = np.sqrt(_times(weight.ohm, bound[:, branch]) + _times(weight.watt, root))
        var[:, branch] = np.sqrt(_times(weight.var, root))
    return watt, var


def _times(weight: Floats, root: Floats) -> Floats:
    """Weight times the square of a bound; nothing where the weight is zero, even if there is no bound."""
    with np.errstate(invalid="ignore"):
        return np.where(weight == 0.0, 0.0, weight * root * root)

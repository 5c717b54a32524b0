"""Upper bounds of every response of a line over boxes of the circuit's values."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Complexes, Flags, Floats, Indices
from stresscheck.circuit.corner_rule import MARGIN
from stresscheck.circuit.corners import MOST_DEGREE, MOST_NUMBERS, Corners, Pieces, corner_count, corners
from stresscheck.circuit.entries import Entry, entries
from stresscheck.circuit.influence import influence
from stresscheck.circuit.laws import TAU, CapacitorLaw, ResistorLaw
from stresscheck.circuit.network import GROUND, Line, Network
from stresscheck.circuit.rules import (
    by_power,
    chain_root,
    driven_bound,
    per_watt,
    root_bound,
    series_with,
    tuned_bound,
)
from stresscheck.circuit.tableau import all_branches, excitation, frame, readings


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
class OutputGroup:
    """Outputs that depend on the same entries, with their corners. `rows`: their numbers in `readings` order;
    `combined`: their numerators under the line's drives, [boxes, frequencies, *fans, outputs]; `ports`: the branches
    whose unit series voltages are the columns of `corners` behind the sources."""

    rows: Indices
    corners: Corners
    combined: Complexes
    ports: tuple[int, ...]


@dataclass(frozen=True, slots=True)
class LineBounds:
    """Bounds of peak sizes over boxes at one line: `ampere`, `volt` [boxes, branches], `node` [boxes, nodes],
    `terminal` [boxes, sources of the line]: current at the terminals of each drive; `root_watt`, `root_var`
    [boxes, branches]: of sqrt(R) I and sqrt(|X|) I. Infinite where none is found. `groups` let a caller choose where
    to split."""

    ampere: Floats
    volt: Floats
    node: Floats
    terminal: Floats
    root_watt: Floats
    root_var: Floats
    groups: tuple[OutputGroup, ...]

    @property
    def none_tried(self) -> bool:
        """True where every response depends on too many values for a bound to be tried."""
        return not self.groups


def line_bounds(network: Network, line: Line, lows: Floats, highs: Floats, need: Need | None = None) -> LineBounds:
    """Bound the responses asked for over boxes [lows, highs], each shape [boxes, axes], SI; all without `need`.

    Never below the true maximum over a box: each bound is the smallest that the rules of `rules` give, plus a
    relative margin for rounding. A response whose box has more corners than memory is meant for gets none.
    """
    need = need or Need.everything(network)
    omega = TAU * lows[:, line.frequency_axis], TAU * highs[:, line.frequency_axis]
    pieces = Pieces.of(*omega, _degree(network))
    band = lows[:, line.frequency_axis], highs[:, line.frequency_axis]
    found = entries(
        network,
        pieces.rows(lows),
        pieces.rows(highs),
        pieces.omega.reshape(-1),
        (pieces.rows(band[0]), pieces.rows(band[1])),
    )
    groups = _groups(network, line, found, pieces, lows, highs, _rows_to_solve(network, line, need))
    scale = _single_level(network, line, highs)
    outputs = 2 * len(network.branches) + len(network.nodes) + len(line.sources)
    bound = np.full((len(lows), outputs), np.inf)
    delivered = network.sources[line.sources[0]].basis == "delivered_power"
    ohm = _resistance(network, found, pieces)
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
    bound *= scale[:, None] * (1.0 + MARGIN)
    count, nodes = len(network.branches), len(network.nodes)
    ampere = bound[:, :count]
    watt, var = _roots(network, found, groups, bound, scale, delivered, need, band, ohm)
    return LineBounds(
        ampere, bound[:, count : 2 * count], bound[:, 2 * count : 2 * count + nodes],
        bound[:, 2 * count + nodes :], watt, var, groups,
    )  # fmt: skip


def _groups(
    network: Network,
    line: Line,
    found: tuple[Entry, ...],
    pieces: Pieces,
    lows: Floats,
    highs: Floats,
    solve: list[int],
) -> tuple[OutputGroup, ...]:
    """Sort the outputs by the entries they depend on; evaluate the corners of each group."""
    form = frame(network, all_branches(network))
    rhs, read = excitation(form, line.sources), readings(form)
    moving = [number for number, entry in enumerate(found) if entry.varies]
    read = np.concatenate([read, _terminal_readings(network, line, form.size)])
    flags = influence(form, found, rhs, read)[:, moving]
    patterns: dict[tuple[bool, ...], list[int]] = {}
    for row in solve:
        patterns.setdefault(tuple(flags[row].tolist()), []).append(row)
    groups = []
    for pattern, rows in patterns.items():
        mine = tuple(found[n] for n, flag in zip(moving, pattern, strict=True) if flag)
        ports = tuple(e.places[0][0] for e in mine if e.degree == 1 and np.any(e.low.imag != e.high.imag))
        numbers = corner_count(mine, pieces.count) * len(rows) * (len(line.sources) + len(ports))
        if numbers > MOST_NUMBERS or pieces.count > MOST_DEGREE:
            continue
        port_rhs = np.zeros((form.size, len(ports)))
        for column, branch in enumerate(ports):
            port_rhs[form.row(branch), column] = 1.0
        columns = np.concatenate([rhs, port_rhs], axis=1)
        got = corners(form, found, mine, columns, read[rows], pieces, _capacitors(network))
        combined = _combined(network, line, lows, highs, got, np.array(rows))
        if combined.ndim > got.numerator.ndim - 1:
            got = _with_pick_dimension(got)
        groups.append(OutputGroup(np.array(rows), got, combined, ports))
    return tuple(groups)


def _degree(network: Network) -> int:
    """Degree in omega of determinant and numerators: one for each reactive branch."""
    return sum(not isinstance(branch.law, ResistorLaw) for branch in network.branches)


def _capacitors(network: Network) -> int:
    """How many rows of the tableau count as multiplied by omega."""
    return sum(isinstance(branch.law, CapacitorLaw) for branch in network.branches)


def _rows_to_solve(network: Network, line: Line, need: Need) -> list[int]:
    """All currents (other rules build on them), and what else is asked for."""
    count, nodes = len(network.branches), len(network.nodes)
    rows = list(range(count)) + [row for row in range(count, 2 * count + nodes) if need.outputs[row]]
    return rows + [2 * count + nodes + place for place in range(len(line.sources))]


def _terminal_readings(network: Network, line: Line, size: int) -> Floats:
    """Current at the terminals of each drive of the line, as far as it is an unknown: the shunt's, or the branch's."""
    out = np.zeros((len(line.sources), size))
    for place, index in enumerate(line.sources):
        source = network.sources[index]
        branch = source.branch if source.branch is not None else network.branch_of(source.name, "source")
        if branch is not None:
            out[place, len(network.nodes) + branch] = -1.0
    return out


def _single_level(network: Network, line: Line, highs: Floats) -> Floats:
    """Largest peak level of a line's only drive; 1 where several drives are combined corner by corner instead."""
    if len(line.sources) > 1:
        return np.ones(len(highs))
    source = network.sources[line.sources[0]]
    return _peak_level(source.basis, highs[:, source.level_axis], source.ohm, source.level_scale)


def _peak_level(basis: str, level: Floats, ohm: float, scale: float) -> Floats:
    """Peak level of a drive [V or A]; for delivered power the root of twice the power."""
    if basis == "available_power":
        return np.sqrt(8.0 * level * ohm)
    if basis == "delivered_power":
        return np.sqrt(2.0 * level)
    return level * scale


def _combined(network: Network, line: Line, lows: Floats, highs: Floats, got: Corners, rows: Indices) -> Complexes:
    """Numerators of a group's outputs under the line's drives, [boxes, frequencies, *fans, (picks,) outputs].

    One drive: unit level. Several: one more dimension with every combination of their smallest and largest levels.
    A current drive's terminal current is its level less what its own resistance takes.
    """
    sources = [network.sources[index] for index in line.sources]
    first = len(network.nodes) + 2 * len(network.branches)
    levels: Complexes = np.ones((len(lows), 1, 1), dtype=np.complex128)
    if len(sources) > 1:
        levels = _level_picks(network, line, lows, highs)
    numerator = got.numerator[..., : len(sources)]
    picks = []
    for pick in range(levels.shape[1]):
        level = levels[:, pick].reshape(len(levels), *[1] * (numerator.ndim - 2), len(sources))
        total = (numerator * level).sum(axis=-1)
        for place, source in enumerate(sources):
            if source.branch is None:
                at = np.flatnonzero(rows == first + place)
                total[..., at] += level[..., place] * got.denominator[..., None]
        picks.append(total)
    return picks[0] if len(picks) == 1 else np.stack(picks, axis=-2)


def _level_picks(network: Network, line: Line, lows: Floats, highs: Floats) -> Complexes:
    """Complex levels of several drives at all combinations of their ends, [boxes, picks, sources]."""
    ends = []
    for index in line.sources:
        source = network.sources[index]
        phase = np.exp(1j * source.phase)
        low, high = lows[:, source.level_axis], highs[:, source.level_axis]
        both = [high] if np.array_equal(low, high) else [low, high]
        ends.append([phase * source.level_scale * end for end in both])
    picks: list[list[Complexes]] = [[]]
    for choice in ends:
        picks = [[*pick, end] for pick in picks for end in choice]
    return np.stack([np.stack(pick, axis=1) for pick in picks], axis=1)


def _with_pick_dimension(got: Corners) -> Corners:
    """Give the corners the dimension of the drives' levels, of size one, so that shapes go together."""
    return Corners(got.denominator[..., None], got.numerator[..., None, :, :], got.moving)


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

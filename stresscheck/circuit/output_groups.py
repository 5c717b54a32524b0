"""Responses sorted by the values that they depend on, with their numerators and denominators at all corners."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Complexes, Floats, Indices
from stresscheck.circuit.corners import MOST_DEGREE, MOST_NUMBERS, Corners, Pieces, corner_count, corners
from stresscheck.circuit.entries import Entry
from stresscheck.circuit.influence import influence
from stresscheck.circuit.laws import CapacitorLaw, ResistorLaw
from stresscheck.circuit.network import Line, Network
from stresscheck.circuit.phasors import weight_of
from stresscheck.circuit.tableau import all_branches, excitation, frame, readings


@dataclass(frozen=True, slots=True)
class OutputGroup:
    """Outputs that depend on the same entries, with their corners. `rows`: their numbers in `readings` order;
    `combined`: their numerators under the line's drives, [boxes, frequencies, *fans, outputs]; `ports`: the branches
    whose unit series voltages are the columns of `corners` behind the sources."""

    rows: Indices
    corners: Corners
    combined: Complexes
    ports: tuple[int, ...]


def output_groups(
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


def degree_of(network: Network) -> int:
    """Degree in omega of determinant and numerators: one for each reactive branch."""
    return sum(not isinstance(branch.law, ResistorLaw) for branch in network.branches)


def _capacitors(network: Network) -> int:
    """How many rows of the tableau count as multiplied by omega."""
    return sum(isinstance(branch.law, CapacitorLaw) for branch in network.branches)


def _terminal_readings(network: Network, line: Line, size: int) -> Floats:
    """Current at the terminals of each drive of the line, as far as it is an unknown: the shunt's, or the branch's."""
    out = np.zeros((len(line.sources), size))
    for place, index in enumerate(line.sources):
        source = network.sources[index]
        branch = source.branch if source.branch is not None else network.branch_of(source.name, "source")
        if branch is not None:
            out[place, len(network.nodes) + branch] = -1.0
    return out


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
    for place, index in enumerate(line.sources):
        source = network.sources[index]
        phase = weight_of(network, line, place)
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

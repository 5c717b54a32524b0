"""The circuit at omega = 0: what the offsets of the drives put on each part, and what nothing decides.

Capacitors carry no direct current, coils only their resistance. A group of nodes that no resistive path ties to the
rest floats: a voltage across to it isn't set by the circuit, and is reported as such instead of guessed.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.circuit.corner_rule import MARGIN, corner_rule
from stresscheck.circuit.corners import Pieces, corners, flat
from stresscheck.circuit.elimination import solve_batch
from stresscheck.circuit.entries import direct_entries
from stresscheck.circuit.network import GROUND, Network
from stresscheck.circuit.tableau import Frame, excitation, frame
from stresscheck.errors import CheckError


@dataclass(frozen=True, slots=True)
class Direct:
    """The circuit at omega = 0: signed at points, sizes over boxes. `volt`, `ampere`: [points, branches]; `node`:
    [points, nodes]; NaN where undecided.

    `terminal`: current at the terminals of each drive; `watt`: power that each sends into the circuit, negative where
    it takes power in (over boxes: a bound of its size), [points, sources].
    """

    volt: Floats
    ampere: Floats
    node: Floats
    terminal: Floats
    watt: Floats

    @staticmethod
    def nothing(network: Network, points: int) -> Direct:
        """What drives without offset leave: zero everywhere."""
        branch = np.zeros((points, len(network.branches)))
        source = np.zeros((points, len(network.sources)))
        return Direct(branch, branch, np.zeros((points, len(network.nodes))), source, source)


def has_offset(network: Network) -> bool:
    """True where any drive has a direct part: an offset, or a waveform that isn't even."""
    return any(source.dc != 0.0 or source.waveform.mean != 0.0 for source in network.sources)


def carrying(network: Network) -> tuple[int, ...]:
    """Indices of the branches that carry direct current."""
    probe = np.ones(1)
    return tuple(i for i, branch in enumerate(network.branches) if branch.law.dc_ohm(probe) is not None)


def groups(network: Network) -> list[int]:
    """For each node (and, last, the reference) the number of its group of resistively tied nodes."""
    group = list(range(len(network.nodes) + 1))
    pairs = [(network.branches[i].first, network.branches[i].second) for i in carrying(network)]
    for part in network.transformers:
        pairs += [part.primary, part.secondary]
    for one, two in pairs:
        old, new = group[one], group[two]
        group = [new if g == old else g for g in group]
    return group


def direct(network: Network, points: Floats) -> Direct:
    """Solve at omega = 0 at each point. Everything is zero where no drive has an offset.

    NaN: voltages across capacitors (or gaps) between groups that no resistive path ties together, and currents of
    coils in loops without resistance.
    """
    if not has_offset(network):
        return Direct.nothing(network, len(points))
    form = _direct_frame(network)
    matrix = np.repeat(form.fixed[None].astype(np.complex128), len(points), axis=0)
    position = {branch: n for n, branch in enumerate(form.branches)}
    for entry in direct_entries(network, points, points):
        row = form.row(position[entry.places[0][0]])
        matrix[:, row, row] -= entry.low
    level = _levels(network, points)
    rhs = np.einsum("us,ps->pu", excitation(form, tuple(range(len(network.sources)))), level)
    x = solve_batch(matrix, rhs[:, :, None].astype(np.complex128))[:, :, 0].real.astype(np.float64)
    outputs = x @ _difference_readings(network, form).T + level @ _constants(network, form)
    return _sorted(network, form, outputs)


def _levels(network: Network, points: Floats) -> Floats:
    """Direct part of every drive [V or A], [points, sources]."""
    return np.stack([source.direct_level(points[:, source.level_axis]) for source in network.sources], axis=1)


def direct_bounds(network: Network, lows: Floats, highs: Floats) -> Direct:
    """Upper bounds of the sizes over boxes [lows, highs], each shape [boxes, axes]; infinite where none is found."""
    if not has_offset(network):
        return Direct.nothing(network, len(lows))
    form = _direct_frame(network)
    rhs = excitation(form, tuple(range(len(network.sources))))
    spread = _difference_readings(network, form)
    entries = direct_entries(network, lows, highs)
    moving = tuple(entry for entry in entries if entry.varies)
    found = corners(form, entries, moving, rhs, spread, Pieces(np.zeros((len(lows), 1))), 0)
    times = len(lows) // len(found.denominator)
    below = np.repeat(flat(found.denominator, 0), times, axis=0)
    numerator = (
        np.repeat(flat(found.numerator, 2), times, axis=0) + below[:, :, None, None] * _constants(network, form).T
    )
    ends = np.stack([_levels(network, lows), _levels(network, highs)])
    if np.array_equal(ends[0], ends[1]):
        size = np.abs(np.einsum("bcos,bs->bco", numerator, ends[0]))
    else:
        size = np.einsum("bcos,bs->bco", np.abs(numerator), np.abs(ends).max(axis=0))
    bound = corner_rule(size, below) * (1.0 + MARGIN)
    return _sorted(network, form, bound)


def _direct_frame(network: Network) -> Frame:
    group = groups(network)
    for source in network.sources:
        direct = source.dc != 0.0 or source.waveform.mean != 0.0
        if source.branch is None and direct and group[source.first] != group[source.second]:
            raise CheckError(f"the direct current of {source.name} has no path")
    grounded = tuple(group.index(number) for number in sorted(set(group)) if number != group[GROUND])
    return frame(network, carrying(network), grounded)


def _difference_readings(network: Network, form: Frame) -> Floats:
    """Outputs at DC: currents of carrying branches, voltages of all branches, node voltages; then for each drive the
    current that it sends out (without the constant part of a current drive) and the voltage across it."""
    count, total, nodes = len(form.branches), len(network.branches), len(network.nodes)
    start, drives = count + total + nodes, len(network.sources)
    out = np.zeros((start + 2 * drives, form.size))
    for position in range(count):
        out[position, form.row(position)] = 1.0
    for index, branch in enumerate(network.branches):
        _across(out, count + index, branch.first, branch.second)
    out[count + total : start, :nodes] = np.eye(nodes)
    place = {index: position for position, index in enumerate(form.branches)}
    for index, source in enumerate(network.sources):
        own = source.branch if source.branch is not None else network.branch_of(source.name, "source")
        if own is not None:
            out[start + index, form.row(place[own])] = -1.0
        _across(out, start + drives + index, source.first, source.second)
    return out


def _across(out: Floats, row: int, first: int, second: int) -> None:
    for node, sign in ((first, 1.0), (second, -1.0)):
        if node != GROUND:
            out[row, node] += sign


def _constants(network: Network, form: Frame) -> Floats:
    """What each drive adds to each output by itself: the current of current drives, [sources, outputs]."""
    start = len(form.branches) + len(network.branches) + len(network.nodes)
    out = np.zeros((len(network.sources), start + 2 * len(network.sources)))
    for index, source in enumerate(network.sources):
        if source.branch is None:
            out[index, start + index] = 1.0
    return out


def _sorted(network: Network, form: Frame, outputs: Floats) -> Direct:
    """Outputs in the order of `_difference_readings` as sizes of branches, nodes and drives."""
    count, total, nodes = len(form.branches), len(network.branches), len(network.nodes)
    ampere = np.zeros((len(outputs), total))
    ampere[:, list(form.branches)] = outputs[:, :count]
    volt, node = outputs[:, count : count + total].copy(), outputs[:, count + total : count + total + nodes].copy()
    _blank(network, volt, node)
    rest = outputs[:, count + total + nodes :]
    terminal, across = rest[:, : len(network.sources)], rest[:, len(network.sources) :]
    with np.errstate(invalid="ignore"):
        return Direct(volt, ampere, node, terminal.copy(), np.where(terminal == 0.0, 0.0, terminal * across))


def _blank(network: Network, volt: Floats, node: Floats) -> None:
    """NaN where a voltage spans two groups that nothing ties together."""
    group = groups(network)
    for index, branch in enumerate(network.branches):
        if group[branch.first] != group[branch.second]:
            volt[:, index] = np.nan
    for index in range(len(network.nodes)):
        if group[index] != group[GROUND]:
            node[:, index] = np.nan

"""The circuit at omega = 0: what the offsets of the drives put on each part, and what nothing decides.

Capacitors carry no direct current, coils only their resistance. A group of nodes that no resistive path ties to the
rest floats: a voltage across to it isn't set by the circuit, and is reported as such instead of guessed.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.circuit.corner_rule import corner_rule
from stresscheck.circuit.corners import Pieces, corners, flat
from stresscheck.circuit.elimination import solve_batch
from stresscheck.circuit.entries import direct_entries
from stresscheck.circuit.network import GROUND, Network
from stresscheck.circuit.tableau import Frame, excitation, frame
from stresscheck.errors import CheckError

MARGIN = 1e-6
"""Relative margin of bounds for rounding."""


@dataclass(frozen=True, slots=True)
class Direct:
    """Sizes at omega = 0. `volt`, `ampere`: [points, branches]; `node`: [points, nodes]; NaN where undecided."""

    volt: Floats
    ampere: Floats
    node: Floats


def has_offset(network: Network) -> bool:
    """True where any drive has a DC offset."""
    return any(source.dc != 0.0 for source in network.sources)


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
    size = (len(points), len(network.branches))
    if not has_offset(network):
        return Direct(np.zeros(size), np.zeros(size), np.zeros((len(points), len(network.nodes))))
    form = _direct_frame(network)
    matrix = np.repeat(form.fixed[None].astype(np.complex128), len(points), axis=0)
    position = {branch: n for n, branch in enumerate(form.branches)}
    for entry in direct_entries(network, points, points):
        row = form.row(position[entry.places[0][0]])
        matrix[:, row, row] -= entry.low
    rhs = excitation(form, tuple(range(len(network.sources))), direct=True).sum(axis=1, keepdims=True)
    x = solve_batch(matrix, np.repeat(rhs[None].astype(np.complex128), len(points), axis=0))[:, :, 0].real.astype(
        np.float64
    )
    return _read(network, form, x)


def direct_bounds(network: Network, lows: Floats, highs: Floats) -> Direct:
    """Upper bounds of the sizes over boxes [lows, highs], each shape [boxes, axes]; infinite where none is found."""
    size = (len(lows), len(network.branches))
    if not has_offset(network):
        return Direct(np.zeros(size), np.zeros(size), np.zeros((len(lows), len(network.nodes))))
    form = _direct_frame(network)
    rhs = excitation(form, tuple(range(len(network.sources))), direct=True).sum(axis=1, keepdims=True)
    spread = _difference_readings(network, form)
    entries = direct_entries(network, lows, highs)
    moving = tuple(entry for entry in entries if entry.varies)
    found = corners(form, entries, moving, rhs, spread, Pieces(np.zeros((len(lows), 1))), 0)
    bound = corner_rule(np.abs(flat(found.numerator[..., 0], 1)), flat(found.denominator, 0))
    bound = np.repeat(bound, len(lows) // len(bound), axis=0) * (1.0 + MARGIN)
    count = len(network.branches)
    ampere = np.zeros(size)
    ampere[:, list(form.branches)] = bound[:, : len(form.branches)]
    rest = bound[:, len(form.branches) :]
    volt, node = rest[:, :count].copy(), rest[:, count:].copy()
    _blank(network, volt, node)
    return Direct(volt, ampere, node)


def _direct_frame(network: Network) -> Frame:
    group = groups(network)
    for source in network.sources:
        if source.branch is None and source.dc != 0.0 and group[source.first] != group[source.second]:
            raise CheckError(f"the direct current of {source.name} has no path")
    grounded = tuple(group.index(number) for number in sorted(set(group)) if number != group[GROUND])
    return frame(network, carrying(network), grounded)


def _difference_readings(network: Network, form: Frame) -> Floats:
    """Outputs at DC: currents of carrying branches, voltages of all branches, node voltages."""
    count, total, nodes = len(form.branches), len(network.branches), len(network.nodes)
    out = np.zeros((count + total + nodes, form.size))
    for position in range(count):
        out[position, form.row(position)] = 1.0
    for index, branch in enumerate(network.branches):
        for node, sign in ((branch.first, 1.0), (branch.second, -1.0)):
            if node != GROUND:
                out[count + index, node] += sign
    out[count + total :, :nodes] = np.eye(nodes)
    return out


def _read(network: Network, form: Frame, x: Floats) -> Direct:
    outputs = x @ _difference_readings(network, form).T
    count, total = len(form.branches), len(network.branches)
    ampere = np.zeros((len(x), total))
    ampere[:, list(form.branches)] = outputs[:, :count]
    volt, node = outputs[:, count : count + total].copy(), outputs[:, count + total :].copy()
    _blank(network, volt, node)
    return Direct(np.abs(volt), np.abs(ampere), np.abs(node))


def _blank(network: Network, volt: Floats, node: Floats) -> None:
    """NaN where a voltage spans two groups that nothing ties together."""
    group = groups(network)
    for index, branch in enumerate(network.branches):
        if group[branch.first] != group[branch.second]:
            volt[:, index] = np.nan
    for index in range(len(network.nodes)):
        if group[index] != group[GROUND]:
            node[:, index] = np.nan

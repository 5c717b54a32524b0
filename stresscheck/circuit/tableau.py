"""The sparse tableau: every branch current an unknown, every impedance an entry of its own.

Unknowns: node voltages, branch currents, winding currents. A branch row reads v_first - v_second - sum z i = e, so the
matrix is A = A0 - sum of (change of z) * (unit row)(unit column): each entry changes it by rank one, which the
enclosures build on. It also holds where an impedance is zero, as a coil's may be at direct current.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.circuit.network import GROUND, Network


@dataclass(frozen=True, slots=True)
class Frame:
    """The part of the tableau that doesn't depend on impedances, and where things stand in it.

    `branches`: indices of the network's branches that take part (all, or those that carry direct current).
    """

    network: Network
    branches: tuple[int, ...]
    fixed: Floats
    size: int

    def row(self, position: int) -> int:
        """Row (and column) of the position-th participating branch."""
        return len(self.network.nodes) + position


def frame(network: Network, branches: tuple[int, ...], grounded: tuple[int, ...] = ()) -> Frame:
    """Tableau without impedances. `grounded`: nodes held at zero, one for each group that floats."""
    nodes = len(network.nodes)
    size = nodes + len(branches) + len(network.transformers)
    fixed = np.zeros((size, size))
    for position, index in enumerate(branches):
        branch = network.branches[index]
        _tie(fixed, nodes + position, branch.first, branch.second, 1.0)
    for position, part in enumerate(network.transformers):
        row = nodes + len(branches) + position
        _tie(fixed, row, *part.primary, 1.0)
        _tie(fixed, row, *part.secondary, -part.turns[0] / part.turns[1])
    for node in grounded:
        fixed[node, :] = 0.0
        fixed[node, node] = 1.0
    return Frame(network, branches, fixed, size)


def _tie(matrix: Floats, row: int, first: int, second: int, ratio: float) -> None:
    for node, sign in ((first, ratio), (second, -ratio)):
        if node != GROUND:
            matrix[node, row] += sign
            matrix[row, node] += sign


def excitation(form: Frame, sources: tuple[int, ...]) -> Floats:
    """Right-hand sides for unit drives, one column per source."""
    network = form.network
    out = np.zeros((form.size, len(sources)))
    place = {index: form.row(position) for position, index in enumerate(form.branches)}
    for column, index in enumerate(sources):
        source = network.sources[index]
        if source.branch is not None:
            out[place[source.branch], column] = 1.0
            continue
        for node, sign in ((source.first, 1.0), (source.second, -1.0)):
            if node != GROUND:
                out[node, column] += sign
    return out


def readings(form: Frame) -> Floats:
    """Matrix that turns unknowns into outputs: branch currents, branch voltages, node voltages, in this order."""
    network, count = form.network, len(form.branches)
    nodes = len(network.nodes)
    out = np.zeros((2 * count + nodes, form.size))
    for position, index in enumerate(form.branches):
        out[position, form.row(position)] = 1.0
        for node, sign in ((network.branches[index].first, 1.0), (network.branches[index].second, -1.0)):
            if node != GROUND:
                out[count + position, node] += sign
    out[2 * count :, :nodes] = np.eye(nodes)
    return out


def all_branches(network: Network) -> tuple[int, ...]:
    """Every branch takes part, as at any frequency above zero."""
    return tuple(range(len(network.branches)))

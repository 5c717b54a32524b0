"""Modified nodal analysis at many points: branch voltages and currents for unit drives and unit port voltages.

Unknowns: the node voltages, then the currents that can't be written as admittance times voltage: those of coupled
coils, of ideal voltage drives and of transformer windings. Phasors are peak values, e^{+j omega t}.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Complexes, Floats
from stresscheck.circuit.elimination import solve_columns
from stresscheck.circuit.network import GROUND, Line, Network


@dataclass(frozen=True, slots=True)
class Responses:
    """Responses per excitation (columns: see `respond`), the batch first.

    `volt`, `ampere`: across and through each branch, shape [points, branches, columns]; `node`: node voltages to
    the reference, shape [points, nodes, columns]; `ohm`: branch impedances z, shape [points, branches].
    """

    volt: Complexes
    ampere: Complexes
    node: Complexes
    ohm: Complexes
    omega: Floats


def branch_ohm(network: Network, points: Floats, omega: Floats) -> Complexes:
    """Impedance of every branch at every point [ohm], shape [points, branches]."""
    out = np.empty((len(points), len(network.branches)), dtype=np.complex128)
    for index, branch in enumerate(network.branches):
        value = points[:, branch.axis] if branch.axis is not None else np.full(len(points), branch.fixed)
        out[:, index] = branch.law.ohm(value, omega)
    return out


def mutual_henry(network: Network, points: Floats) -> Floats:
    """M = k sqrt(L1 L2) [H] of every coupling at every point, shape [points, couplings]."""
    out = np.empty((len(points), len(network.couplings)))
    for index, coupling in enumerate(network.couplings):
        first = network.branches[coupling.first].axis
        second = network.branches[coupling.second].axis
        out[:, index] = points[:, coupling.axis] * np.sqrt(points[:, first] * points[:, second])
    return out


def respond(network: Network, points: Floats, line: Line, ports: tuple[int, ...] = ()) -> Responses:
    """Solve at one line's frequency. Columns: unit drive of each of the line's sources, then for each branch in
    `ports` a unit voltage in series with it (raising its first node).

    points: shape [points, axes], SI. A row that can't be solved is NaN.
    Source: modified nodal analysis, circuit theory.
    """
    omega = line.omega(points)
    ohm = branch_ohm(network, points, omega)
    layout = _Layout(network, ohm)
    emf, injected = _excitations(network, line, ports)
    matrix = layout.matrix(ohm, omega, mutual_henry(network, points))
    rhs = layout.rhs(emf, injected, len(points))
    x = solve_columns(matrix, rhs)
    return layout.read(x, ohm, emf, omega)


def _excitations(network: Network, line: Line, ports: tuple[int, ...]) -> tuple[Floats, Floats]:
    """Series voltages per branch [branches, columns] and currents into nodes [nodes, columns]."""
    columns = len(line.sources) + len(ports)
    emf = np.zeros((len(network.branches), columns))
    injected = np.zeros((len(network.nodes) + 1, columns))
    for column, index in enumerate(line.sources):
        source = network.sources[index]
        if source.kind == "voltage" and source.branch is not None:
            emf[source.branch, column] = 1.0
        else:
            injected[source.first, column] += 1.0
            injected[source.second, column] -= 1.0
    for column, branch in enumerate(ports, start=len(line.sources)):
        emf[branch, column] = 1.0
    return emf, injected[:-1]


class _Layout:
    """Which unknown stands where; stamps and readings follow it. Internal arrays have the batch last."""

    def __init__(self, network: Network, ohm: Complexes) -> None:
        self.network = network
        coupled = {c.first for c in network.couplings} | {c.second for c in network.couplings}
        self.kept = [
            index
            for index, branch in enumerate(network.branches)
            if index in coupled or (branch.drive is not None and branch.fixed == 0.0)
        ]
        self.row = {branch: len(network.nodes) + n for n, branch in enumerate(self.kept)}
        self.winding = len(network.nodes) + len(self.kept)
        self.size = self.winding + len(network.transformers)
        with np.errstate(divide="ignore", invalid="ignore"):
            self.siemens = np.ascontiguousarray((1.0 / ohm).T)

    def matrix(self, ohm: Complexes, omega: Floats, mutual: Floats) -> Complexes:
        """The nodal matrix, shape [size, size, points]."""
        out = np.zeros((self.size, self.size, len(omega)), dtype=np.complex128)
        for index, branch in enumerate(self.network.branches):
            ends = [(branch.first, 1.0), (branch.second, -1.0)]
            if index in self.row:
                row = self.row[index]
                out[row, row] -= ohm[:, index]
                _stamp_pair(out, ends, row, 1.0)
                continue
            for one, sign in ends:
                for two, other in ends:
                    if one != GROUND and two != GROUND:
                        out[one, two] += sign * other * self.siemens[index]
        for index, coupling in enumerate(self.network.couplings):
            one, two = self.row[coupling.first], self.row[coupling.second]
            out[one, two] -= 1j * omega * mutual[:, index]
            out[two, one] -= 1j * omega * mutual[:, index]
        for index, part in enumerate(self.network.transformers):
            row = self.winding + index
            n1, n2 = part.turns
            _stamp_pair(out, [(part.primary[0], 1.0), (part.primary[1], -1.0)], row, 1.0)
            _stamp_pair(out, [(part.secondary[0], 1.0), (part.secondary[1], -1.0)], row, -n1 / n2)
        return out

    def rhs(self, emf: Floats, injected: Floats, points: int) -> Complexes:
        """Right-hand sides, shape [size, columns, points]."""
        columns = emf.shape[1]
        out = np.zeros((self.size, columns, points), dtype=np.complex128)
        out[: len(self.network.nodes)] += injected[:, :, None]
        for index, branch in enumerate(self.network.branches):
            for column in np.flatnonzero(emf[index]):
                if index in self.row:
                    out[self.row[index], column] += emf[index, column]
                    continue
                current = self.siemens[index] * emf[index, column]
                if branch.first != GROUND:
                    out[branch.first, column] += current
                if branch.second != GROUND:
                    out[branch.second, column] -= current
        return out

    def read(self, x: Complexes, ohm: Complexes, emf: Floats, omega: Floats) -> Responses:
        """Branch voltages and currents from the unknowns."""
        count, columns, points = len(self.network.branches), x.shape[1], x.shape[2]
        node = x[: len(self.network.nodes)]
        padded = np.concatenate([node, np.zeros((1, columns, points), dtype=np.complex128)])
        volt = np.empty((count, columns, points), dtype=np.complex128)
        ampere = np.empty_like(volt)
        for index, branch in enumerate(self.network.branches):
            volt[index] = padded[branch.first] - padded[branch.second]
            if index in self.row:
                ampere[index] = x[self.row[index]]
            else:
                ampere[index] = (volt[index] - emf[index][:, None]) * self.siemens[index]
        return Responses(volt.transpose(2, 0, 1), ampere.transpose(2, 0, 1), node.transpose(2, 0, 1), ohm, omega)


def _stamp_pair(out: Complexes, ends: list[tuple[int, float]], row: int, ratio: float) -> None:
    """Tie a current unknown to its nodes: its column into the node rows, its voltage into its own row."""
    for node, sign in ends:
        if node != GROUND:
            out[node, row] += sign * ratio
            out[row, node] += sign * ratio

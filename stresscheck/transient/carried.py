"""What capacitors and coils hold at an instant: charges and flux linkages, which nothing changes at once."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Complexes, Floats
from stresscheck.circuit.direct import direct
from stresscheck.circuit.laws import CapacitorLaw
from stresscheck.circuit.network import Line, Network
from stresscheck.circuit.nodal import mutual_henry
from stresscheck.circuit.phasors import Phasors, phasors

Place = tuple[str, str]
"""A reactive branch by part and role: the same in every state of a design."""


@dataclass(frozen=True, slots=True)
class Carried:
    """Charge [C] or flux linkage [Wb] of each reactive branch by its place: peak phasors per line (frequency of its
    fundamental [Hz], order), and direct."""

    lines: dict[tuple[float, int], dict[Place, complex]]
    direct: dict[Place, float]

    @staticmethod
    def nothing() -> Carried:
        """A circuit at rest."""
        return Carried({}, {})


def carried(network: Network, point: Floats) -> Carried:
    """What a running network holds in its steady state at a point [axes]."""
    lines: dict[tuple[float, int], dict[Place, complex]] = {}
    for line in network.lines:
        key = (float(point[line.frequency_axis]), line.order)
        held = line_charge(network, point, line, phasors(network, point[None], line))
        mine = lines.setdefault(key, {})
        for place, value in held.items():
            mine[place] = mine.get(place, 0j) + value
    still = direct(network, point[None])
    moved = {}
    for index, value in _values(network, point).items():
        branch = network.branches[index]
        capacitor = isinstance(branch.law, CapacitorLaw)
        moved[index] = value * float(still.volt[0, index] if capacitor else still.ampere[0, index])
    _add_mutual(network, point, moved, {i: float(still.ampere[0, i]) for i in moved})
    return Carried(lines, {place_of(network, i): v for i, v in moved.items()})


def line_charge(network: Network, point: Floats, line: Line, seen: Phasors) -> dict[Place, complex]:
    """Charges I/(j omega) and flux linkages L I (mutual ones included) at one line, peak phasors."""
    held: dict[int, complex] = {}
    ampere = {}
    for index, value in _values(network, point).items():
        current = complex(seen.ampere[0, index])
        ampere[index] = current
        capacitor = isinstance(network.branches[index].law, CapacitorLaw)
        held[index] = current / (1j * float(seen.omega[0])) if capacitor else value * current
    _add_mutual(network, point, held, ampere)
    return {place_of(network, i): v for i, v in held.items()}


def vector(network: Network, reactive: tuple[int, ...], held: dict[Place, complex] | dict[Place, float]) -> Complexes:
    """Charges and fluxes in the order of a system's reactive branches, zero for parts that held nothing, [m]."""
    return np.array([held.get(place_of(network, i), 0.0) for i in reactive], dtype=np.complex128)


def place_of(network: Network, index: int) -> Place:
    """Part and role of a branch."""
    branch = network.branches[index]
    return branch.part, branch.role


def _values(network: Network, point: Floats) -> dict[int, float]:
    """Capacitance of the whole bank, or inductance, of each reactive branch."""
    found = {}
    for index, branch in enumerate(network.branches):
        value = float(point[branch.axis]) if branch.axis is not None else branch.fixed
        if isinstance(branch.law, CapacitorLaw):
            found[index] = branch.law.scale * value
        elif not hasattr(branch.law, "scale"):
            found[index] = value
    return found


def _add_mutual(network: Network, point: Floats, held: dict, ampere: dict) -> None:  # type: ignore[type-arg]
    henry = mutual_henry(network, point[None])[0]
    for coupling, m in zip(network.couplings, henry, strict=True):
        held[coupling.first] += m * ampere[coupling.second]
        held[coupling.second] += m * ampere[coupling.first]

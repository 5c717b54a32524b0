"""What varies over a box at one frequency: entries of the tableau that move along straight lines."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Complexes, Floats
from stresscheck.circuit.laws import CapacitorLaw
from stresscheck.circuit.network import Coupling, Network


@dataclass(frozen=True, slots=True)
class Entry:
    """An impedance that moves from `low` to `high` [ohm, complex, shape rows] along a straight line.

    `places`: (row branch, column branch) positions it stands in; two for a mutual impedance, which then enters
    determinants squared. `axes`: columns of the values that move it. `u`: ends of what it is linear in (1/C, L or R,
    shape rows), None for an entry that is a loss alone.
    """

    places: tuple[tuple[int, int], ...]
    low: Complexes
    high: Complexes
    axes: tuple[int, ...]
    u: tuple[Floats, Floats] | None = None

    @property
    def degree(self) -> int:
        """Degree in which the entry enters the determinant."""
        return len(self.places)

    @property
    def varies(self) -> bool:
        """True where any row gives it a width."""
        return bool(np.any(self.low != self.high))


def entries(
    network: Network, lows: Floats, highs: Floats, omega: Floats, piece: tuple[Floats, Floats]
) -> tuple[Entry, ...]:
    """All impedances over boxes [lows, highs], each [rows, axes], at one frequency per row; sums cover every z.

    omega: [rows], rad/s; piece: (low, high) [Hz], over which losses that move with frequency are read.
    """
    found: list[Entry] = []
    for index, branch in enumerate(network.branches):
        if branch.axis is None:
            fixed = np.full(len(lows), branch.fixed)
            value = (fixed, fixed)
        else:
            value = (lows[:, branch.axis], highs[:, branch.axis])
        moved = () if branch.axis is None else (branch.axis,)
        u = value
        if isinstance(branch.law, CapacitorLaw):
            u = (1.0 / value[1], 1.0 / value[0])
        for number, (low, high) in enumerate(branch.law.segments(value, omega, piece)):
            found.append(Entry(((index, index),), low, high, moved, u if number == 0 else None))
    found.extend(_mutual(network, coupling, lows, highs, omega) for coupling in network.couplings)
    return tuple(found)


def direct_entries(network: Network, lows: Floats, highs: Floats) -> tuple[Entry, ...]:
    """The same at omega = 0: resistances only; capacitors have no entry."""
    found: list[Entry] = []
    for index, branch in enumerate(network.branches):
        if branch.axis is None:
            fixed = np.full(len(lows), branch.fixed)
            ends = (branch.law.dc_ohm(fixed), branch.law.dc_ohm(fixed))
        else:
            ends = (branch.law.dc_ohm(lows[:, branch.axis]), branch.law.dc_ohm(highs[:, branch.axis]))
        moved = () if branch.axis is None else (branch.axis,)
        if ends[0] is not None and ends[1] is not None:
            found.append(Entry(((index, index),), ends[0] + 0j, ends[1] + 0j, moved))
    return tuple(found)


def _mutual(network: Network, coupling: Coupling, lows: Floats, highs: Floats, omega: Floats) -> Entry:
    """j omega k sqrt(L1 L2), k and the root taken as independent of each other and of the coils' own entries."""
    one, two = network.branches[coupling.first].axis, network.branches[coupling.second].axis
    assert one is not None
    assert two is not None
    least = np.sqrt(lows[:, one] * lows[:, two])
    most = np.sqrt(highs[:, one] * highs[:, two])
    k_low, k_high = lows[:, coupling.axis], highs[:, coupling.axis]
    low = np.minimum(k_low * least, k_low * most)
    high = np.maximum(k_high * least, k_high * most)
    pair = ((coupling.first, coupling.second), (coupling.second, coupling.first))
    return Entry(pair, 1j * omega * low, 1j * omega * high, (coupling.axis, one, two))

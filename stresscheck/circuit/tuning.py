"""Values of one element at which a response peaks: closed form, because every element enters linearly.

With S the current that a unit voltage in series with the element drives through it, g the element's current, y the
response and Y its value per unit series voltage, a change D of the element's impedance gives

    y(D) = (y + D (Y g - y S)) / (1 - D S).

Along D = d t (t real) |y|^2 is a ratio of two quadratics in t, and its stationary points are roots of a quadratic.
Source: circuit theory (compensation theorem).
"""

from __future__ import annotations

import numpy as np

from stresscheck.arrays import Complexes, Floats, Indices
from stresscheck.circuit.laws import TAU, CapacitorLaw, InductorLaw
from stresscheck.circuit.network import Line, Network
from stresscheck.circuit.nodal import respond
from stresscheck.circuit.phasors import amplitude


def branch_on_axis(network: Network, axis: int) -> int | None:
    """The branch whose value lies on this axis, None for axes of frequency, level or coupling."""
    for index, branch in enumerate(network.branches):
        if branch.axis == axis:
            return index
    return None


def reactive_axes(network: Network) -> tuple[int, ...]:
    """Axes of elements that can be tuned, those that vary."""
    return tuple(
        branch.axis
        for branch in network.branches
        if branch.axis is not None
        and network.axes.items[branch.axis].varies
        and isinstance(branch.law, (CapacitorLaw, InductorLaw))
    )


def stationary_values(network: Network, line: Line, points: Floats, axis: int, outputs: Indices) -> Floats:
    """Values on an element's axis where a response is stationary, and where the element is tuned: [points, 3].

    outputs: for each point the response's number in the order of the tableau's readings (branch currents, branch
    voltages, node voltages). Values may lie outside the box, and are NaN where there is none. Mutual inductances are
    held while a coil's value moves, so for coupled coils the values are good guesses only.
    """
    branch = branch_on_axis(network, axis)
    if branch is None:
        return np.full((len(points), 3), np.nan)
    seen = respond(network, points, line, ports=(branch,))
    rows = np.arange(len(points))
    level = np.stack([amplitude(network, line, points, seen, column) for column in range(len(line.sources))], axis=1)
    everything = np.concatenate([seen.ampere, seen.volt, seen.node], axis=1)[rows, outputs]
    sources = len(line.sources)
    y0 = np.einsum("ps,ps->p", everything[:, :sources], level)
    per_port = everything[:, sources]
    current = np.einsum("ps,ps->p", seen.ampere[:, branch, :sources], level)
    s = seen.ampere[:, branch, sources]
    direction = _direction(network, branch, seen.omega)
    c = direction * s
    b = per_port * direction * current - c * y0
    with np.errstate(all="ignore"):
        t = np.stack([*_stationary(y0, b, c), c.real / np.abs(c) ** 2], axis=1)
        return _value_after(network, branch, points[:, axis], t)


def tuned_values(network: Network, line: Line, points: Floats, axis: int) -> Floats:
    """Value on an element's axis that makes the loop impedance it sees smallest, [points]."""
    outputs = np.zeros(len(points), dtype=np.intp)
    return stationary_values(network, line, points, axis, outputs)[:, 2]


def _direction(network: Network, branch: int, omega: Floats) -> Complexes:
    """dz/du: u = 1/C for a capacitor, u = L or R otherwise. z is a straight line in u."""
    law = network.branches[branch].law
    if isinstance(law, CapacitorLaw):
        return (law.loss_factor.at(omega / TAU) - 1j) / (omega * law.scale)
    if isinstance(law, InductorLaw):
        return law.kappa + 1j * omega
    return np.full(omega.shape, law.scale + 0j)


def _value_after(network: Network, branch: int, value: Floats, t: Floats) -> Floats:
    """The element's value after u has moved by t; NaN where that would not be positive."""
    if isinstance(network.branches[branch].law, CapacitorLaw):
        moved = 1.0 / value[:, None] + t
        return np.where(moved > 0.0, 1.0 / moved, np.nan)
    moved = value[:, None] + t
    return np.where(moved > 0.0, moved, np.nan)


def _stationary(a: Complexes, b: Complexes, c: Complexes) -> tuple[Floats, Floats]:
    """Real t where |a + b t|^2 / |1 - c t|^2 is stationary; NaN where there is none."""
    n0, n1, n2 = np.abs(a) ** 2, 2.0 * (a.conj() * b).real, np.abs(b) ** 2
    m1, m2 = -2.0 * c.real, np.abs(c) ** 2
    square = n2 * m1 - n1 * m2
    middle = 2.0 * (n2 - n0 * m2)
    constant = n1 - n0 * m1
    root = np.sqrt(middle * middle - 4.0 * square * constant)
    q = -0.5 * (middle + np.copysign(root, middle))
    return q / square, constant / q

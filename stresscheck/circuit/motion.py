"""The network as a system in time, at many points at once: x' = A x + B u, y = C x + D u + E u'.

x are the free capacitor voltages and coil currents, scaled so that |x|^2 / 2 is the stored energy [J]; in this measure
a passive network never grows by itself. u are the drives (one entry each, volt or ampere), y the branch currents,
branch voltages and node voltages, in the order of the tableau's readings. No pole is lost to a singular matrix: tied
capacitors and coils are eliminated by what ties them. Source: circuit theory (state equations of RLCM networks).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.circuit.laws import CapacitorLaw, InductorLaw
from stresscheck.circuit.network import GROUND, Network
from stresscheck.circuit.nodal import branch_ohm, mutual_henry
from stresscheck.circuit.roles import Roles, roles_of
from stresscheck.circuit.tableau import readings
from stresscheck.errors import CheckError

TIE = 1e-6
"""Relative size up to which a tied quantity may depend on what it must not depend on: rounding."""


@dataclass(frozen=True, slots=True)
class Motion:
    """One system per point. Shapes: `a` [P, n, n], `b` [P, n, s], `c` [P, o, n], `d` and `e` [P, o, s].

    `momentum` [P, m, m]: charges and fluxes of all reactive branches from their voltages and currents; `settle`
    [P, n, m]: state from charges and fluxes that are carried over an instant of change; `spread` [P, m, n] and `given`
    [P, m, s]: voltages and currents of all reactive branches from state and drives; `impulse` [P, o, m]: area of the
    surge in each output per charge or flux that is forced to move at once.
    """

    a: Floats
    b: Floats
    c: Floats
    d: Floats
    e: Floats
    momentum: Floats
    settle: Floats
    spread: Floats
    given: Floats
    impulse: Floats
    reactive: tuple[int, ...]


def motion(network: Network, points: Floats, omega: Floats, roles: Roles | None = None) -> Motion:
    """Build the systems at points [P, axes], losses read at omega [P, rad/s].

    Raises CheckError where the network has no unique solution at an instant.
    """
    ohm = branch_ohm(network, points, omega)
    loss = np.ascontiguousarray(ohm.real, dtype=np.float64)
    roles = roles or roles_for(network)
    form, free, tied = roles.form, roles.free, roles.tied
    x = instant(network, roles, loss)
    read = readings(form) @ x
    n, m = len(free), len(free) + len(tied)
    count = len(network.branches)

    def rows(index: int) -> Floats:
        """What pushes a charge or flux (free), or what ties one: current or inner voltage."""
        inner = read[:, count + index] - loss[:, index, None] * read[:, index]
        capacitor = isinstance(network.branches[index].law, CapacitorLaw)
        return np.asarray(read[:, index] if capacitor == (index in free) else inner)

    push = _stack([rows(i) for i in free], x)
    tie = _stack([rows(i) for i in tied], x)
    if tied and np.abs(tie[:, :, n:m]).max() > TIE * max(1.0, np.abs(tie).max()):
        raise CheckError("capacitors and coils are tied in a way that leaves the circuit without a solution in time")
    alpha, beta = tie[:, :, :n], tie[:, :, m:]
    d = _momentum(network, points, roles)
    lift = np.concatenate([np.broadcast_to(np.eye(n), (len(points), n, n)), alpha], axis=1)
    mass = np.swapaxes(lift, 1, 2) @ d @ lift
    try:
        low = np.linalg.cholesky(0.5 * (mass + np.swapaxes(mass, 1, 2)))
    except np.linalg.LinAlgError:
        raise CheckError("the inductances of coupled coils aren't positive definite") from None
    return _assembled(read, push, d, lift, low, beta, n, m, roles)


def _assembled(
    read: Floats, push: Floats, d: Floats, lift: Floats, low: Floats, beta: Floats, n: int, m: int, roles: Roles
) -> Motion:
    """Eliminate what is tied and scale by energy: low low^T is the free part's inductance and capacitance matrix."""
    up = np.swapaxes(low, 1, 2)
    inverse_up = np.linalg.inv(up) if n else up
    inverse_low = np.swapaxes(inverse_up, 1, 2)
    h, j = push[:, :, :n], push[:, :, m:]
    drawn = np.swapaxes(lift, 1, 2) @ d[:, :, n:] @ beta
    shift = -inverse_up @ inverse_low @ drawn
    pushed = h @ shift + j
    a = inverse_low @ h @ inverse_up
    b = inverse_low @ pushed
    tied_rows = d[:, n:] @ lift
    y_w, y_p, y_u = read[:, :, :n], read[:, :, n:m], read[:, :, m:]
    through = y_p @ tied_rows
    c = (y_w + through @ inverse_up @ inverse_low @ h) @ inverse_up
    direct = y_w @ shift + through @ inverse_up @ b + y_u
    surge = through @ shift + y_p @ d[:, n:, n:] @ beta
    settle = inverse_low @ np.swapaxes(lift, 1, 2)
    given = lift @ shift
    given[:, n:] += beta
    return Motion(
        a, b, c, direct, surge, d, settle, lift @ inverse_up, given,
        np.concatenate([np.zeros((*y_p.shape[:2], n)), y_p], axis=2), roles.reactive,
    )  # fmt: skip


def roles_for(network: Network) -> Roles:
    """Roles of a network's reactive branches; whether a loss is zero is read at nominal values."""
    omega = np.ones(1) if not network.lines else 2.0 * np.pi * network.axes.nominal[[network.lines[0].frequency_axis]]
    ohm = branch_ohm(network, network.axes.nominal[None], omega)[0].real
    return roles_of(network, tuple(bool(r == 0.0) for r in ohm))


def _stack(rows: list[Floats], like: Floats) -> Floats:
    return np.stack(rows, axis=1) if rows else np.empty((len(like), 0, like.shape[2]))


def instant(network: Network, roles: Roles, loss: Floats) -> Floats:
    """All unknowns per unit of: free voltages and currents, pushes of the tied ones, drives; [P, size, columns]."""
    form = roles.form
    held = set(roles.free)
    matrix = np.repeat(form.fixed[None], len(loss), axis=0)
    column = {index: n for n, index in enumerate(roles.reactive)}
    rhs = np.zeros((form.size, len(roles.reactive) + len(network.sources)))
    for index, branch in enumerate(network.branches):
        row = form.row(index)
        if index in column:
            rhs[row, column[index]] = 1.0
            if isinstance(branch.law, InductorLaw) == (index in held):
                matrix[:, row, :] = 0.0
                matrix[:, row, row] = 1.0
                continue
        matrix[:, row, row] -= loss[:, index]
    for number, source in enumerate(network.sources, start=len(roles.reactive)):
        if source.branch is not None:
            rhs[form.row(source.branch), number] = 1.0
            continue
        for node, sign in ((source.first, 1.0), (source.second, -1.0)):
            if node != GROUND:
                rhs[node, number] += sign
    try:
        x = np.linalg.solve(matrix, np.repeat(rhs[None], len(loss), axis=0))
    except np.linalg.LinAlgError:
        raise CheckError("the circuit has no unique solution at an instant") from None
    if not np.isfinite(x).all():
        raise CheckError("the circuit has no unique solution at an instant")
    return np.asarray(x, dtype=np.float64)


def _momentum(network: Network, points: Floats, roles: Roles) -> Floats:
    """C of each capacitor, inductance matrix of the coils, [P, m, m]."""
    m = len(roles.reactive)
    out = np.zeros((len(points), m, m))
    place = {index: n for n, index in enumerate(roles.reactive)}
    for index, n in place.items():
        branch = network.branches[index]
        value = points[:, branch.axis] if branch.axis is not None else np.full(len(points), branch.fixed)
        out[:, n, n] = branch.law.scale * value if isinstance(branch.law, CapacitorLaw) else value
    for coupling, henry in zip(network.couplings, mutual_henry(network, points).T, strict=True):
        one, two = place[coupling.first], place[coupling.second]
        out[:, one, two] += henry
        out[:, two, one] += henry
    return out

"""Poles and residues of a network in time: everything it does by itself is a sum of c e^{lambda t}."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Complexes, Floats
from stresscheck.circuit.laws import CapacitorLaw, InductorLaw
from stresscheck.circuit.motion import Motion, motion
from stresscheck.circuit.network import Network
from stresscheck.circuit.roles import Roles
from stresscheck.errors import CheckError

LOOSEN = (0.0, 1e-13, 1e-11, 1e-9)
"""Relative sizes of the nudges that part poles which coincide; a nudge of size e moves a double pole by its root."""
EXACT = 1e-6
"""Largest relative error allowed when the poles and their shapes are multiplied out again."""
STILL = 1e-13
"""Poles nearer to zero than this part of the largest stand still: charge without a path."""


@dataclass(frozen=True, slots=True)
class Ringing:
    """`pole` [P, n] (real part <= 0); `shape` [P, n, n], columns; `inverse` of shape; `out` [P, o, n] = C shape;
    `into` [P, n, s] = inverse B; `motion`: the system itself."""

    pole: Complexes
    shape: Complexes
    inverse: Complexes
    out: Complexes
    into: Complexes
    motion: Motion


def ringing(network: Network, points: Floats, omega: Floats, roles: Roles) -> Ringing:
    """Poles and residues at points [P, axes].

    Losses that move with frequency are read at omega [P, rad/s] for the shapes and at each mode's own frequency for its
    decay (first order in the loss). Poles that coincide (critical damping) are parted by a nudge whose effect is
    checked. Raises CheckError where they can't be. Source: modal decomposition, common practice.
    """
    system = motion(network, points, omega, roles)
    n = system.a.shape[-1]
    if n == 0:
        none = np.empty((len(points), 0, 0), dtype=np.complex128)
        return _ringing(system, none.reshape(len(points), 0), none, none)
    pole, shape, inverse = _modes(system.a)
    if _moves(network):
        pole = _own_loss(network, points, roles, pole, shape, inverse)
    size = np.abs(pole).max(axis=1, keepdims=True)
    pole = np.where(np.abs(pole) <= STILL * size, 0.0, pole)
    return _ringing(system, np.minimum(pole.real, 0.0) + 1j * pole.imag, shape, inverse)


def _ringing(system: Motion, pole: Complexes, shape: Complexes, inverse: Complexes) -> Ringing:
    return Ringing(pole, shape, inverse, system.c @ shape, inverse @ system.b, system)


def _modes(a: Floats) -> tuple[Complexes, Complexes, Complexes]:
    pole = np.empty(a.shape[:2], dtype=np.complex128)
    shape = np.empty(a.shape, dtype=np.complex128)
    inverse = np.empty_like(shape)
    rows = np.arange(len(a))
    rng = np.random.default_rng(3)
    pattern = rng.uniform(-1.0, 1.0, a.shape[1:])
    scale = np.abs(a).max(axis=(1, 2), keepdims=True)
    scale[scale == 0.0] = 1.0
    for nudge in LOOSEN:
        pole[rows], shape[rows] = np.linalg.eig(a[rows] + nudge * scale[rows] * pattern)
        with np.errstate(all="ignore"):
            inverse[rows] = _inverse(shape[rows])
            again = (shape[rows] * pole[rows, None, :]) @ inverse[rows]
            error = np.abs(again - a[rows]).max(axis=(1, 2)) / scale[rows, 0, 0]
        rows = rows[~(error <= EXACT)]
        if not rows.size:
            return pole, shape, inverse
    raise CheckError("several natural modes coincide too closely for the response in time to be computed")


def _inverse(shape: Complexes) -> Complexes:
    try:
        return np.linalg.inv(shape)
    except np.linalg.LinAlgError:
        return np.full_like(shape, np.nan)


def _moves(network: Network) -> bool:
    """Does any loss move with frequency?"""
    return any(
        (isinstance(b.law, CapacitorLaw) and not (b.law.esr.constant and b.law.loss_factor.zero))
        or (isinstance(b.law, InductorLaw) and not b.law.resistance.constant)
        for b in network.branches
    )


def _own_loss(
    network: Network, points: Floats, roles: Roles, pole: Complexes, shape: Complexes, inverse: Complexes
) -> Complexes:
    """Poles with the losses read at each mode's own frequency: v^-1 A(|pole|) v, first order in the change of loss."""
    out = pole.copy()
    for k in range(pole.shape[1]):
        omega = np.maximum(np.abs(pole[:, k]), 1e-30)
        a = motion(network, points, omega, roles).a
        own = np.einsum("pi,pij,pj->p", inverse[:, k], a, shape[:, :, k])
        oscillates = np.abs(pole[:, k].imag) > 1e-9 * np.abs(pole[:, k])
        out[:, k] = np.where(oscillates & np.isfinite(own), own, pole[:, k])
    return out

"""Skin effect: how deep a current flows, and how much more a round wire then resists."""

from __future__ import annotations

import math

import numpy as np

from stresscheck.arrays import Complexes, Floats
from stresscheck.physics.ranges import Size, above_zero, finite, zero_or_more

MU_0 = 4e-7 * math.pi
"""Permeability of free space [H/m]."""
_FAR = 20.0
"""Radius over depth from which the expansion in its inverse is used; there both agree to rounding."""
_FRACTION_TERMS = 60
_SERIES_TERMS = 16


def skin_depth(resistivity: Size, hertz: Size, mu_r: Size = 1.0) -> Floats:
    """Depth at which the current density has fallen to 1/e, sqrt(rho/(pi f mu_0 mu_r)) [m]; infinite at 0 Hz.

    Resistivity [ohm m], frequency [Hz]; any shapes that broadcast. Valid for good conductors of constant permeability,
    wherever the depth is far above the mean free path of the electrons (for copper: not in deep cold, not above some
    100 GHz). Check: copper, 1.724e-8 ohm m: 8.53 mm at 60 Hz, 66.1 um at 1 MHz. Source: circuit theory (L4).
    """
    above_zero(resistivity=resistivity, mu_r=mu_r)
    zero_or_more(hertz=hertz)
    with np.errstate(divide="ignore"):
        return np.asarray(np.sqrt(np.asarray(resistivity) / (math.pi * MU_0 * np.asarray(mu_r) * np.asarray(hertz))))


def round_wire_ratio(radius: Size, depth: Size) -> Floats:
    """R_ac/R_dc of a round wire, Re{(ka/2) J0(ka)/J1(ka)}, k = (1-j)/depth; 1 where the depth is infinite.

    Radius a and skin depth [m]; any shapes that broadcast. Valid at all ratios a/depth for one straight wire away from
    others: neighbouring turns and layers add loss of their own (`layers`). Up to a/depth = 20 by the continued fraction
    of J1/J0, above by the expansion in depth/a. Check: 1.006822 for 0.5 mm at 10 kHz and 1.72e-8 ohm m.
    Source: Bessel form (L5).
    """
    above_zero(radius=radius, depth=depth)
    finite(radius=radius)
    ratio = np.asarray(radius) / np.asarray(depth)
    return np.asarray(np.where(ratio > _FAR, _far(np.maximum(ratio, _FAR)), _near(np.minimum(ratio, _FAR))))


def _near(ratio: Floats) -> Floats:
    """1 + Re{s/(2 (4 + s/(6 + s/(8 + ...))))}, s = -(ka)^2 = 2j ratio^2; every term has a real part above zero."""
    s = 2j * ratio * ratio
    tail = np.full(np.shape(ratio), 2.0 * (_FRACTION_TERMS + 2), dtype=np.complex128)
    for order in range(_FRACTION_TERMS + 1, 1, -1):
        tail = 2.0 * order + s / tail
    return np.asarray(1.0 + (s / (2.0 * tail)).real)


def _far(ratio: Floats) -> Floats:
    """Re{(x/2) (c0 + c1/x + c2/x^2 + ...)}, x = (1+j) ratio; ratio/2 + 1/4 + 3/(32 ratio) + ...

    I0/I1 = sum of c_k x^-k solves r' = 1 - r^2 + r/x, hence 2 c_k = k c_(k-1) - sum of c_i c_(k-i), 0 < i < k.
    """
    terms = [1.0]
    for k in range(1, _SERIES_TERMS):
        terms.append(0.5 * (k * terms[k - 1] - sum(terms[i] * terms[k - i] for i in range(1, k))))
    inverse: Complexes = 1.0 / np.asarray((1.0 + 1.0j) * ratio, dtype=np.complex128)
    total: Complexes = np.zeros(np.shape(ratio), dtype=np.complex128)
    for term in reversed(terms[1:]):
        total = term + total * inverse
    return np.asarray(0.5 * ratio + 0.5 * total.real)

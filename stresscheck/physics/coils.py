"""Values of single-layer coils, and of wire, to set declared values against: plausibility, never a rating."""

from __future__ import annotations

import math

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.physics.ranges import Size, above_zero, finite
from stresscheck.physics.skin import MU_0

_MEANS = 8
"""Steps of the arithmetic-geometric mean; each squares the distance that is left."""


def nagaoka(diameter: Size, length: Size) -> Floats:
    """Nagaoka's coefficient, the inductance of a round current sheet over that of an endless one of the same turns.

    (4/(3 pi k')) [(K - E)/k^2 - K + 2 E - k], K and E the complete elliptic integrals of modulus k,
    k^2 = D^2/(D^2 + l^2), k'^2 = 1 - k^2. Diameter D and length l in one unit; any shapes that broadcast. Valid up to
    D/l = 1e4, there within 1e-7. Check: 0.688423 at D = l, 0.319825 at D = 5 l. Source: Lorenz's closed form.
    """
    above_zero(diameter=diameter, length=length)
    finite(diameter=diameter, length=length)
    shape = np.asarray(diameter, dtype=np.float64) / np.asarray(length)
    if not np.all(shape <= 1e4):
        raise ValueError("the coefficient is computed up to a diameter of 1e4 lengths")
    across = np.hypot(1.0, shape)
    k, rest = shape / across, 1.0 / across
    whole, gap = _elliptic(k, rest)
    second = whole - k * k * gap
    return np.asarray(4.0 / (3.0 * math.pi * rest) * (gap - whole + 2.0 * second - k))


def _elliptic(k: Floats, rest: Floats) -> tuple[Floats, Floats]:
    """K(k) and (K - E)/k^2, the second without a difference of near values; `rest` is sqrt(1 - k^2).

    K = pi/(2 M(1, k')), (K - E)/K = sum of 2^(n-1) c_n^2 with c_0 = k, c_(n+1) = c_n^2/(4 a_(n+1)).
    """
    mean, geometric = np.ones_like(k), rest
    part, total, weight = np.ones_like(k), np.full_like(k, 0.5), 1.0
    scale = k  # c_n = scale * part, so that c_n/k stays in reach when k is tiny
    for _ in range(_MEANS):
        mean, geometric = 0.5 * (mean + geometric), np.sqrt(mean * geometric)
        part = part * part * scale / (4.0 * mean)
        total = total + weight * part * part
        weight *= 2.0
    whole = 0.5 * math.pi / mean
    return whole, whole * total


def single_layer_inductance(turns: Size, diameter: Size, length: Size) -> Floats:
    """Inductance of a single-layer coil, mu_0 pi D^2 N^2 K/(4 l) [H], K Nagaoka's coefficient.

    Mean diameter D and length l of the winding (turns times pitch) [m]; any shapes that broadcast. Valid for close
    windings in air at low frequency: round wire, wide pitch and skin effect move it by some per cent, self-capacitance
    near resonance by more. Check: 200 turns, 4.00 cm across, 10.0 cm long: 0.53681 mH. Source: Lorenz's closed form.
    """
    above_zero(turns=turns)
    finite(turns=turns)
    d, ends = np.asarray(diameter), nagaoka(diameter, length)
    return np.asarray(MU_0 * math.pi * d * d * np.asarray(turns) ** 2 * ends / (4.0 * np.asarray(length)))


def self_capacitance(diameter: Size, length: Size) -> Floats:
    """Self-capacitance of a single-layer coil with one end grounded, 11.26 l + 8 D + 27 D sqrt(D/l) [pF, in m] [F].

    Mean diameter D and length l [m]; any shapes that broadcast. Valid for close windings of many turns, l/D 1 to 5,
    else ValueError; 8 % below to 1 % above the measured table there, so a coil may resonate 4 % lower than this says.
    Source: common fit to Medhurst's table.
    """
    above_zero(diameter=diameter, length=length)
    d, l_ = np.asarray(diameter, dtype=np.float64), np.asarray(length, dtype=np.float64)
    if not np.all((l_ >= d * (1.0 - 1e-9)) & (l_ <= 5.0 * d * (1.0 + 1e-9))):
        raise ValueError("the self-capacitance is known for coils of 1 to 5 diameters length")
    return np.asarray(1e-12 * (11.26 * l_ + 8.0 * d + 27.0 * d * np.sqrt(d / l_)))


def awg_diameter(gauge: Size) -> Floats:
    """Diameter of bare wire of an American wire gauge, 0.127 mm x 92^((36 - n)/39) [m].

    n = 0 for 0, -1 for 00, -2 for 000, -3 for 0000; any shape. Valid from -3 to 56, else ValueError; the definition of
    the gauge, so exact but for the tolerance of the wire. Check: 2.588 mm at 10. Source: definition of the gauge.
    """
    n = np.asarray(gauge, dtype=np.float64)
    if not np.all((n >= -3.0) & (n <= 56.0)):
        raise ValueError("wire gauges run from -3 (0000) to 56")
    return np.asarray(0.127e-3 * 92.0 ** ((36.0 - n) / 39.0))

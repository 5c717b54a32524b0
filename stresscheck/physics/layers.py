"""AC resistance of windings: layers of wire or foil by Dowell's formula."""

from __future__ import annotations

import math

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.physics.ranges import Size, above_zero, finite, zero_or_more


def dowell_ratio(x: Size, layers: Size) -> Floats:
    """R_ac/R_dc, x [(sinh 2x + sin 2x)/(cosh 2x - cos 2x) + (2 (m^2-1)/3)(sinh x - sin x)/(cosh x + cos x)].

    x: thickness of a layer over skin depth (`round_wire_layer` for round wire); m: whole layers from where the
    field is zero. Any shapes that broadcast; 1 at x = 0. Valid for layers that fill the breadth of a window between
    cores, with the field along the layers; poor for air-core solenoids. Never overflows. Check: 11.7 at m = 10, x = 1.
    Source: Dowell's formula (L6).
    """
    zero_or_more(x=x)
    finite(x=x, layers=layers)
    m, thick = np.asarray(layers, dtype=np.float64), np.asarray(x, dtype=np.float64)
    if not np.all((m >= 1.0) & (m == np.floor(m))):
        raise ValueError("layers have to be whole numbers from 1 on")
    return np.asarray(_own(thick) + (2.0 * (m * m - 1.0) / 3.0) * _others(thick))


def _own(x: Floats) -> Floats:
    """x (sinh 2x + sin 2x)/(cosh 2x - cos 2x), all times exp(-2x); the denominator is 2 (sinh^2 x + sin^2 x)."""
    fall, sine = np.exp(-2.0 * x), np.sin(x)
    above = x * (-0.5 * np.expm1(-4.0 * x) + fall * np.sin(2.0 * x))
    below = 2.0 * (0.25 * np.expm1(-2.0 * x) ** 2 + fall * sine * sine)
    tiny = x < 1e-100  # squares vanish
    return np.asarray(np.where(tiny, 1.0, above / np.where(tiny, 1.0, below)))


def _others(x: Floats) -> Floats:
    """x (sinh x - sin x)/(cosh x + cos x), all times exp(-x); x^4/6 where the difference would cancel."""
    fall = np.exp(-x)
    whole = x * (-0.5 * np.expm1(-2.0 * x) - fall * np.sin(x)) / (0.5 * (1.0 + fall * fall) + fall * np.cos(x))
    return np.asarray(np.where(x < 1e-2, np.minimum(x, 1e-2) ** 4 / 6.0, whole))


def round_wire_layer(diameter: Size, pitch: Size, depth: Size) -> Floats:
    """x for round wire: (pi/4)^(3/4) (d/depth) sqrt(d/p), the square wire of equal area spread over its pitch.

    Diameter d of the copper, pitch p of the turns within a layer, skin depth [m]; any shapes that broadcast. Valid for
    d <= p, else ValueError; square for round wire is an approximation whose error isn't known here.
    Source: Dowell's formula.
    """
    above_zero(diameter=diameter, pitch=pitch, depth=depth)
    finite(diameter=diameter, pitch=pitch)
    d, p = np.asarray(diameter), np.asarray(pitch)
    if not np.all(d <= p):
        raise ValueError("the pitch of the turns can't be below the diameter of the wire")
    return np.asarray((math.pi / 4.0) ** 0.75 * d / np.asarray(depth) * np.sqrt(d / p))

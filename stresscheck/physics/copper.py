"""Resistance of copper, cold and hot."""

from __future__ import annotations

import math

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.physics.ranges import Size, above_zero, finite, zero_or_more

COPPER_RESISTIVITY = 1.724e-8
"""Resistivity of annealed copper at 20 degC [ohm m] (L4)."""
COPPER_COEFFICIENT = 0.00393
"""Relative growth of the resistance per kelvin, from 20 degC (L9)."""
ROOM = 293.15
"""20 degC [K]."""
_COLDEST, _HOTTEST = 173.15, 573.15


def copper_resistance(ohm_room: Size, kelvin: Size) -> Floats:
    """Resistance at a temperature, R_20 (1 + 0.00393 (T - 293.15 K)) [ohm]; any shapes that broadcast.

    Valid from -100 to 300 degC, else ValueError; the coefficient is that of annealed copper, purer copper has 0.00404.
    Source: common practice, no document (L9); the range too.
    """
    zero_or_more(ohm_room=ohm_room)
    t = np.asarray(kelvin)
    if not np.all((t >= _COLDEST) & (t <= _HOTTEST)):
        raise ValueError("the resistance of copper is known from -100 to 300 degC")
    return np.asarray(np.asarray(ohm_room) * (1.0 + COPPER_COEFFICIENT * (t - ROOM)))


def copper_resistivity(kelvin: Size) -> Floats:
    """Resistivity of annealed copper, 1.724e-8 (1 + 0.00393 (T - 293.15 K)) [ohm m]; any shape.

    Valid from -100 to 300 degC, else ValueError; purer copper has up to 3 % less. Source: relations L4 and L9.
    """
    return copper_resistance(COPPER_RESISTIVITY, kelvin)


def dc_resistance(length: Size, area: Size, resistivity: Size = COPPER_RESISTIVITY) -> Floats:
    """Resistance of a wire to direct current, rho l/A [ohm].

    Length [m], area of the conductor [m^2], resistivity [ohm m]; any shapes that broadcast. Valid for an even section.
    Check: 2300 ft of gauge 14 at 10.09 ohm cmil/ft: 5.651 ohm. Source: circuit theory.
    """
    zero_or_more(length=length)
    above_zero(area=area, resistivity=resistivity)
    finite(length=length, resistivity=resistivity)
    return np.asarray(np.asarray(resistivity) * np.asarray(length) / np.asarray(area))


def winding_length(turns: Size, mean_diameter: Size, pitch: Size = 0.0) -> Floats:
    """Length of wire in a winding without its leads, N sqrt((pi D)^2 + p^2) [m].

    N turns of mean diameter D [m], each advancing by the pitch p [m]; any shapes that broadcast. Valid for round turns.
    Source: derived (geometry).
    """
    above_zero(turns=turns, mean_diameter=mean_diameter)
    zero_or_more(pitch=pitch)
    return np.asarray(np.asarray(turns) * np.hypot(math.pi * np.asarray(mean_diameter), np.asarray(pitch)))


def wire_area(diameter: Size, strands: Size = 1.0) -> Floats:
    """Area of round conductors side by side, n pi d^2/4 [m^2]; diameter of one strand [m]; any shapes that broadcast.

    Valid for round conductors without their insulation. Source: derived (geometry).
    """
    above_zero(diameter=diameter, strands=strands)
    return np.asarray(0.25 * math.pi * np.asarray(strands) * np.asarray(diameter) ** 2)

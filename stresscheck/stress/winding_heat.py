"""Heat of a copper winding at its own temperature: the loss grows with it, and it with the loss.

Currents are those of the coldest winding, whose small resistance damps least; the heat they make is that of the
warm one. With P0 the loss at 20 degC, x = T - 20 degC and k = 0.00393/K:

    P = P0 (1 + k x),   x = x_ambient + R_th (P + P_other)   →   x = (x_ambient + R_th (P0 + P_other))/(1 - k R_th P0).

From k R_th P0 = 1 on nothing settles: thermal runaway. Source: common practice (copper), derived.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.physics.copper import COPPER_COEFFICIENT, ROOM


@dataclass(frozen=True, slots=True)
class Warmth:
    """Surroundings of a winding: coldest and hottest ambient [K], thermal resistance [K/W] or None."""

    coldest: float
    hottest: float
    thermal_resistance: float | None


def copper_factor(kelvin: float) -> float:
    """Resistance at a temperature over that at 20 degC."""
    return 1.0 + COPPER_COEFFICIENT * (kelvin - ROOM)


def warm_heat(cold_watt: Floats, other_watt: Floats, warmth: Warmth) -> tuple[Floats, Floats | None]:
    """Heat of the winding with its other losses [W], and its temperature [K] where a thermal resistance is known.

    cold_watt: R I^2 with R at the coldest ambient, shape [points]; grows with it, so bounds carry through. Infinite from
    a loop gain of 1 on.
    """
    at_room = cold_watt / copper_factor(warmth.coldest)
    if warmth.thermal_resistance is None:
        return at_room * copper_factor(warmth.hottest) + other_watt, None
    gain = COPPER_COEFFICIENT * warmth.thermal_resistance * at_room
    rise = (warmth.hottest - ROOM) + warmth.thermal_resistance * (at_room + other_watt)
    with np.errstate(divide="ignore", invalid="ignore"):
        above = np.where(gain < 1.0, rise / (1.0 - gain), np.inf)
        watt = at_room * (1.0 + COPPER_COEFFICIENT * above) + other_watt
    watt = np.where(cold_watt == 0.0, other_watt, watt)
    return watt, ROOM + above

"""Hot spot of a part whose loss grows with its temperature: where it settles, or that it doesn't."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from stresscheck.arrays import Flags, Floats
from stresscheck.physics.ranges import Size, above_zero, finite

SETTLED, RUNAWAY, ABOVE_CEILING, UNKNOWN = "settled", "runaway", "above-ceiling", "unknown"
_STEPS, _HALVINGS = 512, 60
_ALMOST = 1.0 - 1e-6
"""Gain from which a slope by differences, exact to some 1e-9, counts as 1."""
Loss = Callable[[Floats], Floats]
"""Temperatures of all points [K] to their losses [W], both [points]."""


@dataclass(frozen=True, slots=True)
class HotSpot:
    """What becomes of the temperature at every point.

    `kelvin` is NaN unless the outcome is SETTLED. `gain` is the loop gain R_th dP/dT there; where nothing settles, at
    the ceiling.
    """

    kelvin: Floats
    gain: Floats
    outcome: NDArray[np.str_]


def hot_spot(ambient: Size, thermal_resistance: Size, watt: Size, slope: Size = 0.0, at: Size | None = None) -> HotSpot:
    """T = T_a + R_th P(T), P = `watt` + `slope` (T - `at`): T = T_a + R_th P(T_a)/(1 - g), g = R_th `slope`.

    Temperatures [K], R_th [K/W], loss [W] and its slope [W/K]; `at` is the ambient unless stated; any shapes that
    broadcast. g >= 1 is RUNAWAY and has no temperature; NaN among the arguments is UNKNOWN; a loss below zero at the
    ambient raises ValueError. Valid while the loss is a straight line and R_th constant up to the hot spot.
    Check: tan delta growing by b per kelvin, P_0 b = slope: rise P_0 R/(1 - b P_0 R). Source: derived (C6).
    """
    sizes = ambient, thermal_resistance, watt, slope, ambient if at is None else at
    base, resistance, loss, steep, start = np.broadcast_arrays(*map(_floats, sizes))
    loss = loss + steep * (base - start)
    if np.any(resistance <= 0.0) or np.any(loss < 0.0):
        raise ValueError("thermal resistance has to be above zero, and the loss at the ambient zero or more")
    gain = resistance * steep
    open_loop = gain < 1.0
    kelvin = np.where(open_loop, base + resistance * loss / np.where(open_loop, 1.0 - gain, 1.0), np.nan)
    unknown = np.isnan(base + resistance * loss + gain)
    outcome = np.where(unknown, UNKNOWN, np.where(open_loop, SETTLED, RUNAWAY))
    return HotSpot(np.asarray(kelvin), np.asarray(gain), np.asarray(outcome))


def _floats(size: Size) -> Floats:
    return np.asarray(size, dtype=np.float64)


def hot_spot_of(loss: Loss, ambient: Size, thermal_resistance: Size, ceiling: Size) -> HotSpot:
    """T = T_a + R_th P(T) for any growing loss P, the lowest T from the ambient up that holds it.

    `loss` takes temperatures [K] of shape [points] and gives [W]; temperatures [K], R_th [K/W] that broadcast to
    [points]. Outcome RUNAWAY: no balance up to the ceiling and g >= 1 there, or one with g >= 1; ABOVE_CEILING: no
    balance up to the ceiling, but g < 1 there; UNKNOWN: the loss is NaN on the way. Valid for a continuous loss; two
    balances closer than 1/512 of the way to the ceiling are passed over, which only ever gives a hotter answer or none.
    Halved until the temperature is exact to rounding. Source: derived (bisection).
    """
    above_zero(thermal_resistance=thermal_resistance)
    finite(ambient=ambient, ceiling=ceiling, thermal_resistance=thermal_resistance)
    base, resistance, top = (np.atleast_1d(a) for a in np.broadcast_arrays(
        _floats(ambient), _floats(thermal_resistance), _floats(ceiling)))  # fmt: skip
    if not np.all(top > base):
        raise ValueError("the ceiling has to be above the ambient")

    def spare(kelvin: Floats) -> Floats:
        """Rise that the thermal resistance carries less what the loss makes: from zero on it cools."""
        return np.asarray(kelvin - base - resistance * loss(kelvin))

    low, high, found, unknown = _bracket(spare, base, top)
    for _ in range(_HALVINGS):
        middle = 0.5 * (low + high)
        cools = spare(middle) >= 0.0
        low, high = np.where(cools, low, middle), np.where(cools, middle, high)
    at = np.where(found, high, top)
    gain = _gain(loss, resistance, np.maximum(at - 1e-5 * at, base), np.minimum(at + 1e-5 * at, top))
    unknown = unknown | np.isnan(gain)
    settled = found & (gain < _ALMOST) & ~unknown
    rest = np.where(unknown, UNKNOWN, np.where(gain < _ALMOST, ABOVE_CEILING, RUNAWAY))
    return HotSpot(np.where(settled, at, np.nan), np.asarray(gain), np.where(settled, SETTLED, rest))


def _gain(loss: Loss, resistance: Floats, low: Floats, high: Floats) -> Floats:
    """R_th times the slope of the loss between two temperatures; infinite where the loss is."""
    watt = loss(high)
    with np.errstate(invalid="ignore"):
        slope = (watt - loss(low)) / (high - low)
    return np.asarray(resistance * np.where(np.isposinf(watt), np.inf, slope))


def _bracket(spare: Loss, base: Floats, top: Floats) -> tuple[Floats, Floats, Flags, Flags]:
    """Ends of the first step up from the ambient behind which it cools, whether there is one, where it's NaN before."""
    low, high = base.copy(), base.copy()
    found, unknown = np.zeros(base.shape, dtype=np.bool_), np.zeros(base.shape, dtype=np.bool_)
    for step in range(_STEPS + 1):
        kelvin = base + (top - base) * (step / _STEPS)
        left = spare(kelvin)
        going = ~found & ~unknown
        unknown = unknown | (going & np.isnan(left))
        found = found | (going & (left >= 0.0))
        low = np.where(going & ~found, kelvin, low)
        high = np.where(going, kelvin, high)
    return low, high, found, unknown

"""Permissible alternating voltage of a capacitor over frequency, and which of its ratings binds."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from stresscheck.arrays import Floats
from stresscheck.physics.ranges import Size, above_zero, finite, zero_or_more

ZONES = ("voltage", "loss", "current")
"""Names of the zones, in the order in which they bind as the frequency grows."""
_TAU = 2.0 * math.pi


@dataclass(frozen=True, slots=True)
class ZoneLimit:
    """Permissible voltage [V rms] and the name of the zone that sets it, of equal shape."""

    volt_rms: Floats
    zone: NDArray[np.str_]


@dataclass(frozen=True, slots=True)
class ZoneCorners:
    """Where the voltage zone ends (`f1`) and where the current zone begins (`f2`) [Hz]; equal: no loss zone."""

    f1: Floats
    f2: Floats


def permissible_voltage(
    hertz: Size, farad: Size, tan_delta: Size, volt_rms: Size, watt: Size, ampere_rms: Size
) -> ZoneLimit:
    """min(V_a, sqrt(P_max/(w C tan delta)), I_max/(w C)) [V rms] and the zone that binds; of equal ones the first.

    Frequency [Hz], capacitance [F], ratings V_a [V rms], P_max [W], I_max [A rms]; any shapes that broadcast. A rating
    that isn't known is infinite; not all three can be. Valid for one sine far below self-resonance; on log axes the
    slopes are 0, -1/2, -1. Source: derived; zones published for RF power ceramics (C1).
    """
    zero_or_more(hertz=hertz)
    _check(farad, tan_delta, volt_rms, watt, ampere_rms)
    susceptance = _TAU * np.asarray(hertz) * np.asarray(farad)
    with np.errstate(divide="ignore"):
        by_loss = np.sqrt(np.asarray(watt) / (susceptance * np.asarray(tan_delta)))
        by_current = np.asarray(ampere_rms) / susceptance
    limits = np.stack(np.broadcast_arrays(np.asarray(volt_rms, dtype=np.float64), by_loss, by_current))
    return ZoneLimit(np.asarray(limits.min(axis=0)), np.asarray(np.array(ZONES)[limits.argmin(axis=0)]))


def zone_corners(farad: Size, tan_delta: Size, volt_rms: Size, watt: Size, ampere_rms: Size) -> ZoneCorners:
    """f1 = P_max/(2 pi C tan delta V_a^2), f2 = I_max^2 tan delta/(2 pi C P_max) [Hz].

    If f1 > f2 the loss zone is empty and both are I_max/(2 pi C V_a). Arguments as for `permissible_voltage`. Valid
    where C and tan delta don't change with frequency. Source: derived (C1).
    """
    _check(farad, tan_delta, volt_rms, watt, ampere_rms)
    volt, power, flow = (np.asarray(size, dtype=np.float64) for size in (volt_rms, watt, ampere_rms))
    per_hertz, loss = _TAU * np.asarray(farad), np.asarray(tan_delta)
    known = np.isfinite(power)
    finite_power = np.where(known, power, 1.0)
    f1 = np.where(known, finite_power / (per_hertz * loss * volt * volt), np.inf)
    f2 = np.where(known, flow * flow * loss / (per_hertz * finite_power), 0.0)
    meeting = flow / (per_hertz * volt)
    return ZoneCorners(np.asarray(np.where(f1 > f2, meeting, f1)), np.asarray(np.where(f1 > f2, meeting, f2)))


def _check(farad: Size, tan_delta: Size, volt_rms: Size, watt: Size, ampere_rms: Size) -> None:
    above_zero(farad=farad, tan_delta=tan_delta, volt_rms=volt_rms, watt=watt, ampere_rms=ampere_rms)
    finite(farad=farad, tan_delta=tan_delta)
    if not np.all(np.isfinite(volt_rms) | np.isfinite(watt) | np.isfinite(ampere_rms)):
        raise ValueError("at least one of voltage, loss and current has to be rated")


def voltage_of_reactive_power(var: Size, hertz: Size, farad: Size) -> Floats:
    """Voltage at which a capacitor takes its rated reactive power, sqrt(S/(w C)) [V rms].

    Reactive power S [var], frequency [Hz], capacitance [F]; any shapes that broadcast. Valid for one sine.
    Source: circuit theory (C2).
    """
    zero_or_more(var=var)
    above_zero(hertz=hertz, farad=farad)
    return np.asarray(np.sqrt(np.asarray(var) / (_TAU * np.asarray(hertz) * np.asarray(farad))))


def reactive_power_of_peak(volt_peak: Size, hertz: Size, farad: Size) -> Floats:
    """Reactive power at a peak voltage, V_pk^2 w C/2 [var]; any shapes that broadcast.

    Peak voltage [V], frequency [Hz], capacitance [F]. Valid for one sine. Source: circuit theory (C2).
    """
    zero_or_more(volt_peak=volt_peak, hertz=hertz)
    above_zero(farad=farad)
    return np.asarray(0.5 * np.asarray(volt_peak) ** 2 * _TAU * np.asarray(hertz) * np.asarray(farad))

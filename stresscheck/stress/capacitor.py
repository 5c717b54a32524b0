"""Stresses of a capacitor, the inner capacitance with its series loss taken as the part."""

from __future__ import annotations

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.stress.seen import PartSeen, heat, peak, rms, square_mean
from stresscheck.stress.sharing import Share


def capacitor_stress(seen: PartSeen, share: Share) -> dict[str, Floats]:
    """All steady stresses of the worst unit, each of shape [points]; sizes in V, A, V/s, var, W.

    voltage_peak = |DC| + sum of peaks; voltage_rms of the AC part alone; slew_rate = sum of omega V;
    reactive_power = X I^2 / 2; dissipation = R I^2 / 2 at each frequency, and V^2/R in the leakage.
    Source: circuit theory.
    """
    main, groups = seen.main, seen.groups
    volt, ampere = main.volt * share.volt, main.ampere * share.ampere
    none = np.zeros_like(main.dc_volt)
    dc = np.where(main.dc_volt == 0.0, 0.0, main.dc_volt * share.dc_volt)
    return {
        "voltage_peak": peak(dc, volt),
        "voltage_peak_to_peak": 2.0 * peak(none, volt),
        "voltage_rms": rms(none, volt, groups),
        "current_peak": peak(none, ampere),
        "current_rms": rms(none, ampere, groups),
        "slew_rate": peak(none, volt * seen.omega[1]),
        "reactive_power": square_mean(none, main.root_var, groups) * share.volt * share.ampere,
        "dissipation": _dissipation(seen) * share.volt * share.ampere,
    }


def _dissipation(seen: PartSeen) -> Floats:
    total = heat(seen.main, seen.groups)
    if "leakage" in seen.branches:
        total = total + heat(seen.branches["leakage"], seen.groups)
    return total

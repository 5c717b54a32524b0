"""Stresses of a capacitor, the inner capacitance with its series loss taken as the part."""

from __future__ import annotations

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.stress.seen import PartSeen, heat, peak, rms, scaled, square_mean
from stresscheck.stress.sharing import Share


def capacitor_stress(seen: PartSeen, share: Share) -> dict[str, Floats]:
    """All steady stresses of the worst unit, each of shape [points]; sizes in V, A, V/s, var, W.

    voltage_peak with DC, the largest over time; voltage_rms of the AC part alone; slew_rate = sum of omega V of
    sines, else I/C at the peak current;
    reactive_power = X I^2 / 2; dissipation = R I^2 / 2 at each frequency, and V^2/R in the leakage.
    Source: circuit theory.
    """
    main, groups = seen.main, seen.groups
    volt, ampere = main.volt * share.volt, main.ampere * share.ampere
    none = np.zeros_like(main.dc_volt)
    dc = np.where(main.dc_volt == 0.0, 0.0, main.dc_volt * share.dc_volt)
    flow = peak(none, main.ampere_extremes)
    across = scaled(main.volt_extremes, share.volt)
    return {
        "voltage_peak": peak(dc, across),
        "voltage_peak_to_peak": across[0] + across[1],
        "voltage_rms": rms(none, volt, groups),
        "current_peak": flow * share.ampere,
        "current_rms": rms(none, ampere, groups),
        "slew_rate": _slew(seen, volt, flow * share.volt),
        "reactive_power": square_mean(none, main.root_var, groups) * share.volt * share.ampere,
        "dissipation": _dissipation(seen) * share.volt * share.ampere,
    }


def _slew(seen: PartSeen, volt: Floats, flow: Floats) -> Floats:
    """Fastest change of voltage: sum of omega V for sines, I/C for other courses."""
    if seen.sines:
        return np.asarray((volt * seen.omega[1]).sum(axis=0))
    return np.asarray(flow / (seen.value[0] * seen.scale))


def _dissipation(seen: PartSeen) -> Floats:
    total = heat(seen.main, seen.groups)
    if "leakage" in seen.branches:
        total = total + heat(seen.branches["leakage"], seen.groups)
    return total

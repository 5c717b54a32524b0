"""Stresses of an inductor: the winding's own current and the voltage across it."""

from __future__ import annotations

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.stress.seen import PartSeen, heat, peak, rms
from stresscheck.stress.winding_heat import Warmth, warm_heat


def inductor_stress(
    seen: PartSeen, turns: float | None, core_area: float | None, warmth: Warmth | None = None
) -> dict[str, Floats]:
    """All steady stresses, each of shape [points]; sizes in V, A, T, W.

    current_peak with DC, the largest over time, and current_rms with DC, both of the winding; flux_density = L I/(N A)
    at the peak current, where `turns` N and `core_area` A [m^2] are known; dissipation = R I^2 in the winding and V^2/R
    in the core's parallel resistance, the winding at its own temperature where `warmth` is known, and then its
    temperature too. Source: circuit theory.
    """
    main, groups = seen.main, seen.groups
    current = peak(main.dc_ampere, main.ampere_extremes)
    out = {
        "current_peak": current,
        "current_rms": rms(main.dc_ampere, main.ampere, groups),
        "voltage_peak": peak(main.dc_volt, main.volt_extremes),
        "voltage_rms": rms(main.dc_volt, main.volt, groups),
    }
    winding, core = heat(main, groups), _core(seen)
    out["dissipation"] = winding + core
    if warmth is not None:
        out["dissipation"], kelvin = warm_heat(winding, core, warmth)
        if kelvin is not None:
            out["temperature"] = kelvin
    if turns and core_area:
        out["flux_density"] = seen.value[1] * current / (turns * core_area)
    return out


def _core(seen: PartSeen) -> Floats:
    if "core_loss" in seen.branches:
        return heat(seen.branches["core_loss"], seen.groups)
    return np.zeros_like(seen.main.dc_ampere)

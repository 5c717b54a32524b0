"""Stresses of a resistor."""

from __future__ import annotations

from stresscheck.arrays import Floats
from stresscheck.stress.seen import PartSeen, heat, peak, rms, scaled
from stresscheck.stress.sharing import Share


def resistor_stress(seen: PartSeen, share: Share) -> dict[str, Floats]:
    """Dissipation [W], voltage peak and RMS with DC [V] of the worst unit, each of shape [points].

    Source: circuit theory.
    """
    main = seen.main
    volt, dc = main.volt * share.volt, main.dc_volt * share.volt
    return {
        "dissipation": heat(main, seen.groups) * share.volt * share.ampere,
        "voltage_peak": peak(dc, scaled(main.volt_extremes, share.volt)),
        "voltage_rms": rms(dc, volt, seen.groups),
    }

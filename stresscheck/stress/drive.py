"""Stresses of a drive: the current it must give and the power it must deliver."""

from __future__ import annotations

from stresscheck.arrays import Floats
from stresscheck.stress.seen import peak, rms


def drive_stress(
    ampere: Floats,
    extremes: tuple[Floats, Floats],
    dc_ampere: Floats,
    groups: tuple[int, ...],
    watt: Floats,
) -> dict[str, Floats]:
    """current_peak and current_rms [A] of the terminals, size of the real power [W] that it delivers or
    takes in, at its own frequencies and DC, behind its own resistance.

    ampere: peak at each line, [lines, points]; extremes: (high, low) over time without DC; dc_ampere, watt: [points].
    Source: circuit theory.
    """
    return {
        "current_peak": peak(dc_ampere, extremes),
        "current_rms": rms(dc_ampere, ampere, groups),
        "power": watt,
    }

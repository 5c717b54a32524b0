"""How much of a bank's voltage and current its worst unit takes."""

from __future__ import annotations

import math
from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Share:
    """Worst unit's part of the bank's AC voltage, DC voltage and current; 1 for a single part.

    `dc_volt` is NaN where nothing decides how direct voltage divides.
    """

    volt: float = 1.0
    dc_volt: float = 1.0
    ampere: float = 1.0


SINGLE = Share()
"""The share of a part that is no bank."""


def bank_share(in_series: int, in_parallel: int, tolerance: float, *, dc_divides: bool) -> Share:
    """Share of the unit that deviates by +t among others that deviate by -t.

    (1+t)/((1+t) + (n-1)(1-t)) of the string's voltage, for n equal units in series (the same of a bank's current in
    parallel), tolerance t as a fraction. Check: n = 5, t = 10 %: 17.0 % over an equal share.
    Source: derived from circuit theory; valid below the units' self-resonance.
    """
    volt, ampere = _worst(in_series, tolerance), _worst(in_parallel, tolerance)
    dc = volt if dc_divides or in_series == 1 else math.nan
    return Share(volt, dc, ampere)


def _worst(count: int, tolerance: float) -> float:
    return (1.0 + tolerance) / ((1.0 + tolerance) + (count - 1) * (1.0 - tolerance))

"""Drift of a part's value with its temperature, as a wider interval of the value."""

from __future__ import annotations

REFERENCES = (293.15, 298.15)
"""Temperatures at which declared values may hold [K]: 20 degC and 25 degC; data sheets use either, so both are taken."""


def drift_factors(per_kelvin: float, coldest: float, hottest: float) -> tuple[float, float]:
    """Smallest and largest value over the declared one, 1 + c (T - T_ref) for T from coldest to hottest [K].

    Both reference temperatures are allowed for. ValueError where the value would reach zero.
    Source: definition of a temperature coefficient; the references are common practice, no source.
    """
    ends = [1.0 + per_kelvin * (t - reference) for t in (coldest, hottest) for reference in REFERENCES]
    if not min(ends) > 0.0:
        raise ValueError("a temperature coefficient that takes the value to zero")
    return min(ends), max(ends)

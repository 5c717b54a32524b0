"""Reads one rating of a part: a number, a curve over frequency, or one over temperature."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

from stresscheck.limits.rated import Rated, at_temperature, number, over_frequency
from stresscheck.limits.rules import celsius

UNKNOWN_TEMPERATURE = (
    "the part's own temperature isn't known: give its thermal_resistance and a dissipation that can "
    "be computed, and site.ambient"
)


@dataclass(frozen=True, slots=True)
class Reading:
    """A rating as arrays. `largest`: top of its curve, or the number itself; `text`: as written.

    `why` is not empty where the rating gives nothing here; `curve` is None then.
    """

    key: str
    curve: Rated | None
    largest: float
    text: str
    why: str = ""


def read_rating(owner: str, key: str, value: Any, unit: str, kelvin: float | None) -> Reading:
    """Read the rating `key` of `owner` ("capacitor Ctank"), in SI, at `kelvin` where that matters."""
    by = getattr(value, "by", None)
    if by is None:
        return Reading(key, number(float(value)), float(value), written(value, unit))
    points = [(float(first), float(second)) for first, second in value.points]
    text = f"by {by}: " + ", ".join(
        f"{written(first, 'Hz' if by == 'frequency' else 'K')} {written(second, unit)}"
        for first, second in value.points
    )
    largest = max(point[1] for point in points)
    if by == "frequency":
        return Reading(key, over_frequency(points), largest, text)
    if kelvin is None:
        return Reading(
            key, None, largest, text, f"{key} of {owner} is stated by temperature, and {UNKNOWN_TEMPERATURE}"
        )
    here = at_temperature(points, kelvin)
    if math.isnan(here):
        span = f"from {celsius(points[0][0])} to {celsius(points[-1][0])}"
        why = f"{key} of {owner} is stated {span} only, and the part reaches {celsius(kelvin)}"
        return Reading(key, None, largest, text, why)
    return Reading(key, number(here), largest, f"{text}; at {celsius(kelvin)}")


def written(value: Any, unit: str) -> str:
    """A quantity as written in the design, or its SI figure where nothing was written."""
    text = getattr(value, "text", None)
    return text if isinstance(text, str) and text else f"{float(value):.6g} {unit}"


def lowest(part: Any) -> float | None:
    """Smallest resistance of a fixed resistor within its tolerance [ohm]; None for one that can be set.

    A unit's, where the part is a bank of equal units.
    """
    if getattr(part, "value", None) is None or isinstance(part.value, tuple):
        return None
    return float(part.span().low)

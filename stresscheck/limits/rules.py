"""Derating rules: what a policy makes of a rating. Each rule is one small frozen class with the same methods.

A rule turns a rated value into an allowed one, at a part's own temperature where it needs one. NaN means that
the document says nothing for this case; nothing is extrapolated.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Protocol

import numpy as np

ZERO_CELSIUS = 273.15


class Rule(Protocol):
    """What every rule answers. Temperatures in kelvin; `rated` and `largest` in the rating's SI unit."""

    @property
    def key(self) -> str:
        """The key that gives this rule in a policy file."""

    @property
    def for_temperature(self) -> bool:
        """True for a rule on a temperature rating, False for one on any other rating."""

    @property
    def needs_kelvin(self) -> bool:
        """True where the part's own temperature must be known."""

    def allowed(self, rated: float, largest: float, kelvin: float | None) -> float:
        """The derated value; NaN where the rule is silent. `largest`: top of the rating's own curve."""

    def fraction(self, kelvin: float | None) -> float | None:
        """allowed / rated where the rule is a plain fraction; None for the others."""

    def numbers(self, rated: float, largest: float, kelvin: float | None, unit: str) -> str:
        """The rule with its figures, for the working; empty where it is fraction x rated."""

    def describe(self) -> str:
        """The rule in words, for reports."""


@dataclass(frozen=True, slots=True)
class Fraction:
    """allowed = fraction x rated."""

    value: float
    key = "allowed_fraction"
    for_temperature = False
    needs_kelvin = False

    def allowed(self, rated: float, largest: float, kelvin: float | None) -> float:
        return self.value * rated

    def fraction(self, kelvin: float | None) -> float | None:
        return self.value

    def numbers(self, rated: float, largest: float, kelvin: float | None, unit: str) -> str:
        return ""

    def describe(self) -> str:
        return "the whole rating" if self.value == 1.0 else f"{self.value:g} of the rating"


@dataclass(frozen=True, slots=True)
class FractionOverTemperature:
    """allowed = fraction(T) x rated, straight lines between points (K, fraction); silent outside them.

    `holds_below`: the first fraction holds at lower temperatures too.
    """

    points: tuple[tuple[float, float], ...]
    holds_below: bool
    key = "allowed_fraction"
    for_temperature = False
    needs_kelvin = True

    def allowed(self, rated: float, largest: float, kelvin: float | None) -> float:
        fraction = self.fraction(kelvin)
        return math.nan if fraction is None else fraction * rated

    def fraction(self, kelvin: float | None) -> float | None:
        if kelvin is None or not kelvin <= self.points[-1][0]:
            return None
        if kelvin < self.points[0][0] and not self.holds_below:
            return None
        return interpolate(self.points, kelvin)

    def numbers(self, rated: float, largest: float, kelvin: float | None, unit: str) -> str:
        return ""

    def describe(self) -> str:
        points = ", ".join(f"{value:g} at {celsius(kelvin)}" for kelvin, value in self.points)
        return f"fraction of the rating by temperature: {points}, straight lines between"


@dataclass(frozen=True, slots=True)
class ParallelLine:
    """A line parallel to the rating's own over temperature: allowed = rated(T) - (1 - fraction) x largest.

    The same as T2 = T1 + fraction (T3 - T1), where the rating is full to T1 and zero at T3. A rating that is
    a number has no line: allowed = fraction x rated.
    """

    value: float
    key = "parallel_line_fraction"
    for_temperature = False
    needs_kelvin = False

    def allowed(self, rated: float, largest: float, kelvin: float | None) -> float:
        if rated == largest:
            return self.value * rated
        return max(0.0, rated - (1.0 - self.value) * largest)

    def fraction(self, kelvin: float | None) -> float | None:
        return None

    def numbers(self, rated: float, largest: float, kelvin: float | None, unit: str) -> str:
        if rated == largest:
            return ""
        return f"{rated:.6g} {unit} - {1.0 - self.value:g} x {largest:.6g} {unit}, not below zero"

    def describe(self) -> str:
        return f"{self.value:g} of the full rating, then parallel to the rating's own line over temperature"


@dataclass(frozen=True, slots=True)
class KelvinBelow:
    """allowed temperature = maximum - kelvin."""

    kelvin: float
    key = "kelvin_below_maximum"
    for_temperature = True
    needs_kelvin = False

    def allowed(self, rated: float, largest: float, kelvin: float | None) -> float:
        return rated - self.kelvin

    def fraction(self, kelvin: float | None) -> float | None:
        return None

    def numbers(self, rated: float, largest: float, kelvin: float | None, unit: str) -> str:
        return f"{celsius(rated)} - {self.kelvin:g} K"

    def describe(self) -> str:
        return f"{self.kelvin:g} K below the highest temperature" if self.kelvin else "the highest temperature"


@dataclass(frozen=True, slots=True)
class FractionOfCelsius:
    """allowed temperature = fraction x maximum in degC, less the allowance from rise to hot spot [K]."""

    value: float
    allowance: float
    key = "fraction_of_celsius"
    for_temperature = True
    needs_kelvin = False

    def allowed(self, rated: float, largest: float, kelvin: float | None) -> float:
        return self.value * (rated - ZERO_CELSIUS) + ZERO_CELSIUS - self.allowance

    def fraction(self, kelvin: float | None) -> float | None:
        return None

    def numbers(self, rated: float, largest: float, kelvin: float | None, unit: str) -> str:
        return f"{self.value:g} x {celsius(rated)} - {self.allowance:g} K"

    def describe(self) -> str:
        return f"{self.value:g} of the highest temperature in degC{_less(self.allowance)}"


@dataclass(frozen=True, slots=True)
class ClassTable:
    """allowed temperature by class: (class, hot spot) pairs [K], less the allowance; else silent."""

    classes: tuple[tuple[float, float], ...]
    allowance: float
    key = "class_table"
    for_temperature = True
    needs_kelvin = False

    def allowed(self, rated: float, largest: float, kelvin: float | None) -> float:
        for limit, hot_spot in self.classes:
            if math.isclose(rated, limit, abs_tol=1e-6):
                return hot_spot - self.allowance
        return math.nan

    def fraction(self, kelvin: float | None) -> float | None:
        return None

    def numbers(self, rated: float, largest: float, kelvin: float | None, unit: str) -> str:
        hot_spot = self.allowed(rated, largest, kelvin) + self.allowance
        return f"class {celsius(rated)}: {celsius(hot_spot)} - {self.allowance:g} K"

    def describe(self) -> str:
        return f"hot spot by insulation class{_less(self.allowance)}"


def interpolate(points: Sequence[tuple[float, float]], kelvin: float) -> float:
    """Straight lines between points; the ends are held (callers decide whether they may be)."""
    return float(np.interp(kelvin, [point[0] for point in points], [point[1] for point in points]))


def celsius(kelvin: float) -> str:
    """A temperature in degC as short text."""
    return f"{round(kelvin - ZERO_CELSIUS, 6):g} degC"


def _less(allowance: float) -> str:
    return f", less {allowance:g} K from measured rise to hot spot" if allowance else ""

"""What the fields of a design hold: figures in SI that remember how they were written."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any


class Quantity(float):
    """A figure in SI; `text` is how the file wrote it. Otherwise a float."""

    __slots__ = ("text",)
    text: str

    def __new__(cls, value: float, text: str) -> Quantity:
        made = super().__new__(cls, value)
        object.__setattr__(made, "text", text)
        return made

    def __setattr__(self, name: str, value: object) -> None:
        raise AttributeError("a quantity doesn't change")

    def __reduce__(self) -> tuple[type[Quantity], tuple[Any, ...]]:
        return Quantity, (float(self), self.text)


class Level(Quantity):
    """A level of a drive, or its offset: a figure whose `unit` is V or A."""

    __slots__ = ("unit",)
    unit: str

    def __new__(cls, value: float, text: str, unit: str) -> Level:
        made = float.__new__(cls, value)
        object.__setattr__(made, "text", text)
        object.__setattr__(made, "unit", unit)
        return made

    def __reduce__(self) -> tuple[type[Quantity], tuple[Any, ...]]:
        return Level, (float(self), self.text, self.unit)


@dataclass(frozen=True, slots=True)
class Curve:
    """Values over frequency [Hz] or temperature [K]; `points` in increasing order, at least two."""

    by: str
    points: tuple[tuple[Quantity, Quantity], ...]


@dataclass(frozen=True, slots=True)
class Tolerance:
    """Deviation from `low` (negative or zero) to `high`: fractions of the value, or SI where `absolute`."""

    low: float
    high: float
    absolute: bool
    text: str


@dataclass(frozen=True, slots=True)
class Span:
    """Smallest, nominal and largest value, SI."""

    low: float
    nominal: float
    high: float


Value = Quantity | tuple[Quantity, Quantity]


def span_of(value: Value, nominal: float | None, tolerance: Tolerance | None, middle: str = "geometric") -> Span:
    """Interval of a value with its tolerance. A pair is a range: the tolerance widens both of its ends.

    The nominal of a pair is `nominal`, or else its geometric mean (arithmetic for frequencies).
    """
    low, high = (float(value), float(value)) if isinstance(value, Quantity) else (float(value[0]), float(value[1]))
    if nominal is None:
        nominal = low if low == high else 0.5 * (low + high)
        if low != high and middle == "geometric" and low * high > 0.0:
            nominal = (low * high) ** 0.5 * (1.0 if low > 0.0 else -1.0)
    if tolerance is None:
        return Span(low, float(nominal), high)
    if tolerance.absolute:
        return Span(low + tolerance.low, float(nominal), high + tolerance.high)
    ends = [end * (1.0 + t) for end in (low, high) for t in (tolerance.low, tolerance.high)]
    return Span(min(ends), float(nominal), max(ends))

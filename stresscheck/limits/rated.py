"""A limit over frequency as arrays: a number, or straight lines on log-log axes that are silent elsewhere."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Rated:
    """A value at each frequency [Hz]: constant (`hertz` None), or a curve through printed points.

    `hertz`, `value`: read-only, equal length, frequencies increasing, values above zero in a curve; `scale`
    multiplies every value (a derating fraction keeps a log-log line straight).
    """

    hertz: Floats | None
    value: Floats
    scale: float = 1.0

    @property
    def constant(self) -> bool:
        """True where the value doesn't move with frequency."""
        return self.hertz is None

    @property
    def falling(self) -> bool:
        """True for a curve that falls and nowhere rises: its first value holds below its first point."""
        steps = np.diff(self.value)
        return self.hertz is not None and bool(np.all(steps <= 0.0) and np.any(steps < 0.0))

    def times(self, factor: float) -> Rated:
        """The same curve with every value multiplied."""
        return Rated(self.hertz, self.value, self.scale * factor)

    def root_times(self, factor: float) -> Rated:
        """Square root of the value times a factor: a log-log line stays straight."""
        return Rated(self.hertz, read_only(np.sqrt(self.value * self.scale * factor)))

    def at(self, hertz: Floats) -> Floats:
        """Value at each frequency [Hz], same shape; NaN where the curve is silent.

        v = exp of a straight line in log f between two printed points. Valid between the first and the last
        point, and below the first where the curve falls; elsewhere it says nothing, and nothing is
        extrapolated.
        """
        asked = np.asarray(hertz, dtype=np.float64)
        if self.hertz is None:
            return np.where(np.isnan(asked), np.nan, self.scale * self.value[0])
        return np.where(self._speaks(asked, asked), self.scale * self._line(asked), np.nan)

    def smallest(self, low: Floats, high: Floats) -> Floats:
        """Smallest value over each band [low, high] Hz, shape of `low`; NaN where part of it is silent.

        A straight line is smallest at an end, so the ends of the band and the printed points inside it
        suffice.
        """
        below, above = np.asarray(low, dtype=np.float64), np.asarray(high, dtype=np.float64)
        least = np.minimum(self.at(below), self.at(above))
        if self.hertz is None:
            return least
        for point, value in zip(self.hertz, self.value, strict=True):
            inside = (below < point) & (point < above)
            least = np.where(inside, np.minimum(least, self.scale * value), least)
        return np.where(self._speaks(below, above), least, np.nan)

    def _line(self, hertz: Floats) -> Floats:
        """v0 (v1/v0)^t, t = log(f/f0)/log(f1/f0): exact at printed points and flat pieces; ends held."""
        assert self.hertz is not None
        held = np.clip(np.nan_to_num(hertz, nan=self.hertz[0]), self.hertz[0], self.hertz[-1])
        piece = np.clip(np.searchsorted(self.hertz, held, side="right") - 1, 0, len(self.hertz) - 2)
        low, high = self.hertz[piece], self.hertz[piece + 1]
        start, end = self.value[piece], self.value[piece + 1]
        along = np.log(held / low) / np.log(high / low)
        return np.where(held == high, end, start * (end / start) ** along)

    def _speaks(self, low: Floats, high: Floats) -> NDArray[np.bool_]:
        assert self.hertz is not None
        first = 0.0 if self.falling else self.hertz[0]
        return np.asarray((low >= first) & (low <= high) & (high <= self.hertz[-1]))


def number(value: float) -> Rated:
    """A value that holds at every frequency."""
    return Rated(None, read_only(np.array([value], dtype=np.float64)))


def over_frequency(points: Sequence[tuple[float, float]]) -> Rated:
    """A curve from (Hz, SI value) pairs; ValueError unless frequencies rise and all are above zero."""
    hertz = np.array([point[0] for point in points], dtype=np.float64)
    value = np.array([point[1] for point in points], dtype=np.float64)
    if not (len(points) >= 2 and np.all(np.diff(hertz) > 0.0) and hertz[0] > 0.0 and np.all(value > 0.0)):
        raise ValueError("a curve over frequency needs two or more points, rising frequencies, values above zero")
    return Rated(read_only(hertz), read_only(value))


def at_temperature(points: Sequence[tuple[float, float]], kelvin: float) -> float:
    """Smallest value from the first printed temperature up to `kelvin`; NaN outside the printed points.

    Straight lines between (K, SI value) pairs. For a curve that falls this is its value at `kelvin`; where a
    curve rises, the part may be as cool as the first point, so the smallest value on the way counts.
    """
    first, last = points[0][0], points[-1][0]
    if not first <= kelvin <= last:
        return math.nan
    passed = [value for temperature, value in points if temperature <= kelvin]
    line = float(np.interp(kelvin, [point[0] for point in points], [point[1] for point in points]))
    return min([*passed, line])


def read_only(values: Floats) -> Floats:
    """The array itself, locked."""
    values.flags.writeable = False
    return values

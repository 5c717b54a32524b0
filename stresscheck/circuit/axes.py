"""The axes of the tolerance box: every value of the circuit that can vary, and those that stand still."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Floats


@dataclass(frozen=True, slots=True)
class Axis:
    """One value of the circuit in SI: its path in the design file, smallest, nominal and largest."""

    path: str
    low: float
    nominal: float
    high: float

    @property
    def varies(self) -> bool:
        """True where the interval has a width."""
        return self.high > self.low


@dataclass(frozen=True, slots=True)
class Axes:
    """All axes in reading order. A point is a row of values, one per axis: shape [points, axes]."""

    items: tuple[Axis, ...]

    def index(self, path: str) -> int:
        """Column of the axis with this path; KeyError where there is none."""
        for column, axis in enumerate(self.items):
            if axis.path == path:
                return column
        raise KeyError(path)

    @property
    def low(self) -> Floats:
        """Smallest values, shape [axes]."""
        return np.array([axis.low for axis in self.items])

    @property
    def nominal(self) -> Floats:
        """Nominal values, shape [axes]."""
        return np.array([axis.nominal for axis in self.items])

    @property
    def high(self) -> Floats:
        """Largest values, shape [axes]."""
        return np.array([axis.high for axis in self.items])

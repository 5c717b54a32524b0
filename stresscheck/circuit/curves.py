"""Loss curves over frequency as arrays: straight lines on log-log axes, silent outside the printed points."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.errors import CheckError


@dataclass(frozen=True, slots=True)
class LossCurve:
    """A loss (ohm or loss factor) at each frequency; a single value holds at every frequency.

    `hertz` and `value` are increasing-frequency arrays of equal length, read-only; `owner` names the part and key.
    """

    owner: str
    hertz: Floats | None
    value: Floats
    dc: float | None = None
    """Value at direct current where the curve moves, None where it says nothing there."""

    def check_band(self, low: float, high: float) -> None:
        """Raise CheckError where the curve says nothing about part of [low, high] Hz.

        Neither end is held: too large a loss would understate the stress at resonance.
        """
        if self.hertz is None:
            return
        if low < self.hertz[0] or high > self.hertz[-1]:
            raise CheckError(
                f"{self.owner} is stated from {self.hertz[0]:.6g} Hz to {self.hertz[-1]:.6g} Hz only, "
                f"and the drive runs from {low:.6g} Hz to {high:.6g} Hz"
            )

    def at(self, hertz: Floats) -> Floats:
        """Value at each frequency [Hz]; ends are held (callers check the band first)."""
        if self.hertz is None:
            return np.full(np.shape(hertz), float(self.value[0]))
        log = np.interp(np.log(hertz), np.log(self.hertz), np.log(self.value))
        return np.asarray(np.exp(log), dtype=np.float64)

    def range(self, low: Floats, high: Floats) -> tuple[Floats, Floats]:
        """Smallest and largest value over each band [low, high] Hz: at its ends or at a printed point inside."""
        ends = np.stack([self.at(low), self.at(high)])
        least, most = ends.min(axis=0), ends.max(axis=0)
        if self.hertz is not None:
            for point, value in zip(self.hertz, self.value, strict=True):
                inside = (low < point) & (point < high)
                least = np.where(inside, np.minimum(least, value), least)
                most = np.where(inside, np.maximum(most, value), most)
        return least, most

    @property
    def constant(self) -> bool:
        """True where the loss doesn't move with frequency."""
        return self.hertz is None

    @property
    def zero(self) -> bool:
        """True where no loss is declared."""
        return self.hertz is None and float(self.value[0]) == 0.0

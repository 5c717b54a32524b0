"""One limit: a rating, what the policy leaves of it, and where both figures stand."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from stresscheck.limits.rated import Rated
from stresscheck.working import Step

Floats = NDArray[np.float64]

_SYMBOLS = {
    "V": "V",
    "A": "I",
    "W": "P",
    "var": "S",
    "K": "T",
    "V/s": "dV/dt",
    "T": "B",
    "J": "E",
}


@dataclass(frozen=True, slots=True)
class Limit:
    """A rating and its derated value, over frequency. SI in `unit`.

    `rating_key`: the rating it comes from; `allowed_fraction`: None where the rule isn't a plain fraction;
    `rated_text`: the rating as written in the design; `rule`: the derating in words;
    `numbers`: the derating with its figures, empty where it is fraction x rated.
    """

    quantity: str
    unit: str
    rating_key: str
    allowed_fraction: float | None
    rating_source: str
    derating_source: str
    rated_text: str
    rated_curve: Rated
    allowed_curve: Rated
    rule: str
    numbers: str = ""

    def rated(self, hertz: Floats) -> Floats:
        """Full rating at each frequency [Hz], same shape; NaN where a curve is silent."""
        return self.rated_curve.at(hertz)

    def allowed(self, hertz: Floats) -> Floats:
        """Derated value at each frequency [Hz], same shape; NaN where a curve is silent.

        0 where the policy leaves nothing of the rating at the part's temperature.
        """
        return self.allowed_curve.at(hertz)

    def rated_smallest(self, low: Floats, high: Floats) -> Floats:
        """Smallest full rating over each band [low, high] Hz; NaN where any part of a band is silent."""
        return self.rated_curve.smallest(low, high)

    def allowed_smallest(self, low: Floats, high: Floats) -> Floats:
        """Smallest derated value over each band [low, high] Hz; NaN where any part of a band is silent."""
        return self.allowed_curve.smallest(low, high)

    @property
    def constant(self) -> bool:
        """True where the limit doesn't move with frequency."""
        return self.rated_curve.constant

    def silent_text(self) -> str:
        """Where the rating speaks, for a finding outside it; empty where it speaks everywhere."""
        hertz = self.rated_curve.hertz
        if hertz is None:
            return ""
        start = "up" if self.rated_curve.falling else f"from {hertz[0]:.6g} Hz"
        return f"{self.rating_key} is stated {start} to {hertz[-1]:.6g} Hz only"

    def steps(self, hertz: float) -> tuple[Step, ...]:
        """The working at one frequency: the rating, then what is allowed of it; empty where silent."""
        at = np.array([hertz], dtype=np.float64)
        rated, allowed = float(self.rated(at)[0]), float(self.allowed(at)[0])
        if math.isnan(rated) or math.isnan(allowed):
            return ()
        symbol = _SYMBOLS.get(self.unit, self.quantity)
        return (
            Step(
                f"{symbol}_rated",
                self._rated_formula(),
                self._rated_numbers(hertz),
                rated,
                self.unit,
                self.rating_source,
            ),
            Step(
                f"{symbol}_allowed",
                self._allowed_formula(symbol),
                self.numbers or f"{allowed / rated if rated else 0.0:.6g} x {rated:.6g} {self.unit}",
                allowed,
                self.unit,
                self.derating_source,
            ),
        )

    def _rated_formula(self) -> str:
        if self.constant:
            return f"rating {self.rating_key}, as declared"
        return f"rating {self.rating_key}: v0 (v1/v0)^(log(f/f0)/log(f1/f0)) between printed points"

    def _rated_numbers(self, hertz: float) -> str:
        if self.constant:
            return self.rated_text
        return f"{self.rated_text}; at f = {hertz:.6g} Hz"

    def _allowed_formula(self, symbol: str) -> str:
        return self.rule if self.numbers else f"fraction x {symbol}_rated"

"""Shape of a drive over one period: its harmonics, its exact course, and what the harmonics up to an order leave.

Relative to the peak level of the drive. The angle is that of the fundamental, zero where the fundamental peaks:
a square is high around zero, a triangle peaks at zero. Source: Fourier series, circuit theory.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Floats

DENSE = 4096
"""Points of a period on which the largest rest of a waveform is read."""
FAR = 20_000
"""Order up to which sums over the rest are carried out; beyond it they are bounded by an integral."""


@dataclass(frozen=True, slots=True)
class Waveform:
    """`kind`: "sine", "square" (high for `duty` of the period), "triangle" or "listed" (order, size, phase [rad])."""

    kind: str = "sine"
    duty: float = 0.5
    listed: tuple[tuple[int, float, float], ...] = ()

    @property
    def endless(self) -> bool:
        """True where harmonics go on without end."""
        return self.kind in ("square", "triangle")

    @property
    def mean(self) -> float:
        """Mean over a period: 2 duty - 1 for a square."""
        return 2.0 * self.duty - 1.0 if self.kind == "square" else 0.0

    def weight(self, order: int) -> complex:
        """Complex size of a harmonic, peak: 4 sin(n pi d)/(n pi) of a square, 8/(n pi)^2 (odd) of a triangle."""
        if self.kind == "square":
            return complex(4.0 / (math.pi * order) * math.sin(math.pi * order * self.duty))
        if self.kind == "triangle":
            return complex(8.0 / (math.pi * order) ** 2) if order % 2 else 0j
        if self.kind == "sine":
            return 1.0 + 0j if order == 1 else 0j
        return sum((s * complex(math.cos(p), math.sin(p)) for n, s, p in self.listed if n == order), 0j)

    def orders(self, most: int) -> tuple[int, ...]:
        """Orders up to `most` with a size above rounding; of listed harmonics all."""
        if self.kind == "listed":
            return tuple(sorted(n for n, size, _ in self.listed if size > 0.0))
        return tuple(n for n in range(1, most + 1) if abs(self.weight(n)) > 1e-9)

    def rms(self) -> float:
        """Root of the mean square of everything but the mean."""
        if self.kind == "square":
            return math.sqrt(1.0 - self.mean**2)
        if self.kind == "triangle":
            return 1.0 / math.sqrt(3.0)
        return math.sqrt(0.5 * sum(abs(self.weight(n)) ** 2 for n in self.orders(1)))

    def edges(self) -> tuple[float, ...]:
        """Angles at which a square jumps [rad]."""
        return (-math.pi * self.duty, math.pi * self.duty) if self.kind == "square" else ()

    def rest(self, angle: Floats, orders: tuple[int, ...]) -> Floats:
        """Exact course less its mean and the harmonics `orders`, at each angle; zero for what has no end to it.

        At an edge the value before it is taken for an angle a little below, the value after it for one a little above.
        """
        if not self.endless:
            return np.zeros_like(angle)
        turn = np.mod(angle + math.pi, 2.0 * math.pi) - math.pi
        if self.kind == "square":
            exact = np.where(np.abs(turn) < math.pi * self.duty, 1.0, -1.0) - self.mean
        else:
            exact = 1.0 - 2.0 * np.abs(turn) / math.pi
        summed = sum((self.weight(n).real * np.cos(n * angle) for n in orders), np.zeros_like(angle))
        return np.asarray(exact - summed)

    def rest_integral(self, angle: Floats, orders: tuple[int, ...]) -> Floats:
        """Integral of the rest over the angle, without a mean: sum over the orders left out of size sin(n a)/n."""
        if not self.endless:
            return np.zeros_like(angle)
        turn = np.mod(angle + math.pi, 2.0 * math.pi) - math.pi
        if self.kind == "square":
            edge = math.pi * self.duty
            inside = np.clip(turn, -edge, edge)
            exact = (1.0 - self.mean) * inside - (1.0 + self.mean) * (turn - inside)
        else:
            exact = turn - turn * np.abs(turn) / math.pi
        summed = sum((self.weight(n).real * np.sin(n * angle) / n for n in orders), np.zeros_like(angle))
        return np.asarray(exact - summed)

    def rest_peak(self, orders: tuple[int, ...]) -> float:
        """Largest size of the rest, read on a dense grid and at the edges."""
        if not self.endless:
            return 0.0
        tiny = 1e-12
        ends = np.array([e + side for e in self.edges() for side in (-tiny, tiny)])
        grid = np.concatenate([np.linspace(-math.pi, math.pi, DENSE), ends])
        top = max(orders, default=0)
        return float(np.abs(self.rest(grid, orders)).max()) * (1.0 + math.pi * top / DENSE)

    def rest_rms(self, orders: tuple[int, ...]) -> float:
        """Root of the mean square of the rest."""
        square = self.rms() ** 2 - 0.5 * sum(abs(self.weight(n)) ** 2 for n in orders)
        return math.sqrt(max(square, 0.0)) if self.endless else 0.0

    def rest_sum(self, orders: tuple[int, ...], fall: int) -> float:
        """Upper bound of the sum over the remaining orders of size / order^fall; infinite where it has no end."""
        if not self.endless:
            return 0.0
        power = fall + (2 if self.kind == "triangle" else 1)
        if power < 2:
            return math.inf
        top = max(orders, default=0)
        n = np.arange(top + 1, FAR + 1)
        size = 4.0 / (np.pi * n) * np.abs(np.sin(np.pi * n * self.duty))
        if self.kind == "triangle":
            size = np.where(n % 2 == 1, 8.0 / (np.pi * n) ** 2, 0.0)
        factor = 4.0 / math.pi if self.kind == "square" else 8.0 / math.pi**2
        beyond = factor * FAR ** (1 - power) / (power - 1)
        return float((size / n.astype(np.float64) ** fall).sum() + beyond)


SINE = Waveform()
"""The plain drive."""

"""Impedance of each kind of branch, at points and as intervals over a piece of a band.

Every branch is z = r + jx in series. At one frequency an interval of z is given as a sum of *segments*: pairs of
complex ends whose sum covers every z the box holds, and along each of which z is a straight line. Straight lines are
what the corner rule of the enclosures rests on. The ends are such that omega z (capacitors) or z (others) is a
straight line in omega too. A loss that moves with frequency is read over the whole piece of the band.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Complexes, Floats
from stresscheck.circuit.curves import LossCurve

Segment = tuple[Complexes, Complexes]
Band = tuple[Floats, Floats]
"""Smallest and largest frequency of a piece of the band [Hz]."""
TAU = 2.0 * np.pi


@dataclass(frozen=True, slots=True)
class Powers:
    """Largest weights of a branch's power over a piece of the band: R <= `ohm` + `watt` u, |X| <= `var` u, where u is
    what the impedance is linear in: 1/C, L or R."""

    ohm: Floats
    watt: Floats
    var: Floats


@dataclass(frozen=True, slots=True)
class ResistorLaw:
    """z = scale * R, R in ohm."""

    scale: float = 1.0

    def ohm(self, value: Floats, omega: Floats) -> Complexes:
        """z [ohm] at each point, from R [ohm] and omega [rad/s], shapes [P]."""
        return self.scale * value + 0j * omega

    def segments(self, value: tuple[Floats, Floats], omega: Floats, piece: Band) -> tuple[Segment, ...]:
        """One segment from the smallest to the largest resistance."""
        return ((self.scale * value[0] + 0j, self.scale * value[1] + 0j),)

    def powers(self, piece: Band, omega: tuple[Floats, Floats]) -> Powers:
        """R = scale u with u = R."""
        rate = np.full_like(omega[1], self.scale)
        return Powers(np.zeros_like(rate), rate, np.zeros_like(rate))

    def dc_ohm(self, value: Floats) -> Floats | None:
        """Resistance at omega = 0."""
        return self.scale * value

    def check_band(self, low: float, high: float) -> None:
        """A resistance holds at every frequency."""


@dataclass(frozen=True, slots=True)
class CapacitorLaw:
    """z = esr(f) + (tan d(f) - j) / (omega * scale * C): capacitance in series with its loss (series form)."""

    loss_factor: LossCurve
    esr: LossCurve
    scale: float = 1.0

    def ohm(self, value: Floats, omega: Floats) -> Complexes:
        """z [ohm] at each point, from C [F] and omega [rad/s], shapes [P]."""
        hertz = omega / TAU
        reactance = 1.0 / (omega * value * self.scale)
        return self.esr.at(hertz) / self.scale + (self.loss_factor.at(hertz) - 1j) * reactance

    def segments(self, value: tuple[Floats, Floats], omega: Floats, piece: Band) -> tuple[Segment, ...]:
        """One straight line in 1/C; a loss that moves with frequency is a segment of its own."""
        least, most = 1.0 / (omega * value[1] * self.scale), 1.0 / (omega * value[0] * self.scale)
        loss_low, loss_high = self.loss_factor.range(*piece)
        esr_low, esr_high = (end / self.scale for end in self.esr.range(*piece))
        if np.array_equal(loss_low, loss_high) and np.array_equal(esr_low, esr_high):
            return ((esr_low + (loss_low - 1j) * least, esr_high + (loss_high - 1j) * most),)
        loss = (esr_low + loss_low * least + 0j, esr_high + loss_high * most + 0j)
        return ((-1j * least, -1j * most), loss)

    def powers(self, piece: Band, omega: tuple[Floats, Floats]) -> Powers:
        """R = esr + tan d u/omega, |X| = u/omega with u = 1/C."""
        rate = 1.0 / (omega[0] * self.scale)
        return Powers(self.esr.range(*piece)[1] / self.scale, self.loss_factor.range(*piece)[1] * rate, rate)

    def dc_ohm(self, value: Floats) -> Floats | None:
        """None: no direct current passes."""
        return None

    def check_band(self, low: float, high: float) -> None:
        """Raise CheckError where a loss isn't stated over the whole band [Hz]."""
        self.loss_factor.check_band(low, high)
        self.esr.check_band(low, high)


@dataclass(frozen=True, slots=True)
class InductorLaw:
    """z = R(f) + kappa * L + j omega L; kappa = 2 pi q_at / q [rad/s] where the loss is declared as a Q."""

    resistance: LossCurve
    kappa: float = 0.0

    def ohm(self, value: Floats, omega: Floats) -> Complexes:
        """z [ohm] at each point, from L [H] and omega [rad/s], shapes [P]."""
        return self.resistance.at(omega / TAU) + (self.kappa + 1j * omega) * value

    def segments(self, value: tuple[Floats, Floats], omega: Floats, piece: Band) -> tuple[Segment, ...]:
        """One straight line in L; a resistance that moves with frequency is a segment of its own."""
        low, high = self.resistance.range(*piece)
        slope = self.kappa + 1j * omega
        if np.array_equal(low, high):
            return ((low + slope * value[0], high + slope * value[1]),)
        return ((slope * value[0], slope * value[1]), (low + 0j, high + 0j))

    def powers(self, piece: Band, omega: tuple[Floats, Floats]) -> Powers:
        """R = R(f) + kappa u, |X| = omega u with u = L."""
        return Powers(self.resistance.range(*piece)[1], np.full_like(omega[1], self.kappa), omega[1])

    def dc_ohm(self, value: Floats) -> Floats | None:
        """Resistance at omega = 0; NaN where only a curve is declared, for it is silent there."""
        if not self.resistance.constant:
            return np.full_like(value, np.nan if self.resistance.dc is None else self.resistance.dc)
        return np.asarray(self.resistance.value[0] + self.kappa * value)

    def check_band(self, low: float, high: float) -> None:
        """Raise CheckError where the resistance isn't stated over the whole band [Hz]."""
        self.resistance.check_band(low, high)


Law = ResistorLaw | CapacitorLaw | InductorLaw

"""What a reviewer wants to know of a state besides stresses: its resonances and what its drives deliver."""

from __future__ import annotations

import math
from dataclasses import dataclass

from stresscheck.circuit.laws import TAU
from stresscheck.circuit.modes import natural_modes
from stresscheck.circuit.network import Network
from stresscheck.circuit.phasors import phasors
from stresscheck.stress.sizes import terminal_ampere, terminal_volt

IN_PHASE = 1e-9
"""Phase angles below this [rad] count as none."""


@dataclass(frozen=True, slots=True)
class Resonance:
    """A natural mode of a state with nominal values; `q` and the rest None where the mode has no loss.

    `bandwidth_hertz` = |Re s|/pi; `ring_time_s` = 1/|Re s|; `energy` lists (part, share of the stored energy),
    largest first, shares adding to 1.
    """

    state: str
    hertz: float
    q: float | None
    bandwidth_hertz: float
    ring_time_s: float | None
    energy: tuple[tuple[str, float], ...]


@dataclass(frozen=True, slots=True)
class DriveReport:
    """What a drive delivers at its own frequency, nominal values in the middle of its band; DC isn't counted here.

    `phase_degrees`: by how much the current lags the voltage; `side`: "inductive" (current lags), "capacitive"
    (current leads), or "in phase"; powers: real is the mean, reactive and apparent are peak phasor products / 2.
    """

    state: str
    drive: str
    hertz: float
    volt_peak: float
    ampere_peak: float
    real_watt: float
    reactive_var: float
    apparent_va: float
    phase_degrees: float
    side: str


def resonances(network: Network, state: str) -> tuple[Resonance, ...]:
    """Natural modes with every value nominal, lowest frequency first."""
    found = []
    for mode in natural_modes(network, network.axes.nominal):
        decay = -mode.pole.real
        found.append(
            Resonance(
                state, mode.hertz, mode.q, max(decay, 0.0) / math.pi, 1.0 / decay if decay > 0.0 else None, mode.energy
            )
        )
    return tuple(found)


def drive_reports(network: Network, state: str) -> tuple[DriveReport, ...]:
    """Current, powers and phase of every drive at its terminals; drives whose point has no solution are left out."""
    found = []
    seen = [phasors(network, network.axes.nominal[None], line) for line in network.lines]
    for index, source in enumerate(network.sources):
        at = seen[source.line]
        volt = complex(terminal_volt(network, index, at)[0])
        ampere = complex(terminal_ampere(network, network.lines[source.line], at)[0, index])
        power = 0.5 * volt * ampere.conjugate()
        if not math.isfinite(abs(power)):
            continue
        angle = math.atan2(power.imag, power.real) if abs(power) > 0.0 else 0.0
        side = "in phase" if abs(angle) < IN_PHASE else "inductive" if angle > 0.0 else "capacitive"
        found.append(
            DriveReport(
                state,
                source.name,
                float(at.omega[0] / TAU),
                abs(volt),
                abs(ampere),
                power.real,
                power.imag,
                abs(power),
                math.degrees(angle),
                side,
            )
        )
    return tuple(found)

"""The working of a stress at its worst point, and what carries it: figures that a reviewer can redo."""

from __future__ import annotations

import math

from stresscheck.arrays import Floats
from stresscheck.circuit.direct import direct, has_offset
from stresscheck.circuit.laws import TAU
from stresscheck.circuit.modes import Mode, natural_modes
from stresscheck.circuit.network import Network
from stresscheck.circuit.phasors import Phasors, phasors
from stresscheck.findings.checks import Check
from stresscheck.stress.sizes import only_sines
from stresscheck.working import Step

THEORY = "circuit theory"
NEAR = 3.0
"""A drive within this many bandwidths of a resonance is driven by it: own decision, for wording only."""
WORTH = 2.0
"""A gain below this isn't named as a reason: own decision, for wording only."""


def reason_for(network: Network, check: Check, point: Floats) -> str:
    """Gain times drive where a resonance carries the stress; empty where it is plain."""
    seen, drive = _single_drive(network, point)
    place = network.branch_of(check.part)
    if place is None:
        place = network.branch_of(check.part, "source")
    if seen is None or place is None or drive <= 0.0:
        return ""
    hertz = float(seen.omega[0] / TAU)
    near = [m for m in natural_modes(network, point) if distance(m, hertz) <= NEAR]
    if not near:
        return ""
    mode = min(near, key=lambda m: abs(m.hertz - hertz))
    q = "no loss" if mode.q is None else f"Q {mode.q:.4g}"
    gain = abs(seen.volt[0, place]) / drive
    if gain < WORTH:
        return f"at the resonance {_text(mode.hertz, 'Hz')} ({q})"
    return f"voltage gain {gain:.4g} x drive {_text(drive, 'V')} peak, at the resonance {_text(mode.hertz, 'Hz')} ({q})"


def distance(mode: Mode, hertz: float) -> float:
    """Distance from a resonance in bandwidths; the bandwidth at least a millionth, for modes without loss."""
    bandwidth = max(abs(mode.pole.real) / math.pi, 1e-6 * mode.hertz)
    return abs(mode.hertz - hertz) / bandwidth


def carriers_of(network: Network, point: Floats) -> tuple[str, ...]:
    """Which parts carry the resonance that the drives meet at a point, by their share of its energy; empty without."""
    found = []
    modes = natural_modes(network, point)
    for line in network.lines:
        hertz = float(line.hertz(point[None])[0])
        near = [m for m in modes if distance(m, hertz) <= NEAR]
        if near:
            mode = min(near, key=lambda m: abs(m.hertz - hertz))
            shares = ", ".join(f"{part} {100.0 * share:.0f} %" for part, share in mode.energy if share >= 0.01)
            found.append(f"the resonance at {_text(mode.hertz, 'Hz')} is carried by {shares}")
    return tuple(found)


def _single_drive(network: Network, point: Floats) -> tuple[Phasors | None, float]:
    """Phasors and peak drive voltage where a single voltage drive acts; (None, 0) otherwise."""
    if len(network.sources) != 1 or network.sources[0].branch is None:
        return None, 0.0
    seen = phasors(network, point[None], network.lines[0])
    return seen, float(abs(seen.level[0, 0]))


def steps_for(network: Network, check: Check, point: Floats, stress: float, *, gated: bool = False) -> tuple[Step, ...]:
    """Formula, numbers and result from the point's values to the stress, one line at a time.

    The branch phasors are what the nodal equations give at the point; everything after them is arithmetic. Of many
    harmonics those that carry most are shown.
    """
    place = network.branch_of(check.part)
    if place is None:
        place = network.branch_of(check.part, "source")
    if place is None:
        return ()
    steps: list[Step] = []
    for number, seen in _leading(network, point, place):
        tag = "" if len(network.lines) == 1 else f"_{number}"
        hertz = float(seen.omega[0] / TAU)
        z, volt, ampere = (complex(v[0, place]) for v in (seen.ohm, seen.volt, seen.ampere))
        at = f"f = {_text(hertz, 'Hz')}"
        steps.append(
            Step(f"Z{tag}", "R + jX of the part", f"{at}: {z.real:.6g} {z.imag:+.6g}j ohm", abs(z), "ohm", THEORY)
        )
        steps.append(Step(f"I{tag}", "peak, from the nodal equations at the point", at, abs(ampere), "A", THEORY))
        if network.branch_of(check.part) is not None:
            formula, numbers = f"I{tag} |Z{tag}|", f"{abs(ampere):.6g} A x {abs(z):.6g} ohm"
            if any(place in (c.first, c.second) for c in network.couplings):
                formula, numbers = "peak, with the voltage induced by coupled coils", at
            steps.append(Step(f"V{tag}", formula, numbers, abs(volt), "V", THEORY))
    steps += _direct_steps(network, check, point, place)
    formula, numbers = _formula(check, network, gated=gated), "from the lines above"
    if len(network.lines) > SHOWN:
        numbers += f" and {len(network.lines) - SHOWN} more"
    steps.append(Step(check.quantity, formula, numbers, stress, check.unit, THEORY))
    return tuple(steps)


def _direct_steps(network: Network, check: Check, point: Floats, place: int) -> list[Step]:
    """Direct voltage or current of a part, where a drive has a direct part."""
    if not has_offset(network):
        return []
    still = direct(network, point[None])
    if check.quantity.startswith("voltage"):
        return [Step("V_dc", "from the resistances and offsets", "f = 0", float(still.volt[0, place]), "V", THEORY)]
    return [Step("I_dc", "from the resistances and offsets", "f = 0", float(still.ampere[0, place]), "A", THEORY)]


SHOWN = 6
"""Lines of which the phasors are shown, those with the largest currents in the part."""


def _leading(network: Network, point: Floats, place: int) -> list[tuple[int, Phasors]]:
    """The lines to show, by number, each with its phasors at the point."""
    seen = [(number, phasors(network, point[None], line)) for number, line in enumerate(network.lines, start=1)]
    if len(seen) <= SHOWN:
        return seen
    ranked = sorted(seen, key=lambda item: -abs(complex(item[1].ampere[0, place])))[:SHOWN]
    return sorted(ranked, key=lambda item: item[0])


def _formula(check: Check, network: Network, *, gated: bool) -> str:
    """How a stress follows from the peaks of voltage and current, in words of arithmetic."""
    total = "" if len(network.lines) == 1 else ", summed over the frequencies"
    known = {
        "voltage_peak": "|V_dc| + V",
        "voltage_peak_to_peak": "2 V",
        "voltage_rms": "V / sqrt(2)" if check.kind == "capacitor" else "sqrt(V_dc^2 + V^2/2)",
        "current_peak": "|I_dc| + I",
        "current_rms": "sqrt(I_dc^2 + I^2/2)",
        "slew_rate": "2 pi f V",
        "reactive_power": "|X| I^2 / 2",
        "dissipation": "R I^2 / 2 (+ V^2/(2 R) in parallel losses, + DC)",
        "temperature": "ambient + R_th P",
        "flux_density": "L I / (N A)",
        "power": "Re(V I*) / 2",
    }
    if check.kind == "inductor":
        known["dissipation"] = "R I^2 / 2, R at the winding's own temperature (+ V^2/(2 R) in the core, + DC)"
        known["temperature"] = "ambient + R_th P, P growing with it: (x_ambient + R_th P_20)/(1 - 0.00393 R_th P_20)"
    peaks = {
        "voltage_peak": "largest |V_dc + v(t)|", "voltage_peak_to_peak": "largest v(t) - smallest v(t)",
        "current_peak": "largest |I_dc + i(t)|", "slew_rate": "largest |i(t)| / C",
        "flux_density": "L (largest |I_dc + i(t)|) / (N A)",
    }  # fmt: skip
    if gated:
        way = " over the bursts, first from rest and then with what is left of the ringing"
        mean = f"{known[check.quantity]} with the RMS over the gating period"
        return peaks[check.quantity] + way if check.quantity in peaks else mean
    if check.quantity in peaks and not only_sines(network):
        return peaks[check.quantity] + " over a period, all harmonics put together with their phases"
    return known[check.quantity] + total


def _text(value: float, unit: str) -> str:
    """A figure with an SI prefix, four digits: for sentences only."""
    for factor, prefix in ((1e9, "G"), (1e6, "M"), (1e3, "k"), (1.0, ""), (1e-3, "m"), (1e-6, "u")):
        if abs(value) >= factor:
            return f"{value / factor:.4g} {prefix}{unit}"
    return f"{value:.4g} {unit}"

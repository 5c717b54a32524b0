"""A drive that is switched on and off periodically: peaks and RMS of the periodic state, ring-down included.

With F(t) the complex envelope of a response, the on phase starts from what is left of the ringing and the off phase
rings down; after a period everything repeats, up to the phase that the drive's carrier has gained against the period.
That phase is seldom controlled, so several are tried and the largest counts, the free-running carrier among them.
Source: derived; check: RMS at resonance, figures of the relations for gated drives.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Complexes, Floats
from stresscheck.circuit.direct import Direct
from stresscheck.circuit.network import Network
from stresscheck.circuit.nodal import branch_ohm
from stresscheck.circuit.phasors import phasors
from stresscheck.circuit.roles import Roles
from stresscheck.errors import CheckError
from stresscheck.stress.sizes import Sizes, terminal_ampere
from stresscheck.transient.carried import line_charge, vector
from stresscheck.transient.events import Stage, stage
from stresscheck.transient.one_resonance import OneResonance
from stresscheck.transient.swing import Happening, Swing, Terms, largest

PHASES = 8
"""Phases between bursts that are tried, beside that of a carrier that runs on."""


@dataclass(frozen=True, slots=True)
class Gate:
    """Seconds of the on phase and of the whole period."""

    on: float
    period: float


@dataclass(frozen=True, slots=True)
class Burst:
    """Per response: largest value, its ceiling, and RMS over the period, [responses] each."""

    peak: Floats
    ceiling: Floats
    rms: Floats


def burst(stage_on: Stage, gate: Gate) -> Burst:
    """Peaks and RMS of every response at one point: first burst from rest, and periodic state for every phase."""
    network, point = stage_on.network, stage_on.point
    line = network.lines[0]
    at = phasors(network, point[None], line)
    flow = terminal_ampere(network, line, at)[0]
    driven = np.concatenate([at.ampere[0], at.volt[0], at.node[0], flow])
    ring = stage_on.ring
    held = vector(network, ring.motion.reactive, line_charge(network, point, line, at))
    steady = ring.inverse[0] @ (ring.motion.settle[0] @ held)
    omega, pole = float(at.omega[0]), ring.pole[0]
    turned, on, off = np.exp(1j * omega * gate.on), np.exp(pole * gate.on), np.exp(pole * (gate.period - gate.on))
    gained = np.append(omega * gate.period, 2.0 * np.pi * np.arange(PHASES) / PHASES)
    starts = [np.zeros_like(steady)]
    starts += [steady * off * (turned - on) / (np.exp(1j * g) - on * off) for g in gained]
    peak = ceiling = np.zeros(len(driven))
    mean = np.zeros(len(driven))
    for number, start in enumerate(starts):
        first = Terms(
            np.concatenate([driven[:, None], stage_on.out * (start - steady)], axis=1), np.append(1j * omega, pole)
        )
        end = steady * turned + (start - steady) * on
        second = Terms(stage_on.out * end, pole)
        for terms, length in ((first, gate.on), (second, gate.period - gate.on)):
            seen = largest(_alone(terms, omega), length)
            peak, ceiling = np.maximum(peak, seen.value), np.maximum(ceiling, seen.ceiling)
        if number:
            square = _square(first, gate.on) + _square(second, gate.period - gate.on)
            mean = np.maximum(mean, square / (2.0 * gate.period))
    return Burst(peak, ceiling, np.sqrt(mean))


def _alone(terms: Terms, omega: float) -> Happening:
    responses = len(terms.coefficient)
    none = np.zeros((responses, 0), dtype=np.complex128)
    return Happening(
        (Swing(((1, terms),), omega),), Terms(none, none.reshape(-1)[:0]), np.zeros(responses, dtype=np.bool_)
    )


def _square(terms: Terms, length: float) -> Floats:
    """Integral of |F|^2 over a time, [responses]."""
    total = terms.rate[:, None] + terms.rate[None, :].conj()
    near = np.abs(total) * length < 1e-9
    with np.errstate(all="ignore"):
        weight = np.where(near, length, np.expm1(np.where(near, 0.0, total) * length) / np.where(near, 1.0, total))
    c = terms.coefficient
    found: Complexes = np.einsum("oi,ij,oj->o", c, weight, c.conj())
    return np.maximum(found.real, 0.0)


def check_gated(network: Network) -> None:
    """Raise CheckError for gated circuits that aren't computed."""
    if len(network.sources) > 1:
        raise CheckError("a gated drive beside other drives isn't computed")
    source = network.sources[0]
    if source.waveform.kind != "sine" or source.dc != 0.0 or source.basis == "delivered_power":
        raise CheckError(f"gating of {source.name} is computed for a sine without offset and of given level only")


def gated_sizes(network: Network, points: Floats, gate: Gate, roles: Roles) -> Sizes:
    """Sizes at points [points, axes]: amplitudes are those of sines with the same RMS, extremes those of the bursts."""
    seen = [burst(stage(network, point, roles=roles), gate) for point in points]
    rms, peak = np.stack([b.rms for b in seen]), np.stack([b.peak for b in seen])
    return _sizes(network, points, points, np.sqrt(2.0) * rms, peak)


def gated_ceilings(network: Network, gate: Gate, roles: Roles) -> Sizes:
    """The same for a network in which nothing varies, peaks replaced by values that no instant exceeds."""
    point = network.axes.nominal
    seen = burst(stage(network, point, roles=roles), gate)
    return _sizes(network, point[None], point[None], np.sqrt(2.0) * seen.rms[None], seen.ceiling[None])


def gated_bounds(network: Network, gate: Gate, one: OneResonance) -> Sizes:
    """Over the whole box of a network with one resonance: peaks by the bound for any waveform, RMS by the largest
    response at any frequency times the RMS of the drive (Parseval)."""
    source = network.sources[0]
    level = network.axes.items[source.level_axis].high * source.level_scale
    if source.basis == "available_power":
        level = float(np.sqrt(8.0 * network.axes.items[source.level_axis].high * source.ohm))
    amplitude = one.any_frequency[:, 0] * level * np.sqrt(gate.on / gate.period)
    peak = one.any_waveform[:, 0] * level
    return _sizes(network, network.axes.low[None], network.axes.high[None], amplitude[None], peak[None])


def _sizes(network: Network, lows: Floats, highs: Floats, amplitude: Floats, peak: Floats) -> Sizes:
    count, nodes = len(network.branches), len(network.nodes)
    line = network.lines[0]
    omega = line.omega(lows), line.omega(highs)
    ends = [branch_ohm(network, p, w) for p in (lows, highs) for w in omega]
    ohm = np.max([np.abs(e.real) for e in ends], axis=0)
    reactance = np.max([np.abs(e.imag) for e in ends], axis=0)
    ampere, volt = amplitude[:, :count], amplitude[:, count : 2 * count]
    watt = np.sqrt(ohm) * ampere
    lossy = [n for n, branch in enumerate(network.branches) if branch.role != "source"]
    sent = 0.5 * (watt[:, lossy] ** 2).sum(axis=1, keepdims=True)
    return Sizes(
        volt[None], ampere[None], watt[None], (np.sqrt(reactance) * ampere)[None],
        amplitude[None, :, 2 * count : 2 * count + nodes], amplitude[None, :, 2 * count + nodes :], (line.group,),
        peak, peak, sent, (omega[0][None], omega[1][None]), (lows, highs), Direct.nothing(network, len(lows)), False,
    )  # fmt: skip

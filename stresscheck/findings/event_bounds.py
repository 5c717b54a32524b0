"""Bounds of events that hold anywhere in the box."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.circuit.network import Network
from stresscheck.findings.assemble import StateFindings, Steady
from stresscheck.findings.event_rows import Row, factor_of
from stresscheck.transient.one_resonance import OneResonance


@dataclass(frozen=True, slots=True)
class Reaches:
    """What holds anywhere in the box: `far`, see reach; `one`, where the network has one resonance."""

    far: Floats
    one: OneResonance | None


def bounds_of(
    event: str, network: Network, steady: Steady, before: StateFindings, rows: list[Row], limits: Reaches
) -> Floats:
    """Bound of each row's stress anywhere in the box, infinite without one.

    switch-on: steady bound + swing of its own energy, or the drives' response from rest; switch-off: swing of the
    energy; change: either of the first two in the new circuit + swing of what the old one held.
    """
    ends = np.stack([network.axes.low, network.axes.high])
    mine = float(steady.worst.bounds.bound[steady.energy])
    carried_over = _carried_energy(event, network, before)
    from_rest = _from_rest(network, limits.one)
    out = np.empty(len(rows))
    for index, row in enumerate(rows):
        factor = factor_of(network, steady, row.check, ends, largest_value=True)
        swing = factor * limits.far[row.response]
        if event == "switch-off":
            out[index] = _times(swing, mine)
            continue
        running = float(steady.worst.bounds.bound[steady.column[row.number]])
        out[index] = min(running + _times(swing, mine), factor * from_rest[row.response]) + _times(swing, carried_over)
    return out


def _times(swing: float, energy: float) -> float:
    """Product of a reach and an energy; nothing where there is no energy, whatever the reach."""
    return swing * energy if energy > 0.0 else 0.0


def _carried_energy(event: str, network: Network, before: StateFindings) -> float:
    """sqrt(2 W) at most of what the circuit before a change held, in the changed parts; zero for other events."""
    if event != "change":
        return 0.0
    old, was = before.steady, before.network
    assert old is not None
    assert was is not None
    return float(old.worst.bounds.bound[old.energy]) * math.sqrt(_growth(network, was))


def _from_rest(network: Network, one: OneResonance | None) -> Floats:
    """Bound of every response to all drives switched on from rest, by the formulas for one resonance."""
    count = 2 * len(network.branches) + len(network.nodes) + len(network.sources)
    if one is None:
        return np.full(count, np.inf)
    total = np.zeros(count)
    for index, source in enumerate(network.sources):
        axis = network.axes.items[source.level_axis]
        direct = max(abs(float(v)) for v in source.direct_level(np.array([axis.low, axis.high])))
        if source.basis != "peak":
            return np.full(count, np.inf)
        level = axis.high * source.level_scale
        kind = source.waveform.kind
        if kind == "listed":
            wave = one.sine[:, index] * sum(abs(source.waveform.weight(n)) for n in source.waveform.orders(1))
        elif kind == "sine":
            wave = one.sine[:, index]
        else:
            wave = one.any_waveform[:, index]
            # Between plus and minus its peak whatever its mean: the direct part is in it.
            direct = abs(source.dc)
        total += np.fmin(wave, one.any_waveform[:, index] if kind != "listed" else np.inf) * level
        total += one.step[:, index] * direct if direct > 0.0 else 0.0
    return total


def _growth(network: Network, old: Network) -> float:
    """Largest factor by which the energy of the same charges and fluxes is larger in the changed parts."""
    intervals = {axis.path: (axis.low, axis.high) for axis in old.axes.items}
    most = 1.0
    for axis in network.axes.items:
        if not axis.path.startswith(("capacitor.", "inductor.", "coupling.")) or axis.path not in intervals:
            continue
        low, high = intervals[axis.path]
        if (low, high) == (axis.low, axis.high):
            continue
        if axis.path.startswith("coupling."):
            was, now = max(abs(low), abs(high)), max(abs(axis.low), abs(axis.high))
            most *= (1.0 + was) / (1.0 - now)
        else:
            most = max(most, high / axis.low)
    return most

"""Worst case of a gated drive: sought where the running drive is worst, bounded where a rule holds."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.circuit.motion import roles_for
from stresscheck.circuit.network import Network
from stresscheck.findings.worst import Problem, Worst, worst_case
from stresscheck.search.climb import Peaks
from stresscheck.search.prove import Bounds
from stresscheck.stress.sizes import Sizes
from stresscheck.stress.stresses import stresses
from stresscheck.transient.gated import Gate, gated_bounds, gated_ceilings, gated_sizes
from stresscheck.transient.one_resonance import one_resonance

if TYPE_CHECKING:
    from stresscheck.design.model import Design

MOST_POINTS = 24


def gate_of(design: Design, network: Network) -> Gate | None:
    """Gating of the drives, None where none is gated."""
    for source in network.sources:
        gating = design.drive[source.name].gating
        if gating is not None:
            return Gate(float(gating.on), float(gating.period))
    return None


def gated_worst(problem: Problem, gate: Gate, gap: float, limit: Floats, stop: Callable[[bool], bool]) -> Worst:
    """Worst case of every function of a problem when its drive is gated.

    The running drive is searched without proof; the bursts are then computed at its worst points. Bounds: nothing
    varies, or a network with one resonance; infinite otherwise.
    """
    network = problem.network
    running = Problem(network, problem.notes, [replace(ask, prove=False) for ask in problem.asked])
    rough = worst_case(running, gap, limit, stop)
    points = _different([network.axes.nominal, *rough.peaks.point])
    values = _values(network, problem, gated_sizes(network, points, gate, roles_for(network)), points)
    row = np.where(np.isfinite(values), values, -np.inf).argmax(axis=0)
    found = values[row, np.arange(values.shape[1])]
    bound = np.maximum(_bound(network, problem, gate), found)
    peaks = Peaks(found, points[row])
    return Worst(values[0], peaks, np.full_like(found, np.nan), Bounds(bound, 1, False), np.zeros_like(found))


def _different(points: Sequence[Floats]) -> Floats:
    kept: list[Floats] = []
    for point in points:
        if np.isfinite(point).all() and not any(np.allclose(point, other, rtol=1e-6, atol=0.0) for other in kept):
            kept.append(point)
    return np.array(kept[:MOST_POINTS])


def _bound(network: Network, problem: Problem, gate: Gate) -> Floats:
    low, high = network.axes.low[None], network.axes.high[None]
    if not any(axis.varies for axis in network.axes.items):
        sizes = gated_ceilings(network, gate, roles_for(network))
        return np.asarray(_values(network, problem, sizes, low)[0])
    one = one_resonance(network)
    if one is None:
        return np.full(len(problem.asked), np.inf)
    return np.asarray(_values(network, problem, gated_bounds(network, gate, one), low, high)[0])


def _values(
    network: Network,
    problem: Problem,
    sizes: Sizes,
    lows: Floats,
    highs: Floats | None = None,
) -> Floats:
    """Every asked function from sizes, [points, functions]."""
    found = stresses(network, problem.notes, sizes)
    line = network.lines[0]
    columns = []
    for ask in problem.asked:
        value = found[ask.part, ask.quantity]
        if ask.limit is not None:
            hertz = line.hertz(lows)
            value = value / (ask.limit.at(hertz) if highs is None else ask.limit.smallest(hertz, line.hertz(highs)))
        columns.append(value)
    return np.stack(columns, axis=1)

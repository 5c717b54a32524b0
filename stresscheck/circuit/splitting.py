"""On which axis a box is best split: what halving each one would do to the bound, from the corners already known."""

from __future__ import annotations

import numpy as np

from stresscheck.arrays import Complexes, Floats, Indices
from stresscheck.circuit.corner_rule import angle_span, corner_rule
from stresscheck.circuit.corners import flat
from stresscheck.circuit.enclosure import LineBounds
from stresscheck.circuit.entries import Entry
from stresscheck.circuit.laws import CapacitorLaw
from stresscheck.circuit.network import Line, Network
from stresscheck.circuit.output_groups import OutputGroup

STEPS = 8
WORTH = 0.99
"""A split must bring the estimated bound below this part of the present one, or the widest axis is taken."""


def best_split(
    network: Network, line: Line, found: LineBounds, outputs: Indices, lows: Floats, highs: Floats
) -> Indices:
    """Axis to split for each box, [boxes]. outputs: the response that matters in each box, in `readings` order.

    Affine functions take their mean in the middle of an edge, so the corners of both halves follow from the corners
    of the whole without solving anything.
    """
    axis = _widest(network, lows, highs)
    for group in found.groups:
        boxes = np.flatnonzero(np.isin(outputs, group.rows))
        if boxes.size:
            axis[boxes] = _split_group(network, line, group, boxes, outputs[boxes], lows, highs, axis[boxes])
    return axis


def _split_group(
    network: Network,
    line: Line,
    group: OutputGroup,
    boxes: Indices,
    outputs: Indices,
    lows: Floats,
    highs: Floats,
    widest: Indices,
) -> Indices:
    """The same for boxes whose response belongs to one group."""
    column = np.array([int(np.flatnonzero(group.rows == o)[0]) for o in outputs])
    combined = group.combined[boxes]
    numerator = np.stack([combined[n, ..., c] for n, c in enumerate(column)])
    below = np.broadcast_to(group.corners.denominator, group.combined.shape[:-1])[boxes]
    moving = group.corners.moving
    axes = sorted({axis for entry in moving for axis in entry.axes if network.axes.items[axis].varies})
    if below.shape[1] > 1:
        axes.append(line.frequency_axis)
    if not axes:
        return widest
    whole = _quick(numerator, below)
    bound, span = [], []
    for axis in axes:
        halves = [_half(network, line, moving, numerator, below, axis, upper) for upper in (False, True)]
        bound.append(np.maximum(*[_quick(n, d) for n, d in halves]))
        span.append(np.maximum(*[angle_span(flat(d, 0)) for _, d in halves]))
    by_bound, by_span = np.stack(bound, axis=1), np.stack(span, axis=1)
    columns = np.array(axes, dtype=np.intp)
    finite = np.isfinite(by_bound).any(axis=1)
    choice = columns[np.where(finite, by_bound.argmin(axis=1), by_span.argmin(axis=1))]
    useless = np.isfinite(whole) & ~(by_bound.min(axis=1) < WORTH * whole)
    width = highs[boxes, choice] - lows[boxes, choice]
    return np.where(useless | (width <= 0.0), widest, choice)


def _quick(numerator: Complexes, denominator: Complexes) -> Floats:
    """The corner rule in a few steps: enough to compare."""
    return corner_rule(np.abs(flat(numerator, 0))[:, :, None], flat(denominator, 0), STEPS)[:, 0]


def _widest(network: Network, lows: Floats, highs: Floats) -> Indices:
    """The axis of largest relative width, drive levels left out: bounds take those at their ends anyway."""
    width = (highs - lows) / np.maximum(np.maximum(np.abs(lows), np.abs(highs)), 1e-300)
    for source in network.sources:
        width[:, source.level_axis] = 0.0
    return np.asarray(width.argmax(axis=1), dtype=np.intp)


def _half(
    network: Network,
    line: Line,
    moving: tuple[Entry, ...],
    numerator: Complexes,
    denominator: Complexes,
    axis: int,
    upper: bool,
) -> tuple[Complexes, Complexes]:
    """Corners of one half of the box along an axis."""
    n, d = numerator, denominator
    if axis == line.frequency_axis:
        return _halved(n, 1, upper), _halved(d, 1, upper)
    for dimension, entry in enumerate(moving, start=2):
        if axis in entry.axes:
            falls = isinstance(network.branches[entry.places[0][0]].law, CapacitorLaw)
            n, d = _halved(n, dimension, upper != falls), _halved(d, dimension, upper != falls)
    return n, d


def _halved(values: Complexes, dimension: int, upper: bool) -> Complexes:
    """Bernstein values on half of an edge (de Casteljau)."""
    level = np.moveaxis(values, dimension, 0)
    first, last = [level[0]], [level[-1]]
    while len(level) > 1:
        level = 0.5 * (level[:-1] + level[1:])
        first.append(level[0])
        last.insert(0, level[-1])
    half = last if upper else first
    return np.moveaxis(np.stack(half), 0, dimension)

"""Where several functions peak in a box: from many starts, one axis at a time, to the best of offered values."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Floats, Indices
from stresscheck.search.box import Box

Evaluate = Callable[[Floats], Floats]
"""points [points, axes] → values [points, functions]; NaN where there is none."""
Candidates = Callable[[Floats, Indices, int], Floats]
"""(points, function of each point, axis) → values to try on that axis [points, tries]; NaN to try nothing.
What is offered decides how exactly a peak is met: stationary values of the function along the axis are best."""

KEPT = 4
"""Starts kept per function."""
SWEEPS = 40
LEADERS = {1: 2, 5: 1}
"""After these sweeps only so many climbers of each function go on: two, and for slow ridges the best alone."""
SETTLED = 1e-10
"""A sweep that gains less than this, relative, ends a climb."""
STRIDES = 0.5 * 2.0 ** np.arange(9)
"""How far to go on along the way of a sweep, in parts of it."""
FEW = 8
"""With more tries than this on an axis the peak is sought between them too; fewer are stationary values already."""


@dataclass(frozen=True, slots=True)
class Peaks:
    """Largest values found: `value` [functions], and where, `point` [functions, axes]."""

    value: Floats
    point: Floats


def climb(
    box: Box,
    evaluate: Evaluate,
    candidates: Candidates,
    starts: Floats,
    stop: Callable[[], bool] = lambda: False,
) -> Peaks:
    """Largest value of every function, climbing from the best starts of each; `stop()` ends it where it stands.

    Never below the best start. A start whose values are all NaN is passed over; where a function is NaN at every
    start its value is NaN.
    """
    values = _clean(evaluate(starts))
    best = _best_starts(values)
    target = np.repeat(np.arange(values.shape[1]), best.shape[1])
    points = starts[best.reshape(-1)].copy()
    height = values[best.reshape(-1), target]
    going = np.arange(len(points))
    for sweep in range(SWEEPS):
        here, high, functions = points[going], height[going], target[going]
        before, left = high, here
        for axis in box.varying:
            if stop():
                break
            here, high = _move(box, evaluate, candidates, here, functions, high, axis)
        here, high = _stride(box, evaluate, left, here, functions, high)
        points[going], height[going] = here, high
        with np.errstate(invalid="ignore"):  # minus infinity less itself: a climber that found no value
            going = going[high - before > SETTLED * np.abs(high)]
        if sweep in LEADERS:
            going = np.intersect1d(going, _leaders(height, target, LEADERS[sweep]))
        if not going.size or stop():
            break
    return _collect(points, height, target, values.shape[1])


def merge(one: Peaks, other: Peaks) -> Peaks:
    """The larger of two sets of peaks, function by function."""
    take = ~(one.value >= other.value) & np.isfinite(other.value)
    return Peaks(np.where(take, other.value, one.value), np.where(take[:, None], other.point, one.point))


def _clean(values: Floats) -> Floats:
    return np.where(np.isfinite(values), values, -np.inf)


def _best_starts(values: Floats) -> Indices:
    """Row numbers of the best starts of each function, [functions, kept]."""
    kept = min(KEPT, len(values))
    return np.argsort(-values, axis=0, kind="stable")[:kept].T


def _move(
    box: Box,
    evaluate: Evaluate,
    candidates: Candidates,
    points: Floats,
    target: Indices,
    height: Floats,
    axis: int,
) -> tuple[Floats, Floats]:
    """Set one axis of every climber to the best value offered; stay where none is better."""
    offered = candidates(points, target, axis)
    here = points[:, axis : axis + 1]
    offered = np.where(np.isfinite(offered), offered, here)
    ends = np.broadcast_to([box.low[axis], box.high[axis]], (len(points), 2))
    tries = np.clip(np.concatenate([offered, ends], axis=1), box.low[axis], box.high[axis])
    count = tries.shape[1]
    mine = _heights(evaluate, points, target, axis, tries)
    if count > FEW:
        between = np.clip(_vertex(tries, mine), box.low[axis], box.high[axis])[:, None]
        tries = np.concatenate([tries, between], axis=1)
        mine = np.concatenate([mine, _heights(evaluate, points, target, axis, between)], axis=1)
    pick = mine.argmax(axis=1)
    top = mine[np.arange(len(points)), pick]
    better = top > height
    moved = points.copy()
    moved[better, axis] = tries[np.arange(len(points)), pick][better]
    return moved, np.where(better, top, height)


def _stride(
    box: Box, evaluate: Evaluate, left: Floats, points: Floats, target: Indices, height: Floats
) -> tuple[Floats, Floats]:
    """Go on in the direction in which a whole sweep has led: it lies along the ridge that single axes zigzag on.

    Source: pattern search, Hooke and Jeeves 1961.
    """
    way = points - left
    moving = np.flatnonzero(np.abs(way).sum(axis=1) > 0.0)
    if len(box.varying) < 2 or not moving.size:
        return points, height
    far = points[moving, None, :] + way[moving, None, :] * STRIDES[:, None]
    far = np.clip(far, box.low, box.high)
    values = _clean(evaluate(far.reshape(-1, points.shape[1]))).reshape(len(moving), len(STRIDES), -1)
    mine = np.take_along_axis(values, target[moving, None, None], axis=2)[:, :, 0]
    pick = mine.argmax(axis=1)
    top = mine[np.arange(len(moving)), pick]
    better = top > height[moving]
    points, height = points.copy(), height.copy()
    points[moving[better]] = far[np.arange(len(moving)), pick][better]
    height[moving[better]] = top[better]
    return points, height


def _heights(evaluate: Evaluate, points: Floats, target: Indices, axis: int, tries: Floats) -> Floats:
    """Value of each climber's own function at each try on one axis, [climbers, tries]."""
    trial = np.repeat(points, tries.shape[1], axis=0)
    trial[:, axis] = tries.reshape(-1)
    values = _clean(evaluate(trial)).reshape(len(points), tries.shape[1], -1)
    return np.asarray(np.take_along_axis(values, target[:, None, None], axis=2)[:, :, 0])


def _vertex(tries: Floats, heights: Floats) -> Floats:
    """Top of the parabola through the best try and its neighbours on either side, [climbers]."""
    order = np.argsort(tries, axis=1, kind="stable")
    x, y = np.take_along_axis(tries, order, axis=1), np.take_along_axis(heights, order, axis=1)
    middle = np.clip(y.argmax(axis=1), 1, x.shape[1] - 2)[:, None]
    x0, x1, x2 = (np.take_along_axis(x, middle + i, axis=1)[:, 0] for i in (-1, 0, 1))
    y0, y1, y2 = (np.take_along_axis(y, middle + i, axis=1)[:, 0] for i in (-1, 0, 1))
    with np.errstate(all="ignore"):
        left, right = (y1 - y0) * (x1 - x2), (y1 - y2) * (x1 - x0)
        top = x1 - 0.5 * (left * (x1 - x2) - right * (x1 - x0)) / (left - right)
    return np.where(np.isfinite(top), top, x1)


def _leaders(height: Floats, target: Indices, count: int) -> Indices:
    """The highest climbers of each function; the others have shown where they lead."""
    keep: list[int] = []
    for function in np.unique(target):
        members = np.flatnonzero(target == function)
        order = members[np.argsort(-height[members], kind="stable")]
        keep.extend(int(i) for i in order[:count])
    return np.array(sorted(keep), dtype=np.intp)


def _collect(points: Floats, height: Floats, target: Indices, functions: int) -> Peaks:
    value = np.full(functions, np.nan)
    point = np.full((functions, points.shape[1]), np.nan)
    for function in range(functions):
        members = np.flatnonzero(target == function)
        top = members[height[members].argmax()]
        point[function] = points[top]
        value[function] = height[top] if np.isfinite(height[top]) else np.nan
    return Peaks(value, point)

"""Along a narrow ridge: move one axis and bring another back onto the ridge, as one step.

A sharp resonance is a ridge across the box, thinner than any step along one axis alone: each single step falls off
it. A step here sets one axis to a new value and retunes another so that the resonance is met again.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from stresscheck.arrays import Floats, Indices
from stresscheck.search.box import Box
from stresscheck.search.climb import Evaluate, Peaks, merge

Retune = Callable[[Floats, Indices, int], Floats]
"""(points [points, axes], function of each, axis) → values of that axis at which the function may be back on its
ridge, [points, tries], NaN where there is none."""

SCALES = 10
"""Step sizes tried: the width of the axis and halves of it."""
LEAST_GAIN = 1e-7
MOST_STEPS = 30_000
"""Steps tried in all; where more are possible, fewer axes are retuned."""


def along_ridges(box: Box, evaluate: Evaluate, retune: Retune, tunable: tuple[int, ...], peaks: Peaks) -> Peaks:
    """Better peaks by moving one axis and retuning another; the same peaks where nothing is gained."""
    target = np.flatnonzero(np.isfinite(peaks.value))
    starts = peaks.point[target]
    steps = len(starts) * len(box.varying) * 2 * SCALES
    tunable = tunable[: max(1, MOST_STEPS // max(1, steps))]
    trials = [
        _steps(box, retune, starts, target, moved, tuned)
        for moved in box.varying
        for tuned in tunable
        if tuned != moved
    ]
    if not trials:
        return peaks
    points = np.concatenate(trials)
    values = evaluate(points)
    values = np.where(np.isfinite(values), values, -np.inf)
    row = values.argmax(axis=0)
    found = Peaks(values[row, np.arange(values.shape[1])], points[row])
    return merge(peaks, found)


def gained(before: Peaks, after: Peaks) -> bool:
    """True where any function gained more than rounding."""
    with np.errstate(invalid="ignore"):
        return bool((after.value - before.value > LEAST_GAIN * np.abs(before.value)).any())


def _steps(box: Box, retune: Retune, starts: Floats, target: Indices, moved: int, tuned: int) -> Floats:
    width = (box.high[moved] - box.low[moved]) * 0.5 ** np.arange(SCALES)
    steps = np.concatenate([width, -width])
    points = np.repeat(starts, len(steps), axis=0)
    functions = np.repeat(target, len(steps))
    points[:, moved] = np.clip(points[:, moved] + np.tile(steps, len(starts)), box.low[moved], box.high[moved])
    values = retune(points, functions, tuned)
    out = np.repeat(points, values.shape[1], axis=0)
    value = values.reshape(-1)
    out[:, tuned] = np.clip(np.where(np.isfinite(value), value, out[:, tuned]), box.low[tuned], box.high[tuned])
    return out

"""Tries to break the bounds: random boxes of random networks, random points, every quantity of every part."""

from __future__ import annotations

import numpy as np
import pytest
from random_boxes import random_points, random_problem

from stresscheck.search.box import corner_points

POINTS = 400


@pytest.mark.parametrize("block", range(10))
def test_bounds_random_boxes_no_point_above(block: int) -> None:
    """100 networks: 40,000 uniform and edge points and all corners, against bounds without any split."""
    rng = np.random.default_rng(900 + block)
    for seed in range(10 * block, 10 * block + 10):
        problem, shape, q = random_problem(seed)
        box = problem.box
        focus, still = np.zeros(1, dtype=np.intp), np.ones(len(problem.asked), dtype=bool)
        bound = problem.bounds(box.low[None], box.high[None], focus, still)[0][0]
        points = np.concatenate([random_points(problem, POINTS, rng), corner_points(box), problem.starts()])
        values = problem.values(points)
        highest = np.nanmax(values, axis=0)
        noise = 1e-12 * np.nanmax(highest)
        over = highest > bound + noise
        assert not over.any(), (seed, shape, q, [problem.asked[i] for i in np.flatnonzero(over)])


def test_bounds_random_sub_boxes_no_point_above_and_shrink_to_the_value() -> None:
    rng = np.random.default_rng(5)
    for seed in range(20):
        problem, _, _ = random_problem(seed)
        box = problem.box
        middle = box.low + (box.high - box.low) * rng.random(len(box.low))
        half = 0.5e-6 * (box.high - box.low)
        low, high = np.maximum(box.low, middle - half), np.minimum(box.high, middle + half)
        still = np.ones(len(problem.asked), dtype=bool)
        bound = problem.bounds(low[None], high[None], np.zeros(1, dtype=np.intp), still)[0][0]
        value = problem.values(np.array([low, high])).max(axis=0)
        assert (value <= bound * (1 + 1e-12)).all()
        big = value > 1e-9 * value.max()
        assert (bound[big] <= value[big] * 1.02 + 1e-12).all(), seed

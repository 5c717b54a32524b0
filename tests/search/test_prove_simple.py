"""Branch and bound on functions whose maximum is known, with interval bounds that are loose on purpose."""

from __future__ import annotations

import numpy as np

from stresscheck.search.box import Box, corner_points
from stresscheck.search.climb import climb
from stresscheck.search.prove import Goal, prove

BOX = Box(np.array([-1.0, 0.5]), np.array([0.0, 1.0]), np.array([2.0, 1.5]))


def _values(points: np.ndarray) -> np.ndarray:
    """Peak 3 at x = 0.7 (inside), for y = 1.5 (an edge); and the constant zero."""
    x, y = points.T
    return np.stack([2.0 * y / (1.0 + 40.0 * (x - 0.7) ** 2), np.zeros_like(x)], axis=1)


def _enclose(lows, highs, focus, still):
    nearest = np.clip(0.7, lows[:, 0], highs[:, 0])
    top = 2.0 * highs[:, 1] / (1.0 + 40.0 * (nearest - 0.7) ** 2)
    slack = 1.0 + (highs - lows).sum(axis=1)
    return np.stack([top * slack, 1e-12 * slack], axis=1), (highs - lows).argmax(axis=1)


def _goal(gap: float, limit: float = np.nan) -> Goal:
    return Goal(gap, np.array([0.0, 1e-9]), np.array([limit, np.nan]))


def test_prove_known_peak_closes_to_the_gap_and_stays_above() -> None:
    found = np.array([3.0, 0.0])
    result = prove(BOX, _enclose, lambda points: found, found, _goal(0.01), 8, lambda decided: False)
    assert 3.0 <= result.bound[0] <= 3.03
    assert not result.spent
    assert result.bound[1] <= 1e-9


def test_prove_stopped_early_keeps_a_valid_bound_and_says_so() -> None:
    found = np.array([3.0, 0.0])
    result = prove(BOX, _enclose, lambda points: found, found, _goal(0.01), 1, lambda decided: True)
    assert result.spent
    assert result.bound[0] >= 3.0
    assert result.boxes == 1


def test_prove_bound_under_limit_counts_as_decided() -> None:
    seen: list[bool] = []

    def stop(decided: bool) -> bool:
        seen.append(decided)
        return decided

    found = np.array([3.0, 0.0])
    result = prove(BOX, _enclose, lambda points: found, found, _goal(0.01, limit=4.0), 4, stop)
    assert seen[-1]
    assert result.bound[0] <= 4.0


def test_prove_function_without_value_gets_no_bound() -> None:
    found = np.array([3.0, np.nan])
    result = prove(BOX, _enclose, lambda points: found, found, _goal(0.1), 8, lambda decided: False)
    assert np.isinf(result.bound[1])
    assert np.isfinite(result.bound[0])


def test_climb_offered_stationary_values_meets_the_peak() -> None:
    def candidates(points, target, axis):
        return np.full((len(points), 1), 0.7 if axis == 0 else np.nan)

    peaks = climb(BOX, _values, candidates, corner_points(BOX))
    assert peaks.value[0] == 3.0
    assert peaks.point[0].tolist() == [0.7, 1.5]


def test_corner_points_many_axes_is_a_reproducible_sample_with_both_extremes() -> None:
    box = Box(np.zeros(12), np.full(12, 0.5), np.ones(12))
    one, two = corner_points(box), corner_points(box)
    assert (one == two).all()
    assert len(one) == 256
    assert one[0].sum() == 0.0
    assert one[1].sum() == 12.0


def test_corner_points_fixed_axis_stays() -> None:
    box = Box(np.array([1.0, 2.0]), np.array([1.5, 2.0]), np.array([2.0, 2.0]))
    assert corner_points(box).tolist() == [[1.0, 2.0], [2.0, 2.0]]

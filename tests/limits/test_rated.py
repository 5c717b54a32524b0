"""Curves over frequency and temperature: closed forms, silence outside their points, smallest over a band."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from stresscheck.limits.rated import at_temperature, number, over_frequency

FALLING = over_frequency([(10e3, 450.0), (85e3, 400.0), (200e3, 170.0)])
RISING = over_frequency([(1e5, 1.0), (1e6, 3.0), (1e7, 4.0)])
HUMP = over_frequency([(1e3, 10.0), (1e4, 40.0), (1e5, 20.0)])


def test_at_printed_points_gives_the_printed_values_exactly() -> None:
    assert FALLING.at(np.array([10e3, 85e3, 200e3])).tolist() == [450.0, 400.0, 170.0]


def test_at_between_points_follows_the_power_law_of_its_piece() -> None:
    """A straight line on log-log axes is v0 (f/f0)^s, s = log(v1/v0)/log(f1/f0)."""
    curve = over_frequency([(1e4, 400.0), (1e6, 40.0)])
    asked = np.array([2e4, 1e5, 7e5])
    assert curve.at(asked) == pytest.approx(400.0 * (asked / 1e4) ** -0.5, rel=1e-13)


def test_at_below_first_point_of_falling_curve_holds_the_first_value() -> None:
    assert FALLING.falling
    assert FALLING.at(np.array([1e-3, 0.0, 9999.0])).tolist() == [450.0, 450.0, 450.0]


@pytest.mark.parametrize("curve", [RISING, HUMP, over_frequency([(1e3, 5.0), (1e4, 5.0)])])
def test_at_below_first_point_of_other_curves_is_silent(curve: object) -> None:
    assert np.isnan(curve.at(np.array([999.0]))).all()  # type: ignore[attr-defined]


@pytest.mark.parametrize("curve", [FALLING, RISING, HUMP])
def test_at_above_last_point_is_silent(curve: object) -> None:
    last = curve.hertz[-1]  # type: ignore[attr-defined]
    assert np.isfinite(curve.at(np.array([last]))).all()  # type: ignore[attr-defined]
    assert np.isnan(curve.at(np.array([math.nextafter(last, math.inf)]))).all()  # type: ignore[attr-defined]


def test_at_nan_frequency_is_silent_for_curve_and_number() -> None:
    assert np.isnan(FALLING.at(np.array([math.nan]))).all()
    assert np.isnan(number(3.0).at(np.array([math.nan]))).all()


def test_smallest_band_over_a_hump_takes_the_lower_end() -> None:
    band = HUMP.smallest(np.array([2e3, 5e3, 3e4]), np.array([9e4, 2e4, 3e4]))
    ends = np.minimum(HUMP.at(np.array([2e3, 5e3, 3e4])), HUMP.at(np.array([9e4, 2e4, 3e4])))
    assert band == pytest.approx(ends, rel=1e-15)


def test_smallest_band_over_a_dip_takes_the_printed_point_inside() -> None:
    dip = over_frequency([(1e3, 10.0), (1e4, 2.0), (1e5, 20.0)])
    assert dip.smallest(np.array([2e3]), np.array([9e4])).tolist() == [2.0]


def test_smallest_band_that_leaves_the_curve_is_silent() -> None:
    low, high = np.array([1e4, 9e4, 5e3]), np.array([3e5, 2e5, 9e3])
    assert np.isnan(FALLING.smallest(low, high)).tolist() == [True, False, False]
    assert np.isnan(RISING.smallest(np.array([9e4]), np.array([2e5]))).all()


def test_smallest_band_upside_down_is_silent() -> None:
    assert np.isnan(FALLING.smallest(np.array([9e4]), np.array([8e4]))).all()


def test_times_scales_every_value_and_root_times_is_the_root() -> None:
    asked = np.array([1e4, 3e4, 1.5e5])
    assert FALLING.times(0.6).at(asked) == pytest.approx(0.6 * FALLING.at(asked), rel=1e-15)
    assert FALLING.times(0.6).root_times(50.0).at(asked) == pytest.approx(
        np.sqrt(0.6 * FALLING.at(asked) * 50.0), rel=1e-13
    )


def test_arrays_are_locked() -> None:
    with pytest.raises(ValueError, match="read-only"):
        FALLING.value[0] = 1.0


@pytest.mark.parametrize(
    "points",
    [
        [(1e3, 1.0)],
        [(1e3, 1.0), (1e3, 2.0)],
        [(2e3, 1.0), (1e3, 2.0)],
        [(1e3, 0.0), (2e3, 1.0)],
        [(0.0, 1.0), (1.0, 1.0)],
    ],
)
def test_over_frequency_points_that_make_no_curve_are_refused(points: list[tuple[float, float]]) -> None:
    with pytest.raises(ValueError, match="two or more points"):
        over_frequency(points)


curves = st.lists(st.tuples(st.floats(0.05, 3.0), st.floats(-6.0, 6.0)), min_size=2, max_size=6).map(
    lambda steps: over_frequency(
        list(zip(np.cumsum([10.0**a for a, _ in steps]).tolist(), [10.0**b for _, b in steps], strict=True))
    )
)


@given(curves, st.floats(0.0, 1.0), st.floats(0.0, 1.0), st.integers(2, 40))
def test_smallest_band_is_below_every_point_of_the_band(curve: object, start: float, stop: float, count: int) -> None:
    first, last = curve.hertz[0], curve.hertz[-1]  # type: ignore[attr-defined]
    low, high = sorted((first + start * (last - first), first + stop * (last - first)))
    least = curve.smallest(np.array([low]), np.array([high]))[0]  # type: ignore[attr-defined]
    inside = np.clip(np.geomspace(low, high, count), low, high)
    assert np.all(curve.at(inside) >= least * (1.0 - 1e-12))  # type: ignore[attr-defined]


def test_at_temperature_falling_line_is_read_at_the_part() -> None:
    line = [(343.15, 10.0), (423.15, 2.0)]
    assert at_temperature(line, 383.15) == pytest.approx(6.0, rel=1e-12)
    assert at_temperature(line, 343.15) == 10.0
    assert at_temperature(line, 423.15) == 2.0


def test_at_temperature_rising_line_counts_the_cool_end() -> None:
    assert at_temperature([(250.0, 3.0), (300.0, 9.0)], 290.0) == 3.0
    assert at_temperature([(250.0, 9.0), (300.0, 3.0), (350.0, 8.0)], 340.0) == 3.0


@pytest.mark.parametrize("kelvin", [343.0, 423.2, math.nan])
def test_at_temperature_outside_the_points_is_silent(kelvin: float) -> None:
    assert math.isnan(at_temperature([(343.15, 10.0), (423.15, 2.0)], kelvin))

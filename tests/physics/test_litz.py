"""The strand formula against sums over strands, the exact loss of a cylinder, and the published form for windows."""

from __future__ import annotations

import math

import mpmath
import numpy as np
import pytest

from stresscheck.physics.litz import DENSEST, FEWEST_STRANDS, LARGEST_RATIO, litz_ratio, window_field


def _touching(rings: int) -> np.ndarray:
    """Centres of touching strands of radius 1, hexagonal rings around one, [strands, 2]."""
    span = range(-rings, rings + 1)
    return np.array([(2.0 * i + j, j * math.sqrt(3.0)) for i in span for j in span if abs(i + j) <= rings])


def _summed_loss(centres: np.ndarray, ratio: float) -> float:
    """1 + (a/d)^4 [1/48 + (pi n a h)^2], h^2 the mean over strands of the squared field of all other strands."""
    count = len(centres)
    apart = centres[:, None] - centres[None]
    squares = (apart**2).sum(axis=-1) + np.eye(count)
    field = (apart / squares[..., None]).sum(axis=1) / (2.0 * math.pi * count)
    return 1.0 + ratio**4 * (1.0 / 48.0 + math.pi**2 * count**2 * float((field**2).sum(axis=1).mean()))


@pytest.mark.parametrize(("rings", "over"), [(1, 0.22), (2, 0.08), (4, 0.03), (8, 0.015), (13, 0.011)])
def test_litz_ratio_of_packed_strands_is_a_little_above_the_sum_over_strands(rings: int, over: float) -> None:
    centres = _touching(rings)
    count, ratio = len(centres), 0.3
    bundle = math.sqrt(count / DENSEST)
    added = float(litz_ratio(count, 1.0, bundle, 1.0 / ratio)) - 1.0
    summed = _summed_loss(centres, ratio) - 1.0
    assert summed <= added <= summed * (1.0 + over)


def test_litz_ratio_against_the_exact_loss_of_strands_is_above_by_at_most_5_per_cent() -> None:
    """A round strand in an even field loses as the imaginary part of J2(ka)/J0(ka), (a/d)^2/4 at low frequency."""
    for ratio in (0.1, 0.3, 0.5, LARGEST_RATIO):
        z = (1 - 1j) * mpmath.mpf(ratio)
        exact = abs(float(mpmath.im(mpmath.besselj(2, z) / mpmath.besselj(0, z))))
        assert exact <= ratio**2 / 4.0 <= exact * 1.047


def test_litz_ratio_in_a_window_meets_the_published_strand_formula() -> None:
    """pi^2 w^2 mu0^2 N^2 n^2 d^6/(768 rho^2 b^2), field of the window alone."""
    n, d, turns, breadth, omega, rho, mu = 200, 0.1e-3, 30, 20e-3, 2.0 * math.pi * 1e5, 1.724e-8, 4e-7 * math.pi
    depth = math.sqrt(2.0 * rho / (omega * mu))
    whole = float(litz_ratio(n, d / 2.0, 1.2e-3, depth, window_field(turns, breadth)))
    own = float(litz_ratio(n, d / 2.0, 1.2e-3, depth))
    published = (math.pi * omega * mu * turns * n) ** 2 * d**6 / (768.0 * rho**2 * breadth**2)
    assert whole - own == pytest.approx(published, rel=1e-9)


def test_litz_ratio_of_one_bundle_splits_into_strand_and_bundle() -> None:
    added = float(litz_ratio(100, 50e-6, 0.7e-3, 209e-6)) - 1.0
    assert added == pytest.approx((50.0 / 209.0) ** 4 * (1.0 / 48.0 + (100 * 50.0 / 700.0) ** 2 / 8.0), rel=1e-12)


def test_litz_ratio_over_arrays_broadcasts_and_is_1_without_frequency() -> None:
    found = litz_ratio(np.array([[50], [100]]), 50e-6, 1e-3, np.array([math.inf, 1e-3, 3e-4]))
    assert found.shape == (2, 3)
    assert np.all(found[:, 0] == 1.0)
    assert np.all(np.diff(found, axis=1) > 0.0)


def test_litz_ratio_outside_its_range_is_refused_and_says_the_range() -> None:
    with pytest.raises(ValueError, match=r"0\.8 skin depths"):
        litz_ratio(100, np.array([10e-6, 85e-6]), 2e-3, 1e-4)
    with pytest.raises(ValueError, match=f"{FEWEST_STRANDS} strands"):
        litz_ratio(6, 10e-6, 1e-3, 1e-4)
    with pytest.raises(ValueError, match=r"0\.907"):
        litz_ratio(100, 50e-6, 0.52e-3, 1e-4)
    with pytest.raises(ValueError, match="outer_field"):
        litz_ratio(100, 50e-6, 1e-3, 1e-4, -1.0)
    with pytest.raises(ValueError, match=r"depth"):
        litz_ratio(100, 50e-6, 1e-3, math.nan)


def test_window_field_of_a_winding_is_the_mean_of_an_even_rise() -> None:
    rise = (np.arange(100_000) + 0.5) / 100_000 * 30.0 / 0.02
    assert float(window_field(30, 0.02)) == pytest.approx(math.sqrt(float((rise**2).mean())), rel=1e-9)

"""Flux densities and core losses: closed forms, a sine, a triangle, minor loops."""

from __future__ import annotations

import itertools
import math

import numpy as np
import pytest
import scipy.integrate

from stresscheck.physics.cores import (
    disagreement,
    flux_from_current,
    flux_from_voltage,
    igse,
    igse_coefficient,
    steinmetz,
)
from stresscheck.physics.flux_loops import Piece, split_loops

K, A, B = 2.5, 1.4, 2.5
HERTZ = 50e3


def _straight(corners: list[tuple[float, float]], hertz: float = HERTZ) -> tuple[np.ndarray, np.ndarray]:
    """Corners in parts of the period as seconds and flux."""
    parts, flux = np.array(corners).T
    return parts / hertz, flux


def test_flux_densities_of_one_coil_agree() -> None:
    """V = w L I: both ways give the same where L, N and A belong to the core."""
    henry, ampere, turns, area = 100e-6, 8.0, 24, 80e-6
    volt_rms = 2.0 * math.pi * HERTZ * henry * ampere / math.sqrt(2.0)
    one, two = flux_from_current(henry, ampere, turns, area), flux_from_voltage(volt_rms, HERTZ, turns, area)
    assert float(one) == pytest.approx(0.41667, abs=1e-5)
    assert float(disagreement(one, two)) < 1e-12
    assert float(two) == pytest.approx(volt_rms / (4.443 * HERTZ * turns * area), rel=1e-4)


def test_flux_densities_with_wrong_inductance_disagree() -> None:
    one = flux_from_current(np.array([100e-6, 110e-6]), 8.0, 24, 80e-6)
    two = flux_from_current(100e-6, 8.0, 24, 80e-6)
    assert disagreement(one, two) == pytest.approx([0.0, 1.0 / 11.0])


def test_disagreement_of_nothing_is_zero_and_of_one_is_whole() -> None:
    assert disagreement(np.array([0.0, 0.0, 2.0]), np.array([0.0, 1.0, 0.0])).tolist() == [0.0, 1.0, 1.0]


def test_steinmetz_over_arrays_follows_its_powers() -> None:
    found = steinmetz(np.array([[1e4], [1e5]]), np.array([0.1, 0.2]), K, A, B)
    assert found.shape == (2, 2)
    assert found[1, 0] / found[0, 0] == pytest.approx(10.0**A)
    assert found[0, 1] / found[0, 0] == pytest.approx(2.0**B)


@pytest.mark.parametrize("material", [(1.0, 1.0, 2.0), (2.5, 1.4, 2.5), (0.1, 1.9, 3.0), (3.0, 2.2, 1.8)])
def test_igse_coefficient_meets_numerical_integration(material: tuple[float, float, float]) -> None:
    k, a, b = material
    turn = 4.0 * scipy.integrate.quad(lambda x: math.cos(x) ** a, 0.0, math.pi / 2.0)[0]
    assert igse_coefficient(k, a, b) == pytest.approx(k / ((2 * math.pi) ** (a - 1) * 2 ** (b - a) * turn), rel=1e-9)


@pytest.mark.parametrize("material", [(1.0, 1.0, 2.0), (2.5, 1.4, 2.5), (0.1, 1.9, 3.0)])
def test_igse_of_a_sine_is_steinmetz(material: tuple[float, float, float]) -> None:
    angle = np.linspace(0.0, 2.0 * math.pi, 4001)
    found = igse(angle / (2.0 * math.pi * HERTZ), 0.2 * np.sin(angle + 0.3), *material)
    assert float(found) == pytest.approx(float(steinmetz(HERTZ, 0.2, *material)), rel=1e-5)


def test_igse_of_a_triangle_is_93_per_cent_of_a_sine() -> None:
    """4^a/((2 pi)^(a-1) times the integral of |cos|^a), whatever b."""
    seconds, flux = _straight([(0.0, 0.2), (0.5, -0.2), (1.0, 0.2)])
    for b in (2.2, B):
        ratio = float(igse(seconds, flux, K, A, b)) / float(steinmetz(HERTZ, 0.2, K, A, b))
        assert ratio == pytest.approx(0.93, abs=0.005)


def test_igse_of_a_lopsided_triangle_is_the_closed_form() -> None:
    """k_i H^b f^a (D^(1-a) + (1-D)^(1-a)) for a rise over the share D."""
    for duty in (0.05, 0.3, 0.5):
        seconds, flux = _straight([(0.0, -0.1), (duty, 0.1), (1.0, -0.1)])
        expected = igse_coefficient(K, A, B) * 0.2**B * HERTZ**A * (duty ** (1 - A) + (1 - duty) ** (1 - A))
        assert float(igse(seconds, flux, K, A, B)) == pytest.approx(expected, rel=1e-12)


def test_igse_does_not_see_direct_flux_nor_where_the_period_starts() -> None:
    one = igse(*_straight([(0.0, -0.1), (0.3, 0.1), (0.4, 0.1), (1.0, -0.1)]), K, A, B)
    raised = igse(*_straight([(0.0, 0.1), (0.3, 0.3), (0.4, 0.3), (1.0, 0.1)]), K, A, B)
    shifted = igse(*_straight([(0.0, 0.2), (0.15, 0.3), (0.25, 0.3), (0.85, 0.1), (1.0, 0.2)]), K, A, B)
    assert [float(raised), float(shifted)] == pytest.approx([float(one)] * 2, rel=1e-12)


def test_igse_of_still_flux_is_zero() -> None:
    assert float(igse(*_straight([(0.0, 0.3), (0.5, 0.3), (1.0, 0.3)]), K, 1.9, 1.5)) == 0.0


def test_igse_with_a_minor_loop_is_the_sum_of_two_loops() -> None:
    """A dip of 0.05 T on the rise, with a rest at its bottom: its energy each period is that of a loop of its own."""
    corners = [(0.0, -0.1), (0.2, 0.0), (0.3, -0.05), (0.35, -0.05), (0.4, 0.0), (0.6, 0.1), (1.0, -0.1)]
    seconds, flux = _straight(corners)
    ki = igse_coefficient(K, A, B)
    minor = ((0.05 / 0.1) ** A * 0.1 + (0.05 / 0.05) ** A * 0.05) * 0.05 ** (B - A)
    major = ((0.1 / 0.2) ** A * 0.4 + (0.2 / 0.4) ** A * 0.4) * 0.2 ** (B - A)
    assert float(igse(seconds, flux, K, A, B)) == pytest.approx(ki * HERTZ**A * (minor + major), rel=1e-12)


def test_igse_of_three_equal_loops_in_a_period_is_that_of_one() -> None:
    """Three periods of a triangle taken as one period: the mean loss is the same."""
    corners = [(i / 6.0, 0.1 if i % 2 else -0.1) for i in range(7)]
    one = igse(*_straight([(0.0, -0.1), (0.5, 0.1), (1.0, -0.1)], 3.0 * HERTZ), K, A, B)
    assert float(igse(*_straight(corners), K, A, B)) == pytest.approx(float(one), rel=1e-12)


def test_igse_of_a_batch_is_each_course_on_its_own() -> None:
    """With and without minor loops, on two leading axes."""
    rng = np.random.default_rng(7)
    flux = rng.normal(size=(3, 4, 9))
    flux[..., -1] = flux[..., 0]
    flux[0, :, 1:-1] = np.sort(flux[0, :, 1:-1], axis=-1)
    seconds = np.linspace(0.0, 1.0, 9)
    found = igse(seconds, flux, K, A, B)
    assert found.shape == (3, 4)
    for i in range(3):
        for j in range(4):
            assert found[i, j] == pytest.approx(float(igse(seconds, flux[i, j], K, A, B)), rel=1e-12)


@pytest.mark.parametrize(
    ("seconds", "flux"),
    [([0.0, 0.5, 1.0], [0.0, 1.0, 0.5]), ([0.0, 0.5, 0.5, 1.0], [0.0, 1.0, 1.0, 0.0]), ([0.0], [0.0]),
     ([0.0, 0.5, 1.0], [0.0, math.nan, 0.0])],
)  # fmt: skip
def test_igse_of_what_is_no_period_is_refused(seconds: list[float], flux: list[float]) -> None:
    with pytest.raises(ValueError, match=r"times|flux|tesla"):
        igse(np.array(seconds), np.array(flux), K, A, B)


def test_split_loops_of_random_courses_keeps_time_and_flux_and_closes_each_loop() -> None:
    rng = np.random.default_rng(11)
    for _ in range(200):
        flux = rng.integers(-4, 5, size=int(rng.integers(2, 15))).astype(float)
        ends = [*flux, flux[0]]
        pieces = [Piece(float(rng.uniform(0.1, 1.0)), u, v) for u, v in itertools.pairwise(ends)]
        loops = split_loops(pieces)
        assert sum(p.seconds for loop in loops for p in loop) == pytest.approx(sum(p.seconds for p in pieces))
        moved = sum(abs(p.end - p.start) for p in pieces)
        heights = [max(p.start for p in loop) - min(p.start for p in loop) for loop in loops]
        assert 2.0 * sum(heights) == pytest.approx(moved)
        for loop, height in zip(loops, heights, strict=True):
            assert sum(p.end - p.start for p in loop) == pytest.approx(0.0, abs=1e-12)
            assert sum(abs(p.end - p.start) for p in loop) == pytest.approx(2.0 * height)
        assert max(heights) == pytest.approx(float(np.ptp(flux)))

"""Dowell's formula against 50 digits, its limits, and where round wire stands in it."""

from __future__ import annotations

import math

import mpmath
import numpy as np
import pytest

from stresscheck.physics.layers import dowell_ratio, round_wire_layer


def _exact(x: float, m: int) -> float:
    with mpmath.workdps(50):
        t = mpmath.mpf(x)
        own = (mpmath.sinh(2 * t) + mpmath.sin(2 * t)) / (mpmath.cosh(2 * t) - mpmath.cos(2 * t))
        others = (mpmath.sinh(t) - mpmath.sin(t)) / (mpmath.cosh(t) + mpmath.cos(t))
        return float(t * (own + mpmath.mpf(2) / 3 * (m * m - 1) * others))


def test_dowell_ratio_of_10_layers_at_1_depth_meets_the_relations() -> None:
    assert float(dowell_ratio(1.0, 10)) == pytest.approx(11.7, abs=0.051)


@pytest.mark.parametrize("layers", [1, 2, 10, 1000])
def test_dowell_ratio_over_seven_decades_meets_mpmath(layers: int) -> None:
    thick = np.geomspace(1e-4, 1e3, 141)
    exact = np.array([_exact(float(x), layers) for x in thick])
    assert np.max(np.abs(dowell_ratio(thick, layers) / exact - 1.0)) < 1e-11


def test_dowell_ratio_of_no_thickness_is_1() -> None:
    assert np.all(dowell_ratio(np.array([0.0, 1e-300, 1e-90, 1e-9]), 5.0) == 1.0)


def test_dowell_ratio_of_thick_layers_grows_evenly_and_never_overflows() -> None:
    """x (2 m^2 + 1)/3, where hyperbolic functions are far beyond the largest number."""
    thick = np.array([1e2, 1e4, 1e6, 1e12])
    for layers in (1, 3, 12):
        assert dowell_ratio(thick, layers) == pytest.approx(thick * (2.0 * layers**2 + 1.0) / 3.0, rel=1e-12)


def test_dowell_ratio_of_thin_layers_is_the_low_frequency_series() -> None:
    """1 + x^4 (5 m^2 - 1)/45 for thin layers: own 4/45, others (m^2 - 1)/9."""
    for layers in (1, 4, 9):
        added = float(dowell_ratio(0.05, layers)) - 1.0
        assert added == pytest.approx(0.05**4 * (5.0 * layers**2 - 1.0) / 45.0, rel=1e-4)


def test_dowell_ratio_over_arrays_broadcasts_and_grows_with_layers() -> None:
    found = dowell_ratio(np.geomspace(0.01, 100.0, 40)[:, None], np.array([1, 2, 3, 8]))
    assert found.shape == (40, 4)
    assert np.all(np.diff(found, axis=1) > 0.0)


@pytest.mark.parametrize(("x", "layers"), [(-1.0, 1.0), (math.nan, 1.0), (math.inf, 1.0), (1.0, 0.0), (1.0, 1.5)])
def test_dowell_ratio_of_impossible_sizes_is_refused(x: float, layers: float) -> None:
    with pytest.raises(ValueError, match=r"x|layers"):
        dowell_ratio(x, layers)


def test_round_wire_layer_touching_has_the_direct_resistance_of_the_wire() -> None:
    """Touching turns: a square of the wire's area, side d sqrt(pi)/2, spread to the pitch by sqrt(side/pitch)."""
    side = 1e-3 * math.sqrt(math.pi) / 2.0
    for pitch in (1e-3, 1.7e-3):
        expected = side / 2e-4 * math.sqrt(side / pitch)
        assert float(round_wire_layer(1e-3, pitch, 2e-4)) == pytest.approx(expected, rel=1e-12)


def test_round_wire_layer_wider_than_its_pitch_is_refused() -> None:
    with pytest.raises(ValueError, match="pitch"):
        round_wire_layer(np.array([1e-3, 2e-3]), 1.5e-3, 1e-4)

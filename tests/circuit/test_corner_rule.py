"""The corner rule on functions that are linear in each variable: never below a point, infinite where D meets zero."""

from __future__ import annotations

import itertools

import numpy as np

from stresscheck.circuit.corner_rule import corner_rule
from stresscheck.circuit.corners import control_matrix, nodes


def _multiaffine(corner_values: np.ndarray, point: np.ndarray) -> complex:
    """Value at a point of [0,1]^n of the function with these corner values (first variable slowest)."""
    values = corner_values
    for part in point:
        half = len(values) // 2
        values = values[:half] * (1.0 - part) + values[half:] * part
    return complex(values[0])


def test_corner_rule_random_multiaffine_functions_never_below_a_point() -> None:
    rng = np.random.default_rng(7)
    finite = 0
    for _ in range(200):
        n = int(rng.integers(1, 5))
        centre = complex(rng.normal(), rng.normal())
        spread = rng.uniform(0.1, 1.2)
        below = centre + spread * (rng.normal(size=2**n) + 1j * rng.normal(size=2**n))
        above = rng.normal(size=2**n) + 1j * rng.normal(size=2**n)
        bound = corner_rule(np.abs(above)[None, :, None], below[None])[0, 0]
        finite += bool(np.isfinite(bound))
        for point in rng.random((50, n)):
            assert abs(_multiaffine(above, point) / _multiaffine(below, point)) <= bound * (1 + 1e-9)
    assert finite > 50


def test_corner_rule_series_tank_is_exact_whatever_the_detuning() -> None:
    """V_C = X_C E / (r + j(X_L - X_C)): at angle 0 the denominator is r: the bound is largest X_C / smallest r."""
    r, xl, xc = (1e-4, 2e-4), (0.9, 1.1), (0.95, 1.05)
    below, above = [], []
    for a, b, c in itertools.product(r, xl, xc):
        below.append(a + 1j * (b - c))
        above.append(c)
    bound = corner_rule(np.abs(np.array(above))[None, :, None], np.array(below)[None])[0, 0]
    assert bound == np.float64(1.05 / 1e-4) or abs(bound / (1.05 / 1e-4) - 1) < 1e-3


def test_corner_rule_denominator_around_zero_is_infinite() -> None:
    below = np.array([[1.0, 1j, -1.0, -1j]])
    assert np.isinf(corner_rule(np.ones((1, 4, 1)), below)).all()


def test_corner_rule_nan_corner_is_infinite() -> None:
    below = np.array([[1.0, np.nan]], dtype=complex)
    assert np.isinf(corner_rule(np.ones((1, 2, 1)), below)).all()
    assert np.isinf(corner_rule(np.full((1, 2, 1), np.nan), np.ones((1, 2), dtype=complex))).all()


def test_control_matrix_polynomials_give_bernstein_values() -> None:
    """x^k has Bernstein value C(i,k)/C(n,k) at i (partition of powers; exact in rationals)."""
    from math import comb

    for degree in (1, 2, 5, 9):
        x = nodes(degree)
        for power in range(degree + 1):
            expected = [comb(i, power) / comb(degree, power) for i in range(degree + 1)]
            assert np.allclose(control_matrix(degree) @ x**power, expected, atol=1e-9)

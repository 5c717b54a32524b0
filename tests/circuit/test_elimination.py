"""The batched elimination against LAPACK, and its refusal to answer what it can't vouch for."""

from __future__ import annotations

import numpy as np
import pytest

from stresscheck.circuit.elimination import solve_batch


def _systems(size: int, points: int, seed: int) -> tuple[np.ndarray, np.ndarray]:
    rng = np.random.default_rng(seed)
    matrix = rng.normal(size=(points, size, size)) + 1j * rng.normal(size=(points, size, size))
    rhs = rng.normal(size=(points, size, 3)) + 1j * rng.normal(size=(points, size, 3))
    return matrix, rhs


@pytest.mark.parametrize("size", [1, 2, 3, 5, 6, 7, 11])
def test_solve_batch_random_systems_agrees_with_lapack(size: int) -> None:
    matrix, rhs = _systems(size, 3000, size)
    expected = np.linalg.solve(matrix, rhs)
    found = solve_batch(matrix, rhs)
    condition = np.linalg.cond(matrix)[:, None, None]
    scale = np.abs(expected).max(axis=(1, 2), keepdims=True)
    assert (np.abs(found - expected) <= 1e-13 * condition * scale).all()


def test_solve_batch_zero_first_pivot_is_solved_by_pivoting() -> None:
    matrix = np.array([[[0.0, 1.0], [1.0, 0.0]]], dtype=complex)
    rhs = np.array([[[2.0], [3.0]]], dtype=complex)
    assert solve_batch(matrix, rhs)[0, :, 0] == pytest.approx([3.0, 2.0])


def test_solve_batch_singular_system_is_nan_and_leaves_the_others() -> None:
    matrix = np.array([[[1.0, 2.0], [2.0, 4.0]], [[2.0, 0.0], [0.0, 4.0]]], dtype=complex)
    rhs = np.array([[[1.0], [1.0]], [[2.0], [4.0]]], dtype=complex)
    found = solve_batch(matrix, rhs)
    assert np.isnan(found[0]).all()
    assert found[1, :, 0] == pytest.approx([1.0, 1.0])


def test_solve_batch_nan_in_matrix_is_nan_out() -> None:
    matrix = np.full((2, 3, 3), np.nan, dtype=complex)
    rhs = np.ones((2, 3, 1), dtype=complex)
    assert np.isnan(solve_batch(matrix, rhs)).all()

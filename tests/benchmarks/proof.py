"""How long it takes to find and prove worst cases, as ratios of one run, and how many boxes close to 5 %.

    python tests/benchmarks/proof.py [boxes] [--evolution]

With --evolution every box is also searched by scipy's differential evolution and by a million random points, on
its three functions with the loosest bounds: minutes instead of seconds.
"""

from __future__ import annotations

import os
import sys
import time
from pathlib import Path

os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
sys.path.insert(0, str(Path(__file__).resolve().parents[1] / "circuit"))

import numpy as np
from random_boxes import random_points, random_problem

from stresscheck.findings.worst import Problem, worst_case

GAP = 0.05


def prove(problem: Problem, budget: float = 10.0):
    """(result, seconds) of one problem, every function asked for, nothing decided beforehand."""
    start = time.perf_counter()
    none = np.full(len(problem.asked), np.nan)
    found = worst_case(problem, GAP, none, lambda decided: time.perf_counter() - start > budget)
    return found, time.perf_counter() - start


def share_closed(result) -> float:
    """Part of the functions whose bound is within the gap of the found value."""
    value, bound = result.peaks.value, result.bounds.bound
    return float((bound <= value * (1 + GAP + 1e-5) + 2 * result.noise).mean())


def by_q() -> None:
    """The same box at Q = 50 and Q = 10,000."""
    for seed, shape in ((0, "series"), (3, "ladder"), (4, "coupled")):
        times = {}
        for q in (50.0, 10_000.0):
            times[q] = min(prove(random_problem(seed, varying=3, q=q)[0])[1] for _ in range(3))
        print(f"  {shape:8} 3 varying: time at Q 10,000 over Q 50: {times[10_000.0] / times[50.0]:.2f}")


def by_varying() -> None:
    """Growth with the number of varying values, over a series tank's time."""
    base = min(prove(random_problem(0, varying=2, q=200.0)[0])[1] for _ in range(3))
    for count in range(2, 7):
        rows = [prove(random_problem(seed, varying=count, q=200.0)[0]) for seed in (3, 8, 13, 4, 9, 14)]
        times = [seconds for _, seconds in rows]
        boxes = [result.bounds.boxes for result, _ in rows]
        closed = np.mean([share_closed(result) for result, _ in rows])
        print(
            f"  {count} varying: median time {np.median(times) / base:7.1f} x a series tank's, "
            f"median boxes {int(np.median(boxes))}, closed {100 * closed:.0f} %"
        )


def many(count: int, evolution: bool) -> None:
    """Random boxes in the default budget: how many close, and whether anything lies above or below."""
    closed, functions, above, missed, times = 0, [], 0, 0, []
    for seed in range(count):
        problem, shape, q = random_problem(seed)
        result, seconds = prove(problem)
        times.append(seconds)
        functions.append(share_closed(result))
        closed += functions[-1] == 1.0
        points = random_points(problem, 1_000_000 if evolution else 20_000, np.random.default_rng(seed))
        best = np.max([np.nanmax(problem.values(part), axis=0) for part in np.array_split(points, 50)], axis=0)
        if evolution:
            best = np.maximum(best, _evolve(problem, result))
        above += int((best > result.bounds.bound).sum())
        short = (best > result.peaks.value * (1 + 1e-6)) & (best > result.noise)
        missed += int(short.sum())
        if short.any():
            print(
                f"    box {seed} ({shape}, Q {q:.0f}): {(best[short] / result.peaks.value[short]).max():.8f} of found"
            )
    print(f"  {count} boxes: closed whole {100 * closed / count:.1f} %, findings {100 * np.mean(functions):.1f} %")
    print(f"  points above a bound: {above}; functions where something larger was found: {missed}")
    print(f"  seconds a box: median {np.median(times):.3f}, 90 % {np.percentile(times, 90):.2f}, most {max(times):.1f}")


def _evolve(problem: Problem, result) -> np.ndarray:
    """Differential evolution on the three functions with the loosest bounds; the found values elsewhere."""
    from scipy.optimize import differential_evolution

    best = np.zeros(len(problem.asked))
    axes = problem.box.varying
    gap = result.bounds.bound / np.maximum(result.peaks.value, 1e-300)
    for function in np.argsort(-np.where(result.peaks.value > result.noise, gap, 0.0))[:3]:

        def objective(x: np.ndarray, function: int = int(function)) -> np.ndarray:
            points = np.repeat(problem.box.nominal[None], x.shape[1], axis=0)
            points[:, axes] = x.T
            return -problem.values(points)[:, function]

        ends = [(problem.box.low[a], problem.box.high[a]) for a in axes]
        found = differential_evolution(
            objective, ends, popsize=20, maxiter=400, tol=1e-10, seed=1, vectorized=True, updating="deferred"
        )
        best[function] = -found.fun
    return best


def against_evolution() -> None:
    """Time of finding and proving every function of a box over one differential evolution of one function."""
    for seed in (0, 3, 4):
        problem, shape, _ = random_problem(seed, varying=4, q=200.0)
        result, seconds = prove(problem)
        start = time.perf_counter()
        _evolve(problem, result)
        one = (time.perf_counter() - start) / 3
        ratio = seconds / one
        print(f"  {shape:8}: all {len(problem.asked)} functions found and proved over one evolution: {ratio:.3f}")


def main() -> None:
    """Print all tables."""
    count = next((int(a) for a in sys.argv[1:] if a.isdigit()), 200)
    print("time against Q")
    by_q()
    print("growth with varying values")
    by_varying()
    print("against differential evolution")
    against_evolution()
    print("random boxes")
    many(count, "--evolution" in sys.argv)


if __name__ == "__main__":
    main()

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

from stresscheck.circuit.axes import Axes, Axis
from stresscheck.circuit.curves import LossCurve
from stresscheck.circuit.laws import TAU, CapacitorLaw, InductorLaw, ResistorLaw
from stresscheck.circuit.network import Branch, Line, Network, Source
from stresscheck.findings.worst import Asked, Problem, worst_case
from stresscheck.stress.stresses import PartNotes

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


def ladder(varying: int, band: float) -> Problem:
    """Six L-C sections between 50 ohm, Q 200, of whose twelve reactive values the first so many vary by 5 %."""
    branches, axes, notes = [], [], {}
    hertz, none = 1e5, LossCurve("", None, np.zeros(1))
    for n in range(6):
        for kind, first, second in (("inductor", n, n + 1), ("capacitor", n + 1, -1)):
            name = f"{kind[0].upper()}{n}"
            coil = kind == "inductor"
            value = 80e-6 if coil else 30e-9
            law = InductorLaw(none, TAU * hertz / 200.0) if coil else CapacitorLaw(none, none)
            tolerance = 0.05 if len(axes) < varying else 0.0
            axes.append(Axis(name, value * (1 - tolerance), value, value * (1 + tolerance)))
            branches.append(Branch(name, "main", first, second, law, len(axes) - 1))
            notes[name] = PartNotes(kind)
    axes += [Axis("level", 1.0, 1.0, 1.0), Axis("f", hertz * (1 - band), hertz, hertz * (1 + band))]
    branches.append(Branch("load", "leakage", 6, -1, ResistorLaw(), None, 50.0))
    branches.append(Branch("D", "source", 0, -1, ResistorLaw(), None, 50.0, drive=0))
    source = Source("D", "voltage", "peak", 0, -1, len(branches) - 1, 50.0, 12, 1.0, 0.0, 0, 0.0)
    network = Network(
        Axes(tuple(axes)), tuple(f"n{i}" for i in range(7)), tuple(branches), (), (), (source,), (Line(13, (0,), 0),)
    )  # fmt: skip
    quantity = {"inductor": "current_peak", "capacitor": "voltage_peak"}
    return Problem(network, notes, [Asked(name, quantity[note.kind]) for name, note in notes.items()])


def by_varying() -> None:
    """Growth with the number of varying values: a ladder of twelve reactive values, one function of each."""
    for band in (0.0, 0.02):
        base = None
        for count in (2, 4, 6, 8, 10, 12):
            result, seconds = prove(ladder(count, band), budget=30.0)
            base = base or seconds
            print(
                f"  {count:2} varying, band {100 * band:.0f} %: {seconds / base:6.1f} x the time of two, "
                f"{result.bounds.boxes} boxes, closed {100 * share_closed(result):.0f} %"
            )


def coupled_pair() -> None:
    """Coupled resonators, seven varying values, against a series tank of three."""
    base = min(prove(random_problem(0, varying=3, q=200.0)[0])[1] for _ in range(3))
    for seed in (4, 9, 14, 19):
        result, seconds = prove(random_problem(seed, varying=7)[0])
        print(
            f"  coupled pair {seed}: {seconds / base:6.1f} x a series tank's time ({seconds:.2f} s), "
            f"{result.bounds.boxes} boxes, closed {100 * share_closed(result):.0f} %"
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
    print("seven varying values, coupled")
    coupled_pair()
    print("against differential evolution")
    against_evolution()
    print("random boxes")
    many(count, "--evolution" in sys.argv)


if __name__ == "__main__":
    main()

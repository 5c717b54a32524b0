"""Events of a six-part design against one numerical integration of the same length. Ratios only, one run.

python tests/benchmarks/events.py
"""

from __future__ import annotations

import sys
import time
from pathlib import Path

import numpy as np
import scipy.integrate

sys.path.insert(0, str(Path(__file__).resolve().parents[1] / "transient"))

from node_circuits import NodeCircuit

from stresscheck.chain import review
from stresscheck.circuit.build import build
from stresscheck.design.load import read_design
from stresscheck.transient.carried import Carried, carried
from stresscheck.transient.events import happening, stage
from stresscheck.transient.swing import largest

TAU = 2.0 * np.pi


def six_parts(q: float) -> NodeCircuit:
    """Two coupled tanks and a load: two capacitors, two coils, a resistor and the drive's own."""
    hertz, henry = 1e5, 100e-6
    farad = 1.0 / ((TAU * hertz) ** 2 * henry)
    ohm = TAU * hertz * henry / q
    return NodeCircuit(
        [farad, farad], [(0, -1, henry, ohm), (0, 1, 5.0 * henry, 5.0 * ohm)], [(1, -1, 2e4)], hertz, 10.0, 500.0
    )


def shortest(work, times: int = 5) -> float:
    """Shortest of several runs: what the machine can do."""
    took = []
    for _ in range(times):
        start = time.perf_counter()
        work()
        took.append(time.perf_counter() - start)
    return min(took)


def integration(circuit: NodeCircuit, cycles: float) -> float:
    """One solve_ivp of a switch-on at 1e-8, both phases at once, over the same time."""
    a, b, _, _ = circuit.system()
    w, size = TAU * circuit.hertz, len(a)

    def rhs(t: float, y: np.ndarray) -> np.ndarray:
        z = y[:size] + 1j * y[size:]
        d = a @ z + b * circuit.level * np.exp(1j * w * t)
        return np.concatenate([d.real, d.imag])

    def work() -> None:
        scipy.integrate.solve_ivp(
            rhs, (0.0, cycles / circuit.hertz), np.zeros(2 * size), method="DOP853", rtol=1e-8, atol=1e-10
        )

    return shortest(work, 2)


def main() -> None:
    """Print one line for each Q."""
    print("six parts; solve_ivp over 3 Q cycles = 1")
    print(f"{'Q':>6} {'one switch-on, all responses':>30} {'on and off':>12} {'whole review':>14}")
    for q in (10.0, 100.0, 1000.0):
        circuit = six_parts(q)
        design = read_design(circuit.text())
        network = build(design)
        point = network.axes.nominal
        reference = integration(circuit, 3.0 * q)
        one = shortest(lambda n=network, p=point: largest(happening(stage(n, p), Carried.nothing())))

        def events(n=network, p=point) -> None:
            on, off = stage(n, p), stage(n, p, running=False)
            largest(happening(on, Carried.nothing()))
            largest(happening(off, carried(n, p)))

        whole = shortest(events)
        steady = shortest(lambda d=design: review(d), 3)
        print(f"{q:6.0f} {one / reference:30.4f} {whole / reference:12.4f} {steady / reference:14.4f}")


if __name__ == "__main__":
    main()

"""Random circuits whose states are plain to write down: a capacitor at every node, coils with resistance between nodes.

C v' = -G v - A i + B u,   L i' = A^T v - R i,   with one voltage drive behind a resistance at the first node.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
import scipy.integrate
import scipy.linalg

TAU = 2.0 * np.pi
BIG = 'rating = { voltage_dc = "90 MV", voltage_peak = "90 MV", voltage_rms = "90 MV", current_peak = "1 MA" }'
COIL = 'rating = { voltage_peak = "90 MV", current_peak = "1 MA", current_rms = "1 MA" }\nfamily = "air core"'


@dataclass
class NodeCircuit:
    """capacitors: farad per node; coils: (node, node, henry, ohm), -1 is ground; resistors: (node, node, ohm);
    k: coupling of the first two coils."""

    capacitors: list[float]
    coils: list[tuple[int, int, float, float]]
    resistors: list[tuple[int, int, float]]
    hertz: float
    level: float = 1.0
    source_ohm: float = 1.0
    k: float = 0.0
    extra: str = ""
    tolerance: str = ""
    lines: list[str] = field(default_factory=list)

    def text(self, states: str = "") -> str:
        def node(n: int) -> str:
            return "ground" if n < 0 else f"n{n}"

        slack = f'tolerance = "{self.tolerance}"\n' if self.tolerance else ""
        out = ['title = "nodes"', 'derating = "as-rated"', "[drive.D]", 'between = ["n0", "ground"]']
        out += [f'peak = "{self.level!r} V"', f'frequency = "{self.hertz!r} Hz"', self.extra]
        out += [f'source_resistance = "{self.source_ohm!r} ohm"', 'rating = { current_peak = "1 MA" }']
        for n, c in enumerate(self.capacitors):
            out += [f'[capacitor.C{n}]\nbetween = ["{node(n)}", "ground"]\nvalue = "{c!r} F"\n{slack}{BIG}']
        for n, (a, b, henry, ohm) in enumerate(self.coils):
            out += [f'[inductor.L{n}]\nbetween = ["{node(a)}", "{node(b)}"]\nvalue = "{henry!r} H"\n{slack}'
                    f'resistance = "{ohm!r} ohm"\n{COIL}']  # fmt: skip
        for n, (a, b, ohm) in enumerate(self.resistors):
            out += [f'[resistor.R{n}]\nbetween = ["{node(a)}", "{node(b)}"]\nvalue = "{ohm!r} ohm"\n{slack}'
                    'rating = { voltage_peak = "90 MV", dissipation = "90 MW" }']  # fmt: skip
        if self.k:
            out += [f'[coupling.K]\nof = ["L0", "L1"]\nfactor = {self.k!r}']
        return "\n".join([*out, states])

    def system(self) -> tuple[np.ndarray, np.ndarray, np.ndarray, np.ndarray]:
        """A, B of x' = A x + B u, x = (node voltages, coil currents); and C, L."""
        n, m = len(self.capacitors), len(self.coils)
        g = np.zeros((n, n))
        g[0, 0] += 1.0 / self.source_ohm
        for a, b, ohm in self.resistors:
            for one, two, sign in ((a, a, 1), (b, b, 1), (a, b, -1), (b, a, -1)):
                if one >= 0 and two >= 0:
                    g[one, two] += sign / ohm
        join = np.zeros((n, m))
        for column, (a, b, _, _) in enumerate(self.coils):
            for node, sign in ((a, 1.0), (b, -1.0)):
                if node >= 0:
                    join[node, column] += sign
        henry = np.diag([coil[2] for coil in self.coils])
        if self.k:
            henry[0, 1] = henry[1, 0] = self.k * np.sqrt(henry[0, 0] * henry[1, 1])
        ohm = np.diag([coil[3] for coil in self.coils])
        c = np.diag(self.capacitors)
        left = scipy.linalg.block_diag(c, henry)
        right = np.block([[-g, -join], [join.T, -ohm]])
        push = np.zeros(n + m)
        push[0] = 1.0 / self.source_ohm
        return np.linalg.solve(left, right), np.linalg.solve(left, push), c, henry

    def responses(self, x: np.ndarray, dx: np.ndarray) -> dict[str, np.ndarray]:
        """Stresses over time from states [n + m, times] and their derivatives, complex for worst phases."""
        n = len(self.capacitors)
        out = {}
        for i in range(n):
            out[f"C{i}.voltage_peak"] = x[i]
            out[f"C{i}.current_peak"] = self.capacitors[i] * dx[i]
        for j, (a, b, _, _) in enumerate(self.coils):
            out[f"L{j}.current_peak"] = x[n + j]
            out[f"L{j}.voltage_peak"] = (x[a] if a >= 0 else 0.0) - (x[b] if b >= 0 else 0.0)
        for j, (a, b, _) in enumerate(self.resistors):
            out[f"R{j}.voltage_peak"] = (x[a] if a >= 0 else 0.0) - (x[b] if b >= 0 else 0.0)
        return out

    def steady(self) -> np.ndarray:
        """Complex steady state at the drive's frequency."""
        a, b, _, _ = self.system()
        return np.linalg.solve(1j * TAU * self.hertz * np.eye(len(a)) - a, b * self.level)

    def tops(self, start: np.ndarray, driven: bool, cycles: float) -> dict[str, float]:
        """Largest size over time and phase from complex start values, by solve_ivp at 1e-10 for both phases."""
        a, b, _, _ = self.system()
        w = TAU * self.hertz
        size = len(a)
        level = self.level if driven else 0.0

        def rhs(t: float, y: np.ndarray) -> np.ndarray:
            z = y[:size] + 1j * y[size:]
            d = a @ z + b * level * np.exp(1j * w * t)
            return np.concatenate([d.real, d.imag])

        end = cycles / self.hertz
        fastest = max(w, np.abs(np.linalg.eigvals(a)).max())
        times = np.linspace(0.0, end, int(end * fastest / TAU * 160) + 100)
        got = scipy.integrate.solve_ivp(
            rhs, (0.0, end), np.concatenate([start.real, start.imag]), method="DOP853", t_eval=times, rtol=1e-10,
            atol=1e-12 * (1.0 + np.abs(start).max()),
        )  # fmt: skip
        z = got.y[:size] + 1j * got.y[size:]
        dz = a @ z + b[:, None] * level * np.exp(1j * w * got.t)
        return {key: _top(np.abs(value)) for key, value in self.responses(z, dz).items()}


def _top(values: np.ndarray) -> float:
    """Largest value, between the instants by a parabola."""
    i = int(values.argmax())
    if i in (0, len(values) - 1):
        return float(values[i])
    y0, y1, y2 = values[i - 1 : i + 2]
    return float(y1 - 0.125 * (y0 - y2) ** 2 / (y0 - 2.0 * y1 + y2))


def random_nodes(seed: int) -> NodeCircuit:
    """Two to four nodes; poles within two decades so that the integration stays short."""
    rng = np.random.default_rng(seed)
    n = int(rng.integers(2, 5))
    size = lambda: float(np.exp(rng.normal(0.0, 0.5)))  # noqa: E731
    q = float(10 ** rng.uniform(0.5, 1.7))
    capacitors = [30e-9 * size() for _ in range(n)]
    coils = [(i, i + 1, 80e-6 * size(), 50.0 / q * size()) for i in range(n - 1)]
    coils.append((n - 1, -1, 80e-6 * size(), 50.0 / q * size()))
    resistors = [(int(rng.integers(0, n)), -1, 200.0 * size())]
    k = float(rng.uniform(-0.6, 0.6)) if rng.random() < 0.5 else 0.0
    hertz = float(rng.uniform(5e4, 2e5))
    return NodeCircuit(capacitors, coils, resistors, hertz, float(rng.uniform(1, 20)), float(rng.uniform(5, 80)), k)

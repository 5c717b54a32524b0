"""Random linear circuits from a seed: as a design file, and solved in the test by a method of its own."""

from __future__ import annotations

import math
from dataclasses import dataclass, field

import numpy as np
import scipy.linalg

TAU = 2.0 * math.pi
RATINGS = {
    "capacitor": 'rating = { voltage_dc = "90 MV", voltage_rms = "90 MV", current_rms = "1 MA", current_peak = "1 MA", '
    'reactive_power = "900 Mvar", dissipation = "900 MW" }',
    "inductor": 'family = "air core"\nrating = { current_rms = "1 MA", current_peak = "1 MA", voltage_peak = "90 MV", '
    'dissipation = "900 MW" }',
    "resistor": 'rating = { dissipation = "900 MW", voltage_peak = "90 MV" }',
}
UNIT = {"capacitor": "F", "inductor": "H", "resistor": "ohm"}


@dataclass
class Circuit:
    """Parts (kind, name, node, node, value, loss), couplings (name, name, k), transformer, drives.

    loss: tan delta of a capacitor, resistance of an inductor. A drive: (name, node, node, hertz, level, phase, unit,
    ohm); phases are stated, so drives of one frequency add as phasors.
    """

    parts: list[tuple[str, str, str, str, float, float]] = field(default_factory=list)
    couplings: list[tuple[str, str, float]] = field(default_factory=list)
    transformer: tuple[str, str, str, float, float] | None = None
    drives: list[tuple[str, str, str, float, float, float, str, float]] = field(default_factory=list)

    def text(self) -> str:
        """The circuit as a design file."""
        out = ['title = "random circuit"', 'derating = "as-rated"']
        for name, a, b, hertz, level, phase, unit, ohm in self.drives:
            out.append(
                f'[drive.{name}]\nbetween = ["{a}", "{b}"]\npeak = "{level!r} {unit}"\nfrequency = "{hertz!r} Hz"\n'
                f'phase = {phase!r}\nsource_resistance = "{ohm!r} ohm"\n'
                'rating = { current_peak = "1 MA", power = "900 MW" }'
            )
        for kind, name, a, b, value, loss in self.parts:
            extra = {
                "capacitor": f"dissipation_factor = {loss!r}", "inductor": f'resistance = "{loss!r} ohm"', "resistor": "",
            }[kind]  # fmt: skip
            out.append(
                f'[{kind}.{name}]\nbetween = ["{a}", "{b}"]\nvalue = "{value!r} {UNIT[kind]}"\n{extra}\n{RATINGS[kind]}'
            )
        for one, two, k in self.couplings:
            out.append(f'[coupling.{one}-{two}]\nof = ["{one}", "{two}"]\nfactor = {k!r}')
        if self.transformer:
            a, b, c, n1, n2 = self.transformer
            out.append(
                f'[transformer.T]\nprimary = ["{a}", "ground"]\nsecondary = ["{b}", "{c}"]\nturns = [{n1!r}, {n2!r}]'
            )
        return "\n".join(out)

    def frequencies(self) -> list[float]:
        return sorted({d[3] for d in self.drives})

    def solve(self, hertz: float, solver=None) -> dict[str, tuple[complex, complex]]:
        """Peak voltage and current of every part and drive at one frequency, by a tableau of its own.

        Unknowns: all node voltages, then all element currents. Drives of other frequencies are at rest. A drive's pair
        is (terminal voltage, current sent into the circuit).
        """
        nodes = sorted({n for p in self.parts for n in p[2:4]} | {n for d in self.drives for n in d[1:3]} - {"ground"})
        nodes = [n for n in nodes if n != "ground"]
        elements = [p[1] for p in self.parts] + [d[0] for d in self.drives] + (["T1", "T2"] if self.transformer else [])
        size = len(nodes) + len(elements)
        matrix = np.zeros((size, size), dtype=complex)
        rhs = np.zeros(size, dtype=complex)
        place = {n: i for i, n in enumerate(nodes)}
        column = {e: len(nodes) + i for i, e in enumerate(elements)}

        def connect(element: str, a: str, b: str) -> None:
            for node, sign in ((a, 1.0), (b, -1.0)):
                if node in place:
                    matrix[place[node], column[element]] += sign

        def voltage(row: int, a: str, b: str, factor: complex = 1.0) -> None:
            for node, sign in ((a, 1.0), (b, -1.0)):
                if node in place:
                    matrix[row, place[node]] += sign * factor

        w = TAU * hertz
        values = {p[1]: p[4] for p in self.parts}
        for kind, name, a, b, value, loss in self.parts:
            connect(name, a, b)
            row = column[name]
            voltage(row, a, b)
            z = {"resistor": value, "inductor": loss + 1j * w * value, "capacitor": (loss - 1j) / (w * value)}[kind]
            matrix[row, row] -= z
        for one, two, k in self.couplings:
            m = 1j * w * k * math.sqrt(values[one] * values[two])
            matrix[column[one], column[two]] -= m
            matrix[column[two], column[one]] -= m
        for name, a, b, f, level, phase, unit, ohm in self.drives:
            connect(name, b, a)  # its current flows out of the first node into the circuit
            row = column[name]
            size_now = level * np.exp(1j * math.radians(phase)) if f == hertz else 0.0
            voltage(row, a, b)
            if unit == "V":
                matrix[row, row] += ohm
                rhs[row] = size_now
            else:
                matrix[row, row] += ohm
                rhs[row] = size_now * ohm
        if self.transformer:
            a, b, c, n1, n2 = self.transformer
            connect("T1", a, "ground")
            connect("T2", b, c)
            voltage(column["T1"], a, "ground", n2)
            voltage(column["T1"], b, c, -n1)
            matrix[column["T2"], column["T1"]] = n1
            matrix[column["T2"], column["T2"]] = n2
        x = (solver or scipy.linalg.solve)(matrix, rhs)
        potential = {n: x[i] for n, i in place.items()} | {"ground": 0.0}
        ends = {p[1]: p[2:4] for p in self.parts} | {d[0]: d[1:3] for d in self.drives}
        return {e: (potential[a] - potential[b], x[column[e]]) for e, (a, b) in ends.items()}


def random_circuit(seed: int) -> Circuit:
    """3 to 10 parts in a connected circuit with losses, couplings, a transformer now and then, one to three drives."""
    rng = np.random.default_rng(seed)
    circuit = Circuit()
    nodes = [f"n{i}" for i in range(int(rng.integers(2, 5)))]
    q = float(10 ** rng.uniform(0.5, 4))

    def add(kind: str, a: str, b: str) -> str:
        size = float(np.exp(rng.normal(0.0, 0.7)))
        name = f"{kind[0].upper()}{len(circuit.parts)}"
        value = {"resistor": 50.0 * size, "inductor": 80e-6 * size, "capacitor": 30e-9 * size}[kind]
        loss = {"resistor": 0.0, "inductor": 50.0 * size / q, "capacitor": 0.3 / q}[kind]
        circuit.parts.append((kind, name, a, b, value, loss))
        return name

    kinds = ("inductor", "capacitor", "inductor", "capacitor", "resistor")
    for i, node in enumerate(nodes):
        add(str(rng.choice(kinds)), node, nodes[i - 1] if i and rng.random() < 0.7 else "ground")
        add(str(rng.choice(kinds)), node, "ground" if rng.random() < 0.5 or i == 0 else nodes[int(rng.integers(0, i))])
    coils = [p[1] for p in circuit.parts if p[0] == "inductor"]
    if len(coils) >= 2 and rng.random() < 0.6:
        circuit.couplings.append((coils[0], coils[1], float(rng.uniform(-0.7, 0.7))))
    if rng.random() < 0.4:
        circuit.parts.append(("resistor", "RT", "t", "ground", float(rng.uniform(5, 200)), 0.0))
        circuit.transformer = (nodes[0], "t", "ground", 3.0, float(rng.integers(1, 9)))
    hertz = float(rng.uniform(6e4, 1.6e5))
    for n in range(int(rng.integers(1, 4))):
        f = hertz if n < 2 else 1.7 * hertz
        unit = "A" if rng.random() < 0.3 else "V"
        node = nodes[int(rng.integers(0, len(nodes)))]
        ohm = float(rng.uniform(1.0, 100.0))
        circuit.drives.append(
            (f"D{n}", node, "ground", f, float(rng.uniform(1, 20)), float(rng.uniform(-180, 180)), unit, ohm)
        )
    return circuit

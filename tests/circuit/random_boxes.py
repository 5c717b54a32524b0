"""Random networks with a tolerance box, from a seed: series, parallel, tapped, ladder and coupled circuits."""

from __future__ import annotations

import numpy as np

from stresscheck.circuit.axes import Axes, Axis
from stresscheck.circuit.curves import LossCurve
from stresscheck.circuit.laws import TAU, CapacitorLaw, InductorLaw, Law, ResistorLaw
from stresscheck.circuit.modes import mode_hertz
from stresscheck.circuit.network import Branch, Coupling, Line, Network, Source
from stresscheck.findings.worst import Asked, Problem
from stresscheck.stress.stresses import PartNotes

NONE = LossCurve("", None, np.zeros(1))
HERTZ, OHM = 1e5, 50.0
SHAPES = ("series", "parallel", "tapped", "ladder", "coupled")
QUANTITIES = {
    "capacitor": ("voltage_peak", "current_rms", "reactive_power", "dissipation"),
    "inductor": ("voltage_peak", "current_peak", "dissipation"),
    "resistor": ("voltage_peak", "dissipation"),
    "drive": ("current_peak", "power"),
}


class _Maker:
    """Collects parts; lives only inside `random_problem`."""

    def __init__(self, rng: np.random.Generator, q: float) -> None:
        self.rng, self.q = rng, q
        self.values: list[tuple[str, float, float]] = []
        self.branches: list[Branch] = []
        self.notes: dict[str, PartNotes] = {}

    def add(self, kind: str, first: int, second: int, scale: float = 1.0) -> int:
        value, law = self._value(kind, scale * float(np.exp(self.rng.normal(0.0, 0.25))))
        name = f"{kind[0].upper()}{len(self.branches)}"
        self.values.append((name, value, float(self.rng.uniform(0.01, 0.1))))
        self.branches.append(Branch(name, "main", first, second, law, len(self.values) - 1))
        self.notes[name] = PartNotes(kind)
        return len(self.branches) - 1

    def _value(self, kind: str, scale: float) -> tuple[float, Law]:
        if kind == "capacitor":
            loss = LossCurve("", None, np.array([0.1 / self.q]))
            return 1.0 / (TAU * HERTZ * OHM * scale), CapacitorLaw(loss, NONE)
        if kind == "inductor":
            return OHM * scale / (TAU * HERTZ), InductorLaw(NONE, TAU * HERTZ / self.q)
        return OHM * scale, ResistorLaw()


def random_problem(seed: int, varying: int | None = None, q: float | None = None) -> tuple[Problem, str, float]:
    """A problem that asks for every quantity of every part; its shape's name; its coils' Q (5 to 10,000)."""
    rng = np.random.default_rng(seed)
    shape = SHAPES[seed % len(SHAPES)]
    q = float(10 ** rng.uniform(np.log10(5), 4)) if q is None else q
    maker = _Maker(rng, q)
    couplings = _wire(maker, shape, rng)
    count = min(int(rng.integers(2, 8)) if varying is None else varying, len(maker.values))
    chosen = {int(i) for i in rng.permutation(len(maker.values))[:count]}
    band = float(rng.choice([0.0, 0.0, 0.02]))
    network = _network(maker, couplings, chosen, HERTZ, 0.0, rng)
    modes = mode_hertz(network, network.axes.nominal[None])[0]
    near = [m for m in modes[np.isfinite(modes)] if HERTZ / 20 < m < 20 * HERTZ]
    tuned = float(rng.choice(near)) if near else HERTZ
    network = _network(maker, couplings, chosen, tuned * float(rng.uniform(0.97, 1.03)), band, rng)
    asked = [Asked(name, quantity) for name, note in maker.notes.items() for quantity in QUANTITIES[note.kind]]
    return Problem(network, maker.notes, asked), shape, q


def _wire(maker: _Maker, shape: str, rng: np.random.Generator) -> tuple[Coupling, ...]:
    add = maker.add
    if shape == "series":
        add("inductor", 0, 1), add("capacitor", 1, 2), add("resistor", 2, -1, 1.0 / maker.q)
    elif shape == "parallel":
        add("resistor", 0, 1, maker.q / 3), add("inductor", 1, -1), add("capacitor", 1, -1)
    elif shape == "tapped":
        add("resistor", 0, 1, 1.0), add("capacitor", 1, -1, 0.3), add("capacitor", 1, 2), add("inductor", 2, -1)
        add("resistor", 2, -1, maker.q)
    elif shape == "ladder":
        add("inductor", 0, 1), add("capacitor", 1, -1), add("inductor", 1, 2), add("capacitor", 2, -1)
        add("resistor", 2, -1, maker.q)
    else:
        add("capacitor", 0, 1)
        one = add("inductor", 1, -1)
        two = add("inductor", 2, -1)
        add("capacitor", 2, 3), add("resistor", 3, -1, float(10 ** rng.uniform(-2, 0)))
        maker.values.append(("K", float(10 ** rng.uniform(-2.0, -0.4)), 0.1))
        return (Coupling("K", one, two, len(maker.values) - 1),)
    return ()


def _network(
    maker: _Maker,
    couplings: tuple[Coupling, ...],
    chosen: set[int],
    hertz: float,
    band: float,
    rng: np.random.Generator,
) -> Network:
    axes = [
        Axis(name, v * (1 - t), v, v * (1 + t)) if i in chosen else Axis(name, v, v, v)
        for i, (name, v, t) in enumerate(maker.values)
    ]
    axes.append(Axis("level", 1.0, 1.0, 1.0))
    axes.append(Axis("frequency", hertz * (1 - band), hertz, hertz * (1 + band)))
    ohm = OHM / maker.q / 4
    drive = Branch("D", "source", 0, -1, ResistorLaw(), None, ohm, drive=0)
    maker.notes["D"] = PartNotes("drive")
    nodes = 1 + max(max(b.first, b.second) for b in maker.branches)
    source = Source("D", "voltage", "peak", 0, -1, len(maker.branches), ohm, len(axes) - 2, 1.0, 0.0, 0, 0.0)
    return Network(
        Axes(tuple(axes)), tuple(f"n{i}" for i in range(nodes)), (*maker.branches, drive), couplings, (), (source,),
        (Line(len(axes) - 1, (0,), 0),),
    )  # fmt: skip


def random_points(problem: Problem, count: int, rng: np.random.Generator) -> np.ndarray:
    """Points of the box: half uniform, half with every value at an end or uniform by coin."""
    low, high = problem.box.low, problem.box.high
    part = rng.random((count, len(low)))
    ends = rng.random((count, len(low))) < 0.5
    half = np.arange(count)[:, None] < count // 2
    part = np.where(ends & half, np.round(part), part)
    return np.asarray(low + (high - low) * part)

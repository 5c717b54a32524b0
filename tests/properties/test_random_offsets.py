"""Random circuits with direct offsets, and what their drives carry, against a solution of the test's own."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
import scipy.linalg
from random_circuits import Circuit, random_circuit

from stresscheck.chain import review
from stresscheck.design.load import read_design
from stresscheck.findings.finding import Finding

SEEDS = range(12)


def _circuit(seed: int) -> Circuit:
    """Without transformer (at rest it decides nothing), every node tied to ground by a resistor of some kilohms."""
    circuit = random_circuit(seed)
    parts = [p for p in circuit.parts if p[1] != "RT"]
    nodes = sorted({n for p in parts for n in p[2:4]} - {"ground"})
    ties = [("resistor", f"Rtie{n}", n, "ground", 3000.0 + 400.0 * i, 0.0) for i, n in enumerate(nodes)]
    return replace(circuit, parts=[*parts, *ties], transformer=None)


def _offsets(circuit: Circuit, seed: int) -> list[float]:
    rng = np.random.default_rng(1000 + seed)
    return [float(rng.uniform(-30.0, 30.0)) for _ in circuit.drives]


def _reviewed(circuit: Circuit, offsets: list[float]) -> dict[str, Finding]:
    text = circuit.text()
    for drive, dc in zip(circuit.drives, offsets, strict=True):
        head = f"[drive.{drive[0]}]\n"
        assert text.count(head) == 1
        text = text.replace(head, f'{head}offset = "{dc!r} {drive[6]}"\n')
    text = text.replace('current_peak = "1 MA", power', 'current_peak = "1 MA", current_rms = "1 MA", power')
    record = review(read_design(text))
    assert record.problems == ()
    return {f.id.removesuffix("@normal"): f for f in record.findings}


def _at_rest(circuit: Circuit, offsets: list[float]) -> dict[str, tuple[float, float]]:
    """Direct voltage and current of parts and drives: conductances alone, coils by their resistance, C open."""
    nodes = sorted({n for p in circuit.parts for n in p[2:4]} - {"ground"})
    place = {n: i for i, n in enumerate(nodes)}
    g, sent = np.zeros((len(nodes), len(nodes))), np.zeros(len(nodes))

    def stamp(a: str, b: str, siemens: float) -> None:
        for one, other in ((a, b), (b, a)):
            if one in place:
                g[place[one], place[one]] += siemens
                if other in place:
                    g[place[one], place[other]] -= siemens

    siemens = {
        p[1]: {"resistor": 1.0 / p[4], "inductor": 1.0 / (p[5] or 1.0), "capacitor": 0.0}[p[0]] for p in circuit.parts
    }
    for _, name, a, b, _, _ in circuit.parts:
        stamp(a, b, siemens[name])
    for (_, a, b, _, _, _, unit, ohm), dc in zip(circuit.drives, offsets, strict=True):
        stamp(a, b, 1.0 / ohm)
        for node, sign in ((a, 1.0), (b, -1.0)):
            if node in place:
                sent[place[node]] += sign * (dc / ohm if unit == "V" else dc)
    x = scipy.linalg.solve(g, sent)
    potential = {n: float(x[i]) for n, i in place.items()} | {"ground": 0.0}
    out = {
        p[1]: (potential[p[2]] - potential[p[3]], siemens[p[1]] * (potential[p[2]] - potential[p[3]]))
        for p in circuit.parts
    }
    for (name, a, b, _, _, _, unit, ohm), dc in zip(circuit.drives, offsets, strict=True):
        volt = potential[a] - potential[b]
        out[name] = (volt, (dc - volt) / ohm if unit == "V" else dc - volt / ohm)
    return out


def _lines(circuit: Circuit, name: str) -> list[tuple[complex, complex]]:
    return [circuit.solve(f)[name] for f in circuit.frequencies()]


def _close(found: dict[str, Finding], expected: dict[str, float], quantity: str) -> None:
    wanted = {key: value for key, value in expected.items() if key.endswith("." + quantity)}
    assert wanted
    scale = max(abs(v) for v in wanted.values())
    for key, value in wanted.items():
        assert found[key].nominal == pytest.approx(value, abs=1e-9 * scale), key


@pytest.mark.parametrize("seed", SEEDS)
def test_random_circuit_with_offsets_parts_agree(seed: int) -> None:
    """Peak = |DC| + sum of peaks; rms of a current and heat with DC, rms voltage of a capacitor without."""
    circuit = _circuit(seed)
    offsets = _offsets(circuit, seed)
    found, still = _reviewed(circuit, offsets), _at_rest(circuit, offsets)
    expected: dict[str, float] = {}
    for kind, name, _, _, value, loss in circuit.parts:
        at, (volt, ampere) = _lines(circuit, name), still[name]
        expected[f"{name}.voltage_peak"] = abs(volt) + sum(abs(v) for v, _ in at)
        ac = [0.5 * abs(i) ** 2 for _, i in at]
        ohms = {
            "resistor": [value] * len(at), "inductor": [loss] * len(at),
            "capacitor": [loss / (2 * math.pi * f * value) for f in circuit.frequencies()],
        }[kind]  # fmt: skip
        direct = {"resistor": value, "inductor": loss, "capacitor": 0.0}[kind] * ampere**2
        expected[f"{name}.dissipation"] = direct + sum(r * i2 for r, i2 in zip(ohms, ac, strict=True))
        if kind == "inductor":
            expected[f"{name}.current_peak"] = abs(ampere) + sum(abs(i) for _, i in at)
        if kind != "resistor":
            expected[f"{name}.current_rms"] = math.sqrt(ampere**2 + sum(ac))
        if kind == "capacitor":
            expected[f"{name}.voltage_rms"] = math.sqrt(sum(0.5 * abs(v) ** 2 for v, _ in at))
    for quantity in (
        "voltage_peak",
        "dissipation",
        *{k.split(".")[1] for k in expected if "current" in k or "rms" in k},
    ):
        _close(found, expected, quantity)


def _drive_current(circuit: Circuit, index: int) -> list[complex]:
    """Current into the circuit at each frequency, outside the drive's own resistance.

    The tableau's branch of a current drive is the drive with its resistance, so what it sends is the terminal current.
    """
    return [i for _, i in _lines(circuit, circuit.drives[index][0])]


@pytest.mark.parametrize("seed", SEEDS)
def test_random_circuit_with_offsets_drive_currents_agree(seed: int) -> None:
    """Current at the terminals: |DC| + peaks of every frequency, those of the other drives included."""
    circuit = _circuit(seed)
    offsets = _offsets(circuit, seed)
    found, still = _reviewed(circuit, offsets), _at_rest(circuit, offsets)
    for index, drive in enumerate(circuit.drives):
        dc, sizes = abs(still[drive[0]][1]), [abs(i) for i in _drive_current(circuit, index)]
        assert found[f"{drive[0]}.current_peak"].nominal == pytest.approx(dc + sum(sizes), rel=1e-9, abs=1e-9)
        rms = math.sqrt(dc**2 + sum(0.5 * s * s for s in sizes))
        assert found[f"{drive[0]}.current_rms"].nominal == pytest.approx(rms, rel=1e-9, abs=1e-9)


@pytest.mark.parametrize("unit", ["V", "A"])
@pytest.mark.parametrize("seed", range(6))
def test_random_circuit_power_of_one_drive_with_offset_is_all_that_the_parts_dissipate(seed: int, unit: str) -> None:
    """Tellegen, at rest and at the drive's frequency: one drive alone, so nothing flows back into another."""
    circuit = _circuit(seed)
    circuit = replace(circuit, drives=[(*circuit.drives[0][:6], unit, circuit.drives[0][7])])
    found = _reviewed(circuit, [_offsets(circuit, seed)[0]])
    spent = sum(f.nominal for key, f in found.items() if key.endswith(".dissipation") and f.nominal is not None)
    assert spent > 0.0
    assert found["D0.power"].nominal == pytest.approx(spent, rel=1e-7)


@pytest.mark.parametrize("seed", range(4))
def test_random_box_no_point_exceeds_the_bound_and_the_worst_is_reached(seed: int) -> None:
    """Two parts with tolerances: no random point, solved by the test, above bound; none above worst by more than 1e-6."""
    circuit = replace(_circuit(seed), drives=_circuit(seed).drives[:1])
    chosen = [p[1] for p in circuit.parts if p[0] != "resistor"][:2] or [circuit.parts[0][1]]
    text = circuit.text()
    for name in chosen:
        line = next(p for p in circuit.parts if p[1] == name)
        head = f"[{line[0]}.{name}]\n"
        text = text.replace(head, f'{head}tolerance = "8 %"\n')
    record = review(read_design(text), budget=10.0)
    found = {f.id.removesuffix("@normal"): f for f in record.findings}
    rng = np.random.default_rng(seed)
    largest: dict[str, float] = {}
    for _ in range(300):
        factor = {name: 1.0 + 0.08 * float(rng.uniform(-1, 1)) for name in chosen}
        moved = replace(circuit, parts=[(k, n, a, b, v * factor.get(n, 1.0), r) for k, n, a, b, v, r in circuit.parts])
        at = moved.solve(circuit.drives[0][3])
        for name in (p[1] for p in circuit.parts):
            largest[name] = max(largest.get(name, 0.0), abs(at[name][0]))
    scale = max(largest.values())
    for name, volt in largest.items():
        finding = found[f"{name}.voltage_peak"]
        assert finding.worst is not None
        assert finding.bound is not None
        assert volt <= finding.worst * (1 + 1e-6) + 1e-9 * scale, name
        assert finding.worst <= finding.bound * (1 + 1e-12), name


@pytest.mark.parametrize("unit", ["V", "A"])
@pytest.mark.parametrize("seed", range(2))
def test_random_box_with_offset_no_point_exceeds_the_bounds_of_the_drive(seed: int, unit: str) -> None:
    """Load resistors of +-20 % and an offset: current and power of the drive at random points stay below the bounds."""
    circuit = _circuit(seed)
    circuit = replace(circuit, drives=[(*circuit.drives[0][:6], unit, circuit.drives[0][7])])
    load = ("resistor", "Rload", circuit.drives[0][1], "ground", 20.0, 0.0)
    circuit = replace(circuit, parts=[*circuit.parts, load])
    dc, hertz = 25.0, circuit.drives[0][3]
    text = circuit.text().replace("[drive.D0]\n", f'[drive.D0]\noffset = "{dc!r} {unit}"\n')
    text = text.replace("[resistor.Rload]\n", '[resistor.Rload]\ntolerance = "20 %"\n')
    found = {f.id.removesuffix("@normal"): f for f in review(read_design(text), budget=10.0).findings}
    current, power = found["D0.current_peak"], found["D0.power"]
    assert current.bound is not None
    assert power.bound is not None
    assert current.worst is not None
    assert power.worst is not None
    amperes, watts = [], []
    for factor in np.linspace(0.8, 1.2, 41):
        moved = replace(circuit, parts=[*circuit.parts[:-1], (*load[:4], 20.0 * float(factor), 0.0)])
        (volt, ampere), (still_volt, still) = moved.solve(hertz)["D0"], _at_rest(moved, [dc])["D0"]
        amperes.append(abs(still) + abs(ampere))
        watts.append(still * still_volt + 0.5 * (volt * ampere.conjugate()).real)
    for finding, at in ((current, amperes), (power, watts)):
        assert finding.worst == pytest.approx(max(at), rel=1e-3)  # 41 points come that close to the largest
        assert max(at) <= finding.worst * (1 + 1e-9)
        assert finding.worst <= finding.bound * (1 + 1e-12)

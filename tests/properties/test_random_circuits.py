"""Random circuits through design file and review, against an independent solution, and the laws that all must keep."""

from __future__ import annotations

import math
from dataclasses import replace

import mpmath
import numpy as np
import pytest
from random_circuits import Circuit, random_circuit

from stresscheck.chain import review
from stresscheck.design.load import read_design

SEEDS = range(60)


def _review(circuit: Circuit) -> tuple[dict[str, float], dict[str, object]]:
    record = review(read_design(circuit.text()))
    assert record.problems == ()
    return {f.id.removesuffix("@normal"): f.nominal for f in record.findings}, {d.drive: d for d in record.drives}


def _near(key: str) -> float:
    """Steady figures are exact; tops over time are sought between instants."""
    return 1e-5 if "/" in key else 1e-8


def _expected(circuit: Circuit, solver=None) -> dict[str, float]:
    """Peaks add over frequencies, RMS and powers as sums of squares."""
    lines = [circuit.solve(f, solver) for f in circuit.frequencies()]
    out: dict[str, float] = {}
    for kind, name, _, _, value, loss in circuit.parts:
        volts, amps = [abs(at[name][0]) for at in lines], [abs(at[name][1]) for at in lines]
        out[f"{name}.voltage_peak"] = sum(volts)
        watt = 0.0
        for f, a in zip(circuit.frequencies(), amps, strict=True):
            r = {"resistor": value, "inductor": loss, "capacitor": loss / (2 * math.pi * f * value)}[kind]
            watt += 0.5 * a * a * r
        out[f"{name}.dissipation"] = watt
        if kind != "resistor":
            out[f"{name}.current_peak"] = sum(amps)
            out[f"{name}.current_rms"] = math.sqrt(sum(0.5 * a * a for a in amps))
        if kind == "capacitor":
            out[f"{name}.voltage_rms"] = math.sqrt(sum(0.5 * v * v for v in volts))
            out[f"{name}.reactive_power"] = sum(
                0.5 * a * a / (2 * math.pi * f * value) for f, a in zip(circuit.frequencies(), amps, strict=True)
            )
    return out


def _mp_solve(matrix: np.ndarray, rhs: np.ndarray) -> np.ndarray:
    with mpmath.workdps(30):
        x = mpmath.lu_solve(mpmath.matrix(matrix.tolist()), mpmath.matrix(rhs.tolist()))
        return np.array([complex(v) for v in x])


def _agree(found: dict[str, float], expected: dict[str, float]) -> None:
    for quantity in {key.split(".")[1] for key in expected}:
        keys = [key for key in expected if key.endswith("." + quantity)]
        scale = max(abs(expected[key]) for key in keys)
        if scale < 1e-9:
            continue  # nothing but rounding on either side
        for key in keys:
            assert found[key] == pytest.approx(expected[key], abs=1e-9 * scale), key


@pytest.mark.parametrize("seed", SEEDS)
def test_random_circuit_agrees_with_an_independent_solution(seed: int) -> None:
    circuit = random_circuit(seed)
    found, _ = _review(circuit)
    _agree(found, _expected(circuit))


@pytest.mark.parametrize("seed", range(0, 60, 10))
def test_random_circuit_agrees_with_thirty_digits(seed: int) -> None:
    circuit = random_circuit(seed)
    found, _ = _review(circuit)
    _agree(found, _expected(circuit, _mp_solve))


@pytest.mark.parametrize("seed", SEEDS)
def test_power_of_the_drives_is_what_the_parts_dissipate(seed: int) -> None:
    """Tellegen: real power out of all drives at each frequency = losses of the parts and of drives at rest."""
    circuit = random_circuit(seed)
    one_line = replace(circuit, drives=[d for d in circuit.drives if d[3] == circuit.drives[0][3]])
    found, drives = _review(one_line)
    sent = sum(d.real_watt for d in drives.values())
    spent = sum(watt for key, watt in found.items() if key.endswith(".dissipation"))
    scale = sum(d.apparent_va for d in drives.values()) + spent
    assert sent == pytest.approx(spent, abs=1e-9 * scale)


@pytest.mark.parametrize("seed", range(20))
def test_three_times_the_drive_is_three_times_the_voltage_and_nine_times_the_power(seed: int) -> None:
    circuit = random_circuit(seed)
    bigger = replace(circuit, drives=[(*d[:4], 3.0 * d[4], *d[5:]) for d in circuit.drives])
    one, three = _review(circuit)[0], _review(bigger)[0]
    for key, value in one.items():
        factor = 9.0 if key.endswith(("dissipation", "reactive_power", "power")) else 3.0
        assert three[key] == pytest.approx(factor * value, rel=_near(key), abs=1e-12), key


@pytest.mark.parametrize("seed", range(20))
def test_all_impedances_doubled_voltages_stay_currents_halve(seed: int) -> None:
    circuit = random_circuit(seed)
    circuit = replace(circuit, drives=[(*d[:6], "V", d[7]) for d in circuit.drives])
    scale = {"resistor": (2.0, 1.0), "inductor": (2.0, 2.0), "capacitor": (0.5, 1.0)}
    doubled = replace(
        circuit,
        parts=[(k, n, a, b, v * scale[k][0], loss * scale[k][1]) for k, n, a, b, v, loss in circuit.parts],
        drives=[(*d[:7], 2.0 * d[7]) for d in circuit.drives],
    )
    one, two = _review(circuit)[0], _review(doubled)[0]
    for key, value in one.items():
        factor = 1.0 if "voltage" in key else 0.5
        assert two[key] == pytest.approx(factor * value, rel=_near(key), abs=1e-12), key


@pytest.mark.parametrize("seed", range(20))
def test_frequency_doubled_and_reactive_values_halved_changes_nothing(seed: int) -> None:
    circuit = random_circuit(seed)
    half = {"resistor": 1.0, "inductor": 0.5, "capacitor": 0.5}
    faster = replace(
        circuit,
        parts=[(k, n, a, b, v * half[k], loss) for k, n, a, b, v, loss in circuit.parts],
        drives=[(*d[:3], 2.0 * d[3], *d[4:]) for d in circuit.drives],
    )
    one, two = _review(circuit)[0], _review(faster)[0]
    for key, value in one.items():
        assert two[key] == pytest.approx(value, rel=_near(key), abs=1e-12), key


@pytest.mark.parametrize("seed", range(20))
def test_reciprocity_transfer_is_the_same_both_ways(seed: int) -> None:
    """Current through a short at B from a voltage at A equals that at A from the same voltage at B (no transformer
    needed: it is reciprocal too). Two drives of small resistance, one at a time at work."""
    circuit = random_circuit(seed)
    a, b = (
        circuit.parts[0][2],
        next((p[2] for p in reversed(circuit.parts) if p[2] not in ("t", circuit.parts[0][2])), None),
    )
    if b is None:
        pytest.skip("only one node")
    currents = []
    for levels in ((1.0, 1e-9), (1e-9, 1.0)):
        drives = [
            (f"D{n}", node, "ground", 1e5, level, 0.0, "V", 10.0)
            for n, (node, level) in enumerate(zip((a, b), levels, strict=True))
        ]
        found, _ = _review(replace(circuit, drives=drives))
        currents.append(found["D1.current_peak" if levels[0] == 1.0 else "D0.current_peak"])
    assert currents[0] == pytest.approx(currents[1], rel=1e-6, abs=1e-9)


@pytest.mark.parametrize("seed", range(20))
def test_resonance_doesn_t_depend_on_the_level_of_the_drive(seed: int) -> None:
    circuit = random_circuit(seed)
    louder = replace(circuit, drives=[(*d[:4], 7.0 * d[4], *d[5:]) for d in circuit.drives])
    assert review(read_design(circuit.text())).resonances == review(read_design(louder.text())).resonances

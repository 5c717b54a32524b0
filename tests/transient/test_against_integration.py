"""Events of random circuits against numerical integration of their own state equations."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from node_circuits import NodeCircuit, random_nodes

from stresscheck.chain import review
from stresscheck.design.load import read_design

SEEDS = range(8)
CYCLES = 30.0


def _found(circuit: NodeCircuit, states: str = "") -> dict[str, object]:
    record = review(read_design(circuit.text(states)))
    assert record.problems == ()
    return {f.id: f for f in record.findings}


def _agree(found: dict[str, object], expected: dict[str, float], suffix: str) -> None:
    compared = 0
    for key, value in expected.items():
        finding = found.get(f"{key}@{suffix}")
        if finding is None:
            continue
        compared += 1
        assert finding.worst == pytest.approx(value, rel=1e-4, abs=1e-6 * max(expected.values())), finding.id
        assert finding.worst <= finding.bound
        assert value <= finding.bound * (1.0 + 1e-6)
    assert compared >= 5


@pytest.mark.parametrize("seed", SEEDS)
def test_switch_on_from_rest_agrees_with_integration(seed: int) -> None:
    circuit = random_nodes(seed)
    start = np.zeros(len(circuit.steady()), dtype=complex)
    _agree(_found(circuit), circuit.tops(start, True, CYCLES), "normal/switch-on")


@pytest.mark.parametrize("seed", SEEDS)
def test_switch_off_from_the_steady_state_agrees_with_integration(seed: int) -> None:
    circuit = random_nodes(seed)
    _agree(_found(circuit), circuit.tops(circuit.steady(), False, CYCLES), "normal/switch-off")


@pytest.mark.parametrize("seed", SEEDS)
def test_change_of_values_agrees_with_integration(seed: int) -> None:
    """A resistance, a capacitance and an inductance change: voltage follows from charge, current from flux."""
    old = random_nodes(seed)
    new = replace(
        old,
        resistors=[(a, b, 0.2 * ohm) for a, b, ohm in old.resistors],
        capacitors=[old.capacitors[0], 1.7 * old.capacitors[1], *old.capacitors[2:]],
        coils=[(old.coils[0][0], old.coils[0][1], 0.6 * old.coils[0][2], old.coils[0][3]), *old.coils[1:]],
    )
    change = (
        f'"resistor.R0.value" = "{new.resistors[0][2]!r} ohm", "capacitor.C1.value" = "{new.capacitors[1]!r} F", '
        f'"inductor.L0.value" = "{new.coils[0][2]!r} H"'
    )
    before = old.steady()
    n = len(old.capacitors)
    henry_old, henry_new = old.system()[3], new.system()[3]
    volt = before[:n] * np.array(old.capacitors) / np.array(new.capacitors)
    ampere = np.linalg.solve(henry_new, henry_old @ before[n:])
    found = _found(old, f"[state.other]\nchange = {{ {change} }}")
    _agree(found, new.tops(np.concatenate([volt, ampere]), True, CYCLES), "other/change")


@pytest.mark.parametrize("seed", SEEDS)
def test_load_removed_while_running_agrees_with_integration(seed: int) -> None:
    old = random_nodes(seed)
    new = replace(old, resistors=[])
    found = _found(old, '[state.light]\nchange = { "resistor.R0" = "open" }')
    expected = new.tops(old.steady(), True, CYCLES)
    _agree(found, expected, "light/change")
    back = old.tops(new.steady(), True, CYCLES)
    _agree(found, back, "normal/change")


@pytest.mark.parametrize("seed", range(4))
def test_worst_phase_is_found_by_a_scan_over_phases(seed: int) -> None:
    """Real courses at 64 phases: none is above the figure, the highest comes near it."""
    circuit = random_nodes(seed)
    finding = _found(circuit)["C0.voltage_peak@normal/switch-on"]
    a, b, _, _ = circuit.system()
    w = 2.0 * np.pi * circuit.hertz
    pole, shape = np.linalg.eig(a)
    into = np.linalg.solve(shape, b.astype(complex)) * circuit.level
    times = np.linspace(0.0, 40.0 / circuit.hertz, 40_000)
    rise = (np.exp(1j * w * times) - np.exp(pole[:, None] * times)) / (1j * w - pole[:, None])
    envelope = (shape[0] * into) @ rise
    # The part of the conjugate drive is the conjugate: a real drive cos(wt + phase) gives the real part.
    scan = [np.abs((np.exp(1j * phase) * envelope).real).max() for phase in np.linspace(0.0, np.pi, 64)]
    assert max(scan) <= finding.worst * (1.0 + 1e-6)
    assert max(scan) >= finding.worst * 0.998


@pytest.mark.parametrize("seed", range(6))
def test_bounds_over_tolerances_hold_at_random_points(seed: int) -> None:
    """Every part 5 %: at 12 random points no switch-on or switch-off exceeds the bound."""
    circuit = replace(random_nodes(seed), tolerance="5 %")
    found = _found(circuit)
    rng = np.random.default_rng(seed)
    for _ in range(5):
        stretch = lambda: float(rng.choice([0.95, 1.05]) if rng.random() < 0.5 else rng.uniform(0.95, 1.05))  # noqa: E731
        point = replace(
            circuit,
            capacitors=[c * stretch() for c in circuit.capacitors],
            coils=[(a, b, henry * stretch(), ohm) for a, b, henry, ohm in circuit.coils],
            resistors=[(a, b, ohm * stretch()) for a, b, ohm in circuit.resistors],
        )
        rest = np.zeros(len(point.steady()), dtype=complex)
        for event, tops in (("on", point.tops(rest, True, 20.0)), ("off", point.tops(point.steady(), False, 20.0))):
            for key, value in tops.items():
                finding = found.get(f"{key}@normal/switch-{event}")
                if finding is not None and finding.bound is not None:
                    assert value <= finding.bound, finding.id

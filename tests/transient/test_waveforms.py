"""Square, triangle and listed harmonics against the exact periodic state of the circuit's own equations."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
import scipy.linalg
from node_circuits import NodeCircuit, random_nodes

from stresscheck.chain import review
from stresscheck.circuit.waveform import Waveform
from stresscheck.design.load import read_design

POINTS = 1600


def _wave(kind: str, duty: float, angle: np.ndarray) -> np.ndarray:
    turn = np.mod(angle + np.pi, 2.0 * np.pi) - np.pi
    if kind == "square":
        return np.where(np.abs(turn) < np.pi * duty, 1.0, -1.0)
    return 1.0 - 2.0 * np.abs(turn) / np.pi


def _periodic(circuit: NodeCircuit, kind: str, duty: float) -> tuple[np.ndarray, np.ndarray]:
    """States over one period and their derivatives, by exact steps of piecewise straight drives."""
    a, b, _, _ = circuit.system()
    size = len(a)
    angle = np.linspace(-np.pi, np.pi, POINTS + 1)
    if kind == "square":
        angle = np.unique(np.concatenate([angle, [-np.pi * duty, np.pi * duty]]))
    step = np.diff(angle) / (2.0 * np.pi * circuit.hertz)
    middle = circuit.level * _wave(kind, duty, 0.5 * (angle[1:] + angle[:-1]))
    ends = circuit.level * _wave(kind, duty, angle)
    slope = np.zeros(len(step)) if kind == "square" else np.diff(ends) / step
    first = middle if kind == "square" else ends[:-1]
    maps: dict[float, np.ndarray] = {}
    total, shift = np.eye(size), np.zeros(size)
    pieces = []
    for h, u, s in zip(step, first, slope, strict=True):
        key = round(h * circuit.hertz, 12)
        if key not in maps:
            wide = np.zeros((size + 2, size + 2))
            wide[:size, :size], wide[:size, size], wide[size, size + 1] = a, b, 1.0
            maps[key] = scipy.linalg.expm(wide * h)
        m = maps[key]
        move, push = m[:size, :size], m[:size, size] * u + m[:size, size + 1] * s
        pieces.append((move, push))
        total, shift = move @ total, move @ shift + push
    state = np.linalg.solve(np.eye(size) - total, shift)
    states, slopes, weights = [], [], []
    for (move, push), u, s, h in zip(pieces, first, slope, step, strict=True):
        after = move @ state + push
        states += [state, after]
        slopes += [a @ state + b * u, a @ after + b * (u + s * h)]
        weights += [0.5 * h, 0.5 * h]
        state = after
    return np.array(states).T, np.array(slopes).T, np.array(weights) * circuit.hertz


@pytest.mark.parametrize("seed", range(4))
@pytest.mark.parametrize(("kind", "duty"), [("square", 0.5), ("square", 0.3), ("triangle", 0.5)])
def test_steady_state_of_a_waveform_agrees_with_the_exact_periodic_state(seed: int, kind: str, duty: float) -> None:
    circuit = random_nodes(seed)
    extra = f'waveform = "{kind}"' + (f"\nduty = {duty}" if duty != 0.5 else "")
    circuit = replace(circuit, extra=extra)
    record = review(read_design(circuit.text()))
    found = {f.id.removesuffix("@normal"): f for f in record.findings if f.event == "steady"}
    states, slopes, weights = _periodic(circuit, kind, duty)
    largest = {}
    for key, value in circuit.responses(states, slopes).items():
        quantity = key.split(".")[1]
        largest[quantity] = max(largest.get(quantity, 0.0), float(np.abs(value).max()))
    compared = 0
    for key, value in circuit.responses(states, slopes).items():
        part, quantity = key.split(".")
        pairs = [(key, float(np.abs(value).max()), 2e-3)]
        rms = f"{part}.{quantity.replace('_peak', '_rms')}"
        mean = float((weights * value).sum())
        whole = float(np.sqrt((weights * value**2).sum()))
        # The RMS voltage of a capacitor is that of its AC part.
        pairs.append((rms, np.sqrt(whole**2 - mean**2) if part[0] == "C" else whole, 2e-3))
        for name, expected, near in pairs:
            if name in found:
                compared += 1
                tiny = 1e-3 * largest[quantity]
                assert found[name].worst == pytest.approx(expected, rel=near, abs=tiny), name
                assert expected <= found[name].bound * (1.0 + 1e-3) + tiny, name
    assert compared >= 8


def test_full_bridge_at_a_third_of_resonance_puts_the_third_harmonic_on_the_capacitor() -> None:
    """T8: full bridge at f0/3, Q = 100: the third harmonic alone makes 4/(3 pi) x Q = 42 times the DC voltage."""
    w0 = 2.0 * np.pi * 3e5
    henry = 1e-4
    farad, ohm = 1.0 / (w0**2 * henry), w0 * henry / 100.0
    text = f"""
title = "bridge"
derating = "as-rated"
[drive.D]
between = ["a", "ground"]
peak = "1 V"
waveform = "square"
frequency = "100 kHz"
[resistor.R]
between = ["a", "b"]
value = "{ohm!r} ohm"
rating = {{ dissipation = "1 kW" }}
[inductor.L]
between = ["b", "c"]
value = "{henry!r} H"
family = "air core"
rating = {{ voltage_peak = "1 kV", current_rms = "1 kA" }}
[capacitor.C]
between = ["c", "ground"]
value = "{farad!r} F"
rating = {{ voltage_peak = "1 kV", current_rms = "1 kA" }}
"""
    found = {f.id: f for f in review(read_design(text)).findings}
    peak = found["C.voltage_peak@normal"]
    assert peak.worst == pytest.approx(4.0 / (3.0 * np.pi) * 100.0, rel=0.05)
    assert 42.0 < peak.worst <= peak.bound


def test_listed_harmonics_are_put_together_with_their_phases() -> None:
    """10 V and a third of 3 V into 1 ohm: in phase they add to 13 V at the top, in opposition to 11.1 V at most."""
    text = """
title = "harmonics"
derating = "as-rated"
[drive.D]
between = ["a", "ground"]
peak = "10 V"
harmonics = [[1, 1.0, 0.0], [3, 0.3, PHASE]]
frequency = "1 kHz"
rating = { current_peak = "90 A" }
[resistor.R]
between = ["a", "ground"]
value = "1 ohm"
rating = { voltage_peak = "90 V", dissipation = "900 W", voltage_rms = "90 V" }
"""
    angle = np.linspace(0.0, 2.0 * np.pi, 200_001)
    for phase in (0.0, 180.0, 77.0):
        found = {f.id: f for f in review(read_design(text.replace("PHASE", repr(phase)))).findings}
        course = 10.0 * np.cos(angle) + 3.0 * np.cos(3.0 * angle + np.radians(phase))
        assert found["R.voltage_peak@normal"].worst == pytest.approx(np.abs(course).max(), rel=1e-6)
        assert found["R.voltage_rms@normal"].worst == pytest.approx(np.sqrt((100.0 + 9.0) / 2.0), rel=1e-9)
        assert found["R.dissipation@normal"].worst == pytest.approx(54.5, rel=1e-9)


def test_two_drives_of_different_waveform_and_one_frequency_share_their_harmonics() -> None:
    """A square of 1 V against a square of 1 V with opposite phase, in series through 1 ohm: twice the current."""
    text = """
title = "two squares"
derating = "as-rated"
[drive.A]
between = ["a", "ground"]
peak = "1 V"
phase = 0
waveform = "square"
frequency = "1 kHz"
rating = { current_peak = "90 A" }
[drive.B]
between = ["b", "ground"]
peak = "1 V"
phase = 180
waveform = "square"
frequency = "1 kHz"
rating = { current_peak = "90 A" }
[resistor.R]
between = ["a", "b"]
value = "1 ohm"
rating = { voltage_peak = "90 V", dissipation = "900 W" }
"""
    found = {f.id: f for f in review(read_design(text)).findings}
    assert found["R.voltage_peak@normal"].worst == pytest.approx(2.0, rel=1e-6)
    assert found["R.dissipation@normal"].worst == pytest.approx(4.0, rel=2e-3)
    assert found["A.current_peak@normal"].worst == pytest.approx(2.0, rel=1e-6)


def test_amplitudes_of_a_square_wave() -> None:
    """O52: 1.27324, 0.424413, 0.254648, 0.181891, 0.141471 for n = 1, 3, 5, 7, 9; nothing between."""
    square = Waveform("square")
    printed = {1: 1.27324, 3: 0.424413, 5: 0.254648, 7: 0.181891, 9: 0.141471}
    assert all(abs(square.weight(n)) == pytest.approx(size, abs=6e-6) for n, size in printed.items())
    assert square.orders(9) == tuple(printed)


@pytest.mark.parametrize("form", [Waveform("square"), Waveform("square", 0.2), Waveform("triangle")])
def test_what_harmonics_leave_out_is_what_a_long_sum_adds(form: Waveform) -> None:
    """Rest, its integral, its RMS and the bounds of its sums, against the harmonics themselves to order 6000."""
    orders = form.orders(7)
    angle = np.linspace(-3.0, 3.0, 41)
    more = [n for n in form.orders(6000) if n not in orders]
    weight = np.array([form.weight(n).real for n in more])
    n = np.array(more)
    rest = (weight[:, None] * np.cos(n[:, None] * angle)).sum(axis=0)
    integral = (weight[:, None] / n[:, None] * np.sin(n[:, None] * angle)).sum(axis=0)
    away = np.abs(np.abs(angle) - np.pi * form.duty) > 0.05
    assert form.rest(angle, orders)[away] == pytest.approx(rest[away], abs=6e-3)
    assert form.rest_integral(angle, orders) == pytest.approx(integral, abs=1e-6)
    assert form.rest_rms(orders) == pytest.approx(np.sqrt(0.5 * (weight**2).sum()), rel=3e-3)
    for fall in (0, 1):
        if not (fall == 0 and form.kind == "square"):
            total = (np.abs(weight) / n**fall).sum()
            assert total <= form.rest_sum(orders, fall) <= 1.02 * total + 1e-4

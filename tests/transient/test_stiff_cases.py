"""Cases that break step-by-step solutions: high Q with short bursts, poles decades apart, poles that coincide, loops."""

from __future__ import annotations

import math

import numpy as np
import pytest
import scipy.linalg
from courses import at, circuit, here, network, row, step_on, top

from stresscheck.chain import review
from stresscheck.design.load import read_design
from stresscheck.transient.gated import Gate, burst

RATED = {
    "capacitor": 'rating = { voltage_peak = "1 MV", current_rms = "1 MA", current_peak = "1 MA" }',
    "inductor": 'family = "air core"\nrating = { voltage_peak = "1 MV", current_rms = "1 MA", current_peak = "1 MA" }',
    "resistor": 'rating = { dissipation = "1 MW", voltage_peak = "1 MV" }',
}


def rated(text: str) -> str:
    for kind, rating in RATED.items():
        text = "\n".join(f"{line}\n{rating}" if line.startswith(f"[{kind}.") else line for line in text.split("\n"))
    return text.replace("[drive.D]", '[drive.D]\nrating = { current_peak = "1 MA" }')


def findings(text: str) -> dict[str, object]:
    return {f.id: f for f in review(read_design(rated(text))).findings}


def test_q_10000_with_microsecond_bursts_builds_up_over_many_periods() -> None:
    """Bursts of one cycle each 10 us x 40: what is left of each adds to the next; against exact steps of the state."""
    hertz, henry = 1e5, 1e-4
    farad = 1.0 / ((2.0 * math.pi * hertz) ** 2 * henry)
    ohm = 2.0 * math.pi * hertz * henry / 1e4
    net = network(circuit(
        f"resistor R in a {ohm!r}\ninductor L a c {henry!r}\ncapacitor C c ground {farad!r}", hertz=hertz, peak=1.0
    ))  # fmt: skip
    gate = Gate(10e-6, 400e-6)
    seen = burst(here(net), gate)
    a = np.array([[0.0, 1.0 / farad], [-1.0 / henry, -ohm / henry]])
    wide = np.zeros((4, 4))
    wide[:2, :2], wide[1, 2] = a, 1.0 / henry
    wide[2, 3], wide[3, 2] = -2.0 * math.pi * hertz, 2.0 * math.pi * hertz
    on, off = scipy.linalg.expm(wide * gate.on), scipy.linalg.expm(a * (gate.period - gate.on))
    # One period maps the state; the drive starts each burst with the same phase (400 us is 40 cycles).
    best = 0.0
    for phase in np.linspace(0.0, math.pi, 33):
        drive = np.array([math.cos(phase), math.sin(phase)])
        move, push = off @ on[:2, :2], off @ on[:2, 2:] @ drive
        state = np.linalg.solve(np.eye(2) - move, push)
        fine = scipy.linalg.expm(wide * gate.on / 400)
        now = np.concatenate([state, drive])
        for _ in range(400):
            now = fine @ now
            best = max(best, abs(now[0]))
        ring = scipy.linalg.expm(a * 1e-5 / 200)
        state = now[:2]
        for _ in range(200):
            state = ring @ state
            best = max(best, abs(state[0]))
    number = row(net, "C", "volt")
    assert best <= seen.peak[number] * (1.0 + 1e-6)
    assert seen.peak[number] == pytest.approx(best, rel=2e-3)
    assert seen.peak[number] <= seen.ceiling[number] <= 1.03 * seen.peak[number]
    assert seen.peak[number] > 50.0 * math.pi / 2.0  # far more than a single burst, which reaches pi


def test_poles_nine_decades_apart_keep_their_digits() -> None:
    """A filter of 10 ns and a bleeder of 10 s in one circuit: both courses to 1e-6."""
    net = network(circuit(
        "resistor Rf in a 1\ncapacitor Cf a ground 10e-9\nresistor Rs a c 10e6\ncapacitor Cs c ground 1e-6\n"
        "resistor Rb c ground 100e6", offset=100.0,
    ))  # fmt: skip
    event = step_on(net)
    poles = np.sort(-here(net).ring.pole[0].real)
    assert poles[1] / poles[0] > 8e8
    fast, slow = row(net, "Cf", "volt"), row(net, "Cs", "volt")
    assert at(event, fast, 10e-9) == pytest.approx(100.0 * (1.0 - math.exp(-1.0)), rel=1e-5)
    share, tau = 100.0 / 110.0, (10e6 * 100e6 / 110e6) * 1e-6
    for seconds in (0.1, 10.0, 40.0):
        expected = 100.0 * share * (1.0 - math.exp(-seconds / tau))
        assert at(event, slow, seconds) == pytest.approx(expected, rel=1e-6)


@pytest.mark.parametrize("count", [1, 2])
def test_critically_damped_poles_coincide_and_are_parted(count: int) -> None:
    """R = 2 sqrt(L/C): x = wt, V (1 - (1 + x) e^-x); twice the same circuit has two such pairs."""
    henry, farad = 1e-3, 1e-6
    ohm = 2.0 * math.sqrt(henry / farad)
    parts = [
        f"resistor R{n} in a{n} {ohm!r}\ninductor L{n} a{n} c{n} {henry!r}\ncapacitor C{n} c{n} ground {farad!r}"
        for n in range(count)
    ]
    net = network(circuit("\n".join(parts), offset=10.0))
    event = step_on(net)
    for x in (0.1, 1.0, 3.0, 8.0):
        expected = 10.0 * (1.0 - (1.0 + x) * math.exp(-x))
        assert at(event, row(net, "C0", "volt"), x * math.sqrt(henry * farad)) == pytest.approx(expected, rel=1e-5)
    assert top(event, row(net, "C0", "volt")) == pytest.approx(10.0, rel=1e-6)


def test_loop_of_capacitors_shares_charge_by_capacitance() -> None:
    """Two capacitors in series across a third: the loop leaves two free charges; against the plain reduction."""
    text = circuit(
        "resistor R in a 50\ncapacitor C1 a ground 1e-6\ncapacitor C2 a m 2e-6\ncapacitor C3 m ground 6e-6", offset=80.0
    )
    net = network(text)
    event = step_on(net)
    whole = 1e-6 + 2e-6 * 6e-6 / 8e-6
    for seconds in (20e-6, 150e-6, 1e-3):
        volt = 80.0 * (1.0 - math.exp(-seconds / (50.0 * whole)))
        assert at(event, row(net, "C1", "volt"), seconds) == pytest.approx(volt, rel=1e-9)
        assert at(event, row(net, "C2", "volt"), seconds) == pytest.approx(0.75 * volt, rel=1e-9)
        assert at(event, row(net, "C3", "volt"), seconds) == pytest.approx(0.25 * volt, rel=1e-9)


def test_ideal_drive_across_a_capacitor_leaves_its_switch_on_current_unlimited() -> None:
    found = findings(circuit("capacitor C in ground 1e-6\nresistor R in ground 50", peak=10.0))
    assert found["C.current_peak@normal"].verdict == "within"
    lost = found["C.current_peak@normal/switch-on"]
    assert lost.verdict == "not-checked"
    assert "limits" in lost.why
    assert found["C.voltage_peak@normal/switch-on"].verdict == "within"


def test_opening_a_coil_s_only_path_leaves_its_voltage_unlimited() -> None:
    """Without a path the current would have to stop at once; a declared stray capacitance takes it over."""
    parts = "resistor R in a 1\ninductor L a b 1e-3\nresistor Rload b ground 50"
    opened = '\n[state.cut]\nchange = { "resistor.Rload" = "open" }'
    found = findings(circuit(parts, peak=10.0) + opened)
    assert found["L.voltage_peak@cut/change"].verdict == "not-checked"
    assert "stray capacitance" in found["L.voltage_peak@cut/change"].why
    stray = findings(circuit(parts + "\ncapacitor Cs b ground 100e-12", peak=10.0) + opened)
    volt = stray["L.voltage_peak@cut/change"].worst
    current = 10.0 / abs(51.0 + 2j * math.pi * 1000.0 * 1e-3)
    assert volt == pytest.approx(current * math.sqrt(1e-3 / 100e-12), rel=0.02)


def test_lossless_circuit_has_no_any_waveform_figure() -> None:
    text = circuit("inductor L in c 1e-4\ncapacitor C c ground 1e-8", peak=1.0, hertz=5e4, extra="any_waveform = true")
    found = findings(text)
    lost = found["C.voltage_peak@normal/any-waveform"]
    assert lost.verdict == "not-checked"
    assert "damps" in lost.why

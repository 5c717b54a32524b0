"""Check values of the relations: switch-on factors, ring-up, any waveform, gating, steps, stored energy, discharge."""

from __future__ import annotations

import math

import numpy as np
import pytest
from courses import at, circuit, here, network, row, step_on, top

from stresscheck.circuit.network import Network
from stresscheck.stress.sizes import sizes_at
from stresscheck.transient.discharge import bleeder, seconds_until
from stresscheck.transient.gated import Gate, burst
from stresscheck.transient.impulse import absolute_integrals
from stresscheck.transient.one_resonance import one_resonance

F0 = 1e5
HENRY = 1e-4
FARAD = 1.0 / ((2.0 * math.pi * F0) ** 2 * HENRY)


def tank(q: float, hertz: float = F0, peak: float = 1.0) -> Network:
    ohm = 2.0 * math.pi * F0 * HENRY / q
    parts = f"resistor R in a {ohm!r}\ninductor L a b {HENRY!r}\ncapacitor C b ground {FARAD!r}"
    return network(circuit(parts, hertz=hertz, peak=peak))


def _over_steady(net: Network, quantity: str) -> float:
    branch = net.branch_of("C")
    steady = sizes_at(net, net.axes.nominal[None])
    size = steady.volt if quantity == "volt" else steady.ampere
    return top(step_on(net), row(net, "C", quantity)) / float(size[0, 0, branch])


@pytest.mark.parametrize(
    ("x", "factor"),
    [(0.5, 1.008), (1, 1.069), (2, 1.242), (3, 1.379), (5, 1.550), (10, 1.737), (20, 1.857), (50, 1.939)],
)
def test_switch_on_of_a_detuned_tank_overshoots_by_the_table(x: float, factor: float) -> None:
    q = 1e5
    tau = 2.0 * q / (2.0 * math.pi * F0)
    assert _over_steady(tank(q, F0 + x / tau / (2.0 * math.pi)), "volt") == pytest.approx(factor, abs=6e-4)


@pytest.mark.parametrize("ratio", [0.1237, 0.271, 0.7071, 1.4142, 3.3166])
def test_switch_on_far_from_resonance_approaches_its_far_off_factors(ratio: float) -> None:
    """Undamped: 1 + max(1, f/f0) for the capacitor's voltage, 1 + max(1, f0/f) for the current; never above."""
    net = tank(1e6, ratio * F0)
    for quantity, limit in (("volt", 1.0 + max(1.0, ratio)), ("ampere", 1.0 + max(1.0, 1.0 / ratio))):
        factor = _over_steady(net, quantity)
        assert 0.98 * limit <= factor <= limit * (1.0 + 1e-9)


@pytest.mark.parametrize(("q", "bound"), [(2, 2.59935), (10, 12.74267), (100, 127.325), (1000, 1273.24)])
def test_any_waveform_on_a_tank_is_the_hyperbolic_cotangent(q: float, bound: float) -> None:
    net = tank(q)
    number = row(net, "C", "volt")
    zeta = 0.5 / q
    exact = 1.0 / math.tanh(math.pi * zeta / (2.0 * math.sqrt(1.0 - zeta * zeta)))
    found = float(absolute_integrals(here(net), [number])[0, 0])
    assert exact == pytest.approx(bound, rel=1e-5)
    assert found == pytest.approx(exact, rel=1e-8)
    proved = one_resonance(net)
    assert proved is not None
    assert exact <= proved.any_waveform[number, 0] <= 1.002 * exact


def test_t3_ring_up_reaches_its_shares_after_so_many_cycles() -> None:
    """90, 95 and 99 % after 0.733, 0.954 and 1.466 Q cycles."""
    q = 200.0
    net = tank(q)
    terms = step_on(net).swings[0].harmonics[0][1]
    for share, cycles in ((0.90, 0.733), (0.95, 0.954), (0.99, 1.466)):
        size = np.abs(terms.at(np.array([cycles * q / F0])))[row(net, "C", "volt"), 0]
        assert size / q == pytest.approx(share, abs=3e-3)


@pytest.mark.parametrize(("bursts", "periods", "near"), [(1.0, 11.0, 7e-3), (2.0, 12.0, 7e-3), (0.3, 9.0, 7e-3)])
def test_t9_rms_of_a_gated_tank(bursts: float, periods: float, near: float) -> None:
    q = 100.0
    net = tank(q)
    tau = 2.0 * q / (2.0 * math.pi * F0)
    on, period = bursts * tau, periods * tau
    e = math.exp(-on / tau)
    full = q / (2.0 * math.pi * F0 * HENRY)
    square = on - 2.0 * tau * (1.0 - e) + 0.5 * tau * (1.0 - e * e)
    square += (1.0 - e) ** 2 * 0.5 * tau * (1.0 - math.exp(-2.0 * (period - on) / tau))
    expected = math.sqrt(full * full / (2.0 * period) * square)
    assert burst(here(net), Gate(on, period)).rms[row(net, "C", "ampere")] == pytest.approx(expected, rel=near)


def test_t10_step_of_direct_voltage_overshoots_to_1_985_at_q_100() -> None:
    q = 100.0
    ohm = 2.0 * math.pi * F0 * HENRY / q
    parts = f"resistor R in a {ohm!r}\ninductor L a b {HENRY!r}\ncapacitor C b ground {FARAD!r}"
    net = network(circuit(parts, offset=1.0, hertz=F0))
    zeta = 0.5 / q
    exact = 1.0 + math.exp(-math.pi * zeta / math.sqrt(1.0 - zeta * zeta))
    assert exact == pytest.approx(1.985, abs=1e-3)
    assert top(step_on(net), row(net, "C", "volt")) == pytest.approx(exact, rel=1e-7)


def test_t11_stored_energy_swings_to_the_root_of_both_squares() -> None:
    """A coil with I0 and a capacitor with V0: peak sqrt(V0^2 + (I0 Z0)^2) and sqrt(I0^2 + (V0/Z0)^2), lossless."""
    z0 = math.sqrt(HENRY / FARAD)
    parts = f"resistor R in b 10\ninductor L b ground {HENRY!r} resistance=1e-9_ohm\ncapacitor C b ground {FARAD!r}"
    from stresscheck.transient.carried import Carried
    from stresscheck.transient.events import happening, stage

    text = circuit(parts, hertz=F0) + '\n[state.loose]\nchange = { "resistor.R" = "open" }'
    from stresscheck.circuit.build import build
    from stresscheck.design.load import read_design

    loose = build(read_design(text).in_state("loose"))
    volt, ampere = 30.0, 0.4
    held = Carried({}, {("C", "main"): FARAD * volt, ("L", "main"): HENRY * ampere})
    event = happening(stage(loose, loose.axes.nominal, running=False), held)
    assert top(event, row(loose, "C", "volt")) == pytest.approx(math.hypot(volt, ampere * z0), rel=1e-6)
    assert top(event, row(loose, "L", "ampere")) == pytest.approx(math.hypot(ampere, volt / z0), rel=1e-6)


@pytest.mark.parametrize(
    ("volt", "level", "seconds", "tau"),
    [(400.0, 60.0, 5.0, 2.64), (1000.0, 50.0, 60.0, 20.0), (5000.0, 50.0, 300.0, 65.1)],
)
def test_c14_bleeder_and_discharge_time(volt: float, level: float, seconds: float, tau: float) -> None:
    farad = 10e-6
    ohm, watt = bleeder(farad, volt, level, seconds)
    assert ohm * farad == pytest.approx(tau, abs=0.06 if tau > 10 else 0.006)
    assert watt == pytest.approx(volt**2 / ohm)
    net = network(
        circuit(f"resistor Rs in c 1\ncapacitor C c ground {farad!r}\nresistor Rb c ground {ohm!r}", offset=volt)
    )
    held = volt * ohm / (ohm + 1.0)
    for drives_open in (True, False):
        found = seconds_until(net, net.axes.nominal, (level,), drives_open=drives_open)[net.branch_of("C"), 0]
        resistance = ohm if drives_open else ohm / (1.0 + ohm)
        assert found == pytest.approx(resistance * farad * math.log(held / level), rel=1e-4)


def test_c15_reversal_of_a_damped_ring() -> None:
    """exp(-pi/(2Q)): 85.5 % at Q = 10, half a period after the start."""
    q = 10.0
    ohm = 2.0 * math.pi * F0 * HENRY / q
    net = network(circuit(
        f"resistor R in a {ohm!r}\ninductor L a b {HENRY!r}\ncapacitor C b ground {FARAD!r}", offset=1.0, hertz=F0
    ))  # fmt: skip
    event = step_on(net)
    half = math.pi / (2.0 * math.pi * F0 * math.sqrt(1.0 - 1.0 / (4.0 * q * q)))
    assert at(event, row(net, "C", "volt"), half) - 1.0 == pytest.approx(0.855, abs=1e-3)

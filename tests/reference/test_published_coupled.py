"""Coupled coils, several frequencies and sharing in published examples (O31 to O37, O51, O54 to O56, O70).

LEC Lessons In Electric Circuits; BIRD Electrical Circuit Theory and Technology; Boylestad, Introductory Circuit Analysis.
Harmonics of a waveform are given as several sine drives in series; their peaks then add, RMS as root of squares.
"""

from __future__ import annotations

import math

import pytest
from published import Figures, capacitor, coupling, digits, drive, inductor, resistor, solve

TAU = 2.0 * math.pi


def _coil(name: str, first: str, second: str, henry: float, ohm: float = 0.0) -> str:
    return inductor(name, first, second, henry, f'resistance = "{ohm!r} ohm"' if ohm else "")


@pytest.mark.parametrize(
    ("k", "load", "i1", "i2", "v2"),
    [
        (0.999, 1000.0, "9.975e-3", "9.962e-3", "9.962"),
        (0.999, 15.0, "0.1301", "0.1300", "1.950"),
        (0.99999, 15.0, "0.6658", "0.6658", "9.987"),
    ],
)
def test_o31_lec_ii_9_two_windings_of_100_henry(k, load, i1, i2, v2) -> None:
    found = solve(
        drive(60.0, 10.0), _coil("L1", "in", "ground", 100.0), _coil("L2", "out", "ground", 100.0), coupling("L1", "L2", k),
        resistor("R", "out", "ground", load),
    )  # fmt: skip
    assert digits(found["L1.current_rms"], i1)
    assert digits(found["L2.current_rms"], i2)
    assert digits(found["R.voltage_rms"], v2)


def test_o32_bird_43_8_open_secondary() -> None:
    """8 V, 2500 rad/s, 15 ohm and 5 mH, M = 0.1 mH: 0.102 V. A megohm stands for the open winding."""
    found = solve(
        drive(2500.0 / TAU, 8.0), _coil("L1", "in", "ground", 5e-3, 15.0), _coil("L2", "out", "ground", 2e-3),
        coupling("L1", "L2", 0.1e-3 / math.sqrt(5e-3 * 2e-3)), resistor("R", "out", "ground", 1e6),
    )  # fmt: skip
    assert digits(found["R.voltage_rms"], "0.102")


def test_o32_bird_43_7_aiding_and_opposing() -> None:
    """L1 12.24 mH, L2 0.26 mH, M 1.25 mH: 15 mH in series aiding, 10 mH opposing."""
    k = 1.25e-3 / math.sqrt(12.24e-3 * 0.26e-3)
    for sign, henry in ((1.0, 15e-3), (-1.0, 10e-3)):
        found = solve(
            drive(1000.0, 1.0), _coil("L1", "in", "m", 12.24e-3), _coil("L2", "m", "ground", 0.26e-3),
            coupling("L1", "L2", sign * k),
        )  # fmt: skip
        assert 1.0 / found["E.current_rms"] == pytest.approx(TAU * 1000.0 * henry, rel=1e-3)


def test_o33_bird_43_11_secondary_circuit_reflected() -> None:
    found = solve(
        drive(500.0 / TAU, 50.0), resistor("R1", "in", "a", 300.0), _coil("La", "a", "b", 0.2),
        _coil("L1", "b", "ground", 0.5), _coil("L2", "c", "ground", 0.3), coupling("L1", "L2", 0.2 / math.sqrt(0.15)),
        resistor("R2", "c", "d", 500.0), capacitor("C", "d", "ground", 5e-6),
    )  # fmt: skip
    assert found["E.current_rms"] == pytest.approx(0.104709, rel=1e-5)
    assert found.drives["E"].phase_degrees == pytest.approx(48.566, abs=1e-3)
    assert found["L2.current_rms"] == pytest.approx(0.0187309, rel=1e-5)
    assert found["C.voltage_rms"] == pytest.approx(7.492, abs=1e-3)  # derived


def test_o34_bird_43_13_power_balance() -> None:
    """The printed currents have a slip of sign (their power doesn't balance): recomputed values."""
    found = solve(
        drive(50.0 / TAU, 250.0), resistor("R1", "in", "a", 10.0), _coil("L1", "a", "ground", 1.0),
        _coil("L2", "b", "ground", 1.0), coupling("L1", "L2", 0.2), resistor("R2", "b", "ground", 60.0),
    )  # fmt: skip
    assert found["E.current_rms"] == pytest.approx(abs(complex(1.0813, 4.8418)), rel=1e-4)
    assert found["L2.current_rms"] == pytest.approx(abs(complex(0.5649, 0.2905)), rel=2e-4)
    assert found.drives["E"].real_watt == pytest.approx(270.3, abs=0.05)
    assert found["R1.dissipation"] + found["R2.dissipation"] == pytest.approx(270.3, abs=0.05)


def test_o35_bird_43_15_matched_windings() -> None:
    found = solve(
        drive(150.0 / TAU, 50.0), resistor("R1", "in", "a", 25.0), _coil("L1", "a", "ground", 0.2),
        _coil("L2", "b", "ground", 0.4, 25.0), coupling("L1", "L2", 0.1 / math.sqrt(0.08)),
        resistor("R", "b", "ground", 20.0),
    )  # fmt: skip
    assert found["E.current_rms"] == pytest.approx(1.29969, rel=1e-5)
    assert found.drives["E"].phase_degrees == pytest.approx(45.843, abs=1e-3)
    assert found["R.voltage_rms"] / 20.0 == pytest.approx(0.259938, rel=1e-5)


@pytest.mark.parametrize(("ratio", "k"), [(2.0, 0.6), (1.5, 0.38462), (10 / 9, 0.10497)])
def test_o36_mode_ratio_of_equal_coupled_tanks(ratio: float, k: float) -> None:
    found = solve(
        drive(1e5, 1.0), capacitor("C1", "in", "a", 1e-9), _coil("L1", "a", "ground", 1e-3),
        _coil("L2", "b", "ground", 1e-3), capacitor("C2", "b", "ground", 1e-9), coupling("L1", "L2", k),
    )  # fmt: skip
    low, high = (r.hertz for r in found.resonances)
    assert high / low == pytest.approx(ratio, rel=2e-5)


def test_o37_boylestad_21_10_input_impedance() -> None:
    """Inputs published; output recomputed: 35.472 + j2079.29 ohm."""
    found = solve(
        drive(400.0 / TAU, 1.0), resistor("Rp", "in", "a", 3.0), _coil("Lp", "a", "ground", 6.0),
        _coil("Ls", "b", "ground", 1.0, 0.5), coupling("Lp", "Ls", 0.9 / math.sqrt(6.0)),
        resistor("RL", "b", "ground", 40.0),
    )  # fmt: skip
    assert 1.0 / found["E.current_rms"] == pytest.approx(2079.59, abs=0.01)
    assert found.drives["E"].phase_degrees == pytest.approx(89.02, abs=5e-3)


def _in_series(
    volts: list[tuple[float, float]], tables: list[str], basis: str = "peak", offset: float = 0.0
) -> Figures:
    """Sine drives (hertz, level) stacked in series between node in and ground."""
    drives = []
    for n, (hertz, level) in enumerate(volts):
        nodes = f'"{"in" if n == 0 else f"s{n}"}", "{"ground" if n == len(volts) - 1 else f"s{n + 1}"}"'
        extra = f'offset = "{offset!r} V"' if offset and n == 0 else ""
        drives.append(drive(hertz, level, basis, f"E{n}", nodes=nodes, extra=extra))
    return solve(*drives, *tables)


def test_o51_bird_36_14_third_harmonic_dominates_the_capacitor() -> None:
    f1 = 167.764
    tables = [resistor("R", "in", "a", 2.0), inductor("L", "a", "b", 0.5), capacitor("C", "b", "ground", 0.2e-6)]
    found = _in_series([(f1, 400.0), (3 * f1, 10.0)], tables)
    one = _in_series([(f1, 400.0)], tables)
    three = _in_series([(3 * f1, 10.0)], tables)
    assert one["E0.current_peak"] == pytest.approx(0.094868, rel=1e-4)
    assert digits(three["E0.current_peak"], "5.0")
    assert three["C.voltage_peak"] == pytest.approx(7905.7, rel=1e-4)  # derived
    assert one["C.voltage_peak"] == pytest.approx(450.0, rel=1e-4)
    assert found["C.voltage_rms"] == pytest.approx(5599.0, rel=1e-4)
    assert found["C.voltage_peak"] == pytest.approx(8356.0, rel=1e-4)


def test_o54_lec_ii_7_two_frequencies() -> None:
    tables = [resistor("R", "in", "a", 2200.0), capacitor("C", "a", "ground", 1e-6)]
    for hertz, vr, vc in ((60.0, "3.1919", "3.8486"), (90.0, "3.8971", "3.1325")):
        single = _in_series([(hertz, 5.0)], tables, "rms")
        assert digits(single["R.voltage_rms"], vr)
        assert digits(single["C.voltage_rms"], vc)
    both = _in_series([(60.0, 5.0), (90.0, 5.0)], tables, "rms")
    assert both["C.voltage_rms"] == pytest.approx(4.9623, abs=5e-5)


def test_o55_bird_36_9_three_harmonics_into_r_l() -> None:
    f1 = 314.0 / TAU
    tables = [resistor("R", "in", "a", 12.0), inductor("L", "a", "ground", 9.55e-3)]
    found = _in_series([(f1, 240.0), (3 * f1, 40.0), (5 * f1, 30.0)], tables)
    assert digits(found["L.current_rms"], "13.89")
    assert found["R.dissipation"] == pytest.approx(2316.26, abs=0.2)


def test_o55_bird_36_10_dc_and_harmonics_on_a_capacitor() -> None:
    """Printed phases use +jX_C; sizes and the derived voltages don't depend on that."""
    tables = [resistor("R", "in", "a", 50.0), capacitor("C", "a", "ground", 100e-6)]
    found = _in_series([(50.0, 200.0), (100.0, 40.0), (200.0, 5.0)], tables, offset=50.0)
    assert digits(found["C.current_rms"], "2.45")
    assert found["C.voltage_peak"] == pytest.approx(170.3, abs=0.05)
    ac = math.sqrt(91.33**2 - 50.0**2)
    assert found["C.voltage_rms"] == pytest.approx(ac, abs=0.01)


def test_o55_bird_36_6_power_of_a_complex_current() -> None:
    """12/5/2 A peak at three frequencies through 20 ohm: 1730 W."""
    tables = [resistor("R", "in", "ground", 20.0)]
    drives = [
        drive(hertz, level, "peak", f"I{n}", "A", '"in", "ground"')
        for n, (hertz, level) in enumerate(((50.0, 12.0), (150.0, 5.0), (250.0, 2.0)))
    ]
    assert solve(*drives, *tables)["R.dissipation"] == pytest.approx(1730.0, rel=1e-9)


def test_o56_up2_8_2_capacitors_share_voltage_by_their_reciprocals() -> None:
    found = solve(
        drive(1000.0, 12.0), capacitor("C1", "in", "a", 12e-6), capacitor("C2", "a", "ground", 2e-6),
        capacitor("C3", "a", "ground", 4e-6),
    )  # fmt: skip
    assert found["C1.voltage_rms"] == pytest.approx(4.0, rel=1e-9)
    assert found["C2.voltage_rms"] == pytest.approx(8.0, rel=1e-9)


@pytest.mark.parametrize(("ohm", "ampere", "volt"), [(0.091, 33.1, 8155.0), (0.274, 19.1, 4700.0)])
def test_o70_loop_at_100_watt(ohm: float, ampere: float, volt: float) -> None:
    """Octagon transmitting loop, 5.53 uH, 7.1 MHz: too small a loss overstates the stress, too large understates it."""
    henry = 5.52e-6
    found = solve(
        drive(7.1e6, 100.0, "delivered_power", unit="W"), inductor("L", "in", "a", henry, f'resistance = "{ohm!r} ohm"'),
        capacitor("C", "a", "ground", 1.0 / ((TAU * 7.1e6) ** 2 * henry)),
    )  # fmt: skip
    assert found["C.current_rms"] == pytest.approx(ampere, abs=0.06)
    assert found["C.voltage_rms"] == pytest.approx(volt, rel=2e-3)

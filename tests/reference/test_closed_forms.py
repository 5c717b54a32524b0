"""Closed forms of circuit theory: nominal, worst and bound of tanks, whatever their Q."""

from __future__ import annotations

import math

import pytest
from published import capacitor, coupling, drive, inductor, resistor, solve

from stresscheck.chain import review
from stresscheck.design.load import read_design

TAU = 2.0 * math.pi
QS = [1.0, 10.0, 100.0, 1e3, 1e4, 1e5]
HENRY, HERTZ = 50e-6, 1e5
FARAD = 1.0 / ((TAU * HERTZ) ** 2 * HENRY)
X0 = TAU * HERTZ * HENRY


def _worst(
    r: float, *, l_tol: float = 0.0, c_tol: float = 0.0, r_tol: float = 0.0, band: float = 0.0, gap: float = 0.05
):
    """Findings of a series tank across 1 V peak, with tolerances as fractions and a band around its resonance."""

    def tolerance(t: float) -> str:
        return f'tolerance = "{100 * t!r} %"' if t else ""

    ends = f'["{HERTZ * (1 - band)!r} Hz", "{HERTZ * (1 + band)!r} Hz"]' if band else f'"{HERTZ!r} Hz"'
    text = "\n".join([
        'title = "tank"', 'derating = "as-rated"',
        f'[drive.E]\nbetween = ["in", "ground"]\npeak = "1 V"\nfrequency = {ends}\nrating = {{ current_peak = "1 MA" }}',
        resistor("R", "in", "a", r, tolerance(r_tol)), inductor("L", "a", "b", HENRY, tolerance(l_tol)),
        capacitor("C", "b", "ground", FARAD, tolerance(c_tol)),
    ])  # fmt: skip
    record = review(read_design(text), gap=gap, budget=20.0)
    return {f.id.removesuffix("@normal"): f for f in record.findings}


def _check(finding, expected: float, gap: float = 0.05) -> None:
    assert finding.worst == pytest.approx(expected, rel=1e-9)
    assert expected * (1 - 1e-9) <= finding.bound <= expected * (1 + gap + 1e-5)
    assert finding.verdict == "within"


@pytest.mark.parametrize("q", QS)
def test_series_tank_nominal_at_resonance_is_q_times_the_drive(q: float) -> None:
    """T1: exactly Q V at f0, current V/R whatever L and C."""
    found = _worst(X0 / q)
    assert found["C.voltage_peak"].nominal == pytest.approx(q, rel=1e-9)
    assert found["E.current_peak"].nominal == pytest.approx(q / X0, rel=1e-9)
    assert found["C.voltage_peak"].worst == found["C.voltage_peak"].bound == found["C.voltage_peak"].nominal


@pytest.mark.parametrize("q", QS)
def test_series_tank_worst_over_capacitance_at_fixed_frequency(q: float) -> None:
    """T2: C* = L/(R^2 + (wL)^2), V_C = V sqrt(1 + (wL/R)^2), where C* lies in the interval; else the nearer end."""
    r, t = X0 / q, 0.1
    best = HENRY / (r * r + X0 * X0)
    c = min(max(best, FARAD * (1 - t)), FARAD * (1 + t))
    x = 1.0 / (TAU * HERTZ * c)
    _check(_worst(r, c_tol=t)["C.voltage_peak"], x / math.hypot(r, X0 - x))


@pytest.mark.parametrize("q", QS)
def test_series_tank_worst_over_inductance_at_fixed_frequency(q: float) -> None:
    """T2: L* = (R^2 + X_C^2)/(w X_C), V_L = V sqrt(1 + (X_C/R)^2), where L* lies in the interval; else the nearer end."""
    r, t = X0 / q, 0.1
    best = (r * r + X0 * X0) / (X0 * TAU * HERTZ)
    henry = min(max(best, HENRY * (1 - t)), HENRY * (1 + t))
    x = TAU * HERTZ * henry
    _check(_worst(r, l_tol=t)["L.voltage_peak"], x / math.hypot(r, x - X0))


@pytest.mark.parametrize("q", [10.0, 100.0, 1e3, 1e4, 1e5])
def test_series_tank_worst_over_both_and_resistance(q: float) -> None:
    """C at its smallest, L tuned to it (T2), R at its smallest: V_C = V sqrt(X_C^2/R^2 ... ) with L* = X_C/w."""
    r, t = X0 / q, 0.05
    x = X0 / (1 - t)
    found = _worst(r, l_tol=0.06, c_tol=t, r_tol=0.2)
    low = 0.8 * r
    _check(found["C.voltage_peak"], x / low)
    _check(found["E.current_peak"], 1.0 / low)


@pytest.mark.parametrize("q", QS)
def test_series_tank_worst_over_a_band(q: float) -> None:
    """T1: V_C peaks at f0 sqrt(1 - 1/(2 Q^2)) with Q V / sqrt(1 - 1/(4 Q^2)), V_L as much; else at the end of the band."""
    r, band = X0 / q, 0.02
    inside = q > 1 / math.sqrt(2) and math.sqrt(1 - 1 / (2 * q * q)) > 1 - band
    f = HERTZ * (math.sqrt(1 - 1 / (2 * q * q)) if inside else 1 - band)
    w = TAU * f
    expected = 1.0 / (w * FARAD) / math.hypot(r, w * HENRY - 1 / (w * FARAD))
    if inside:
        assert expected == pytest.approx(q / math.sqrt(1 - 1 / (4 * q * q)), rel=1e-9)
    _check(_worst(r, band=band)["C.voltage_peak"], expected)


@pytest.mark.parametrize(
    ("q", "nominal", "corner", "worst"), [(200.0, 200.0, 219.9, 262.5), (1000.0, 1000.0, 382.7, 1312.5)]
)
def test_corners_miss_the_worst_case_of_a_series_tank(q, nominal, corner, worst) -> None:
    """Series tank, L and C +-5 %, R +-20 %, driven at its nominal resonance: measured figures of the design notes."""
    finding = _worst(X0 / q, l_tol=0.05, c_tol=0.05, r_tol=0.2)["C.voltage_peak"]
    assert finding.nominal == pytest.approx(nominal, rel=1e-9)
    assert finding.proof.corners == pytest.approx(corner, abs=0.06)
    assert finding.worst == pytest.approx(worst, abs=0.06)


def test_gap_on_request_is_closed_to_one_percent() -> None:
    found = _worst(X0 / 300.0, l_tol=0.1, c_tol=0.1, r_tol=0.2, band=0.03, gap=0.01)
    for finding in (f for f in found.values() if f.event == "steady"):
        assert finding.bound <= 1.010011 * finding.worst, finding.id


@pytest.mark.parametrize(("dl", "dc"), [(0.01, 0.0), (0.0, -0.02), (0.005, 0.005)])
def test_t5_gain_of_a_detuned_tank(dl: float, dc: float) -> None:
    """T5: gain Q / sqrt(1 + x^2), x = Q (dL/L + dC/C), for small detuning; 10 pF on 1 nF at Q 200 leaves 89."""
    q = 200.0
    found = solve(
        drive(HERTZ, 1.0, "peak"), resistor("R", "in", "a", X0 / q), inductor("L", "a", "b", HENRY * (1 + dl)),
        capacitor("C", "b", "ground", FARAD * (1 + dc)),
    )  # fmt: skip
    x = q * (dl + dc)
    assert found["C.voltage_peak"] == pytest.approx(q / math.sqrt(1 + x * x), rel=0.03)


def test_t5_probe_of_10_pf_on_1_nf() -> None:
    henry, q = 1.0 / ((TAU * 1e6) ** 2 * 1e-9), 200.0
    r = TAU * 1e6 * henry / q
    tank = [drive(1e6, 1.0, "peak"), resistor("R", "in", "a", r), inductor("L", "a", "b", henry)]
    assert solve(*tank, capacitor("C", "b", "ground", 1e-9))["C.voltage_peak"] == pytest.approx(200.0, rel=1e-9)
    loaded = solve(*tank, capacitor("C", "b", "ground", 1.01e-9))["C.voltage_peak"]
    assert loaded == pytest.approx(89.0, abs=1.0)


@pytest.mark.parametrize("k", [0.02, 0.1, 0.3])
def test_t6_equal_tanks_current_is_largest_at_the_modes(k: float) -> None:
    """T6: two equal tanks split to f0/sqrt(1 +- k) above critical coupling k = 1/Q; there the primary meets R alone."""
    q = 500.0
    tables = [
        capacitor("C1", "in", "a", FARAD), inductor("L1", "a", "b", HENRY), resistor("R1", "b", "ground", X0 / q),
        inductor("L2", "c", "d", HENRY), capacitor("C2", "c", "ground", FARAD), resistor("R2", "d", "ground", X0 / q),
        coupling("L1", "L2", k),
    ]  # fmt: skip
    for sign in (1.0, -1.0):
        f = HERTZ / math.sqrt(1.0 + sign * k)
        at = solve(drive(f, 1.0, "peak"), *tables)["E.current_peak"]
        assert at == pytest.approx(0.5 * q / X0, rel=2e-2)
        assert solve(drive(f * 1.004, 1.0, "peak"), *tables)["E.current_peak"] < at
        assert solve(drive(f * 0.996, 1.0, "peak"), *tables)["E.current_peak"] < at


def test_t7_load_removed_from_a_wireless_link() -> None:
    """T7: 100 V, X 106.7 ohm each side, Q1 300, k 0.2, 10.33 ohm: 2.25 A; load gone: 281 A and 30 kV (derived)."""
    henry = 106.7 / (TAU * 85e3)
    farad = 1.0 / (TAU * 85e3 * 106.7)
    text = "\n".join([
        'title = "link"', 'derating = "as-rated"', drive(85e3, 100.0), capacitor("C1", "in", "a", farad),
        inductor("L1", "a", "ground", henry, 'q = 300\nq_at = "85 kHz"'),
        inductor("L2", "b", "ground", henry), coupling("L1", "L2", 0.2), capacitor("C2", "b", "c", farad),
        resistor("Rload", "c", "ground", 10.33),
        '[state.gone]\nkind = "fault"\nchange = { "resistor.Rload" = "open" }',
    ])  # fmt: skip
    found = {f.id: f.nominal for f in review(read_design(text)).findings}
    assert found["E.current_rms@normal"] == pytest.approx(2.25, abs=0.02)
    assert found["E.current_rms@gone"] == pytest.approx(281.0, abs=0.3)
    assert found["C1.voltage_rms@normal"] == pytest.approx(240.0, abs=2.0)
    assert found["C1.voltage_rms@gone"] == pytest.approx(30e3, rel=2e-3)


def test_t8_one_resonant_capacitor_on_a_half_bridge_carries_half_the_supply() -> None:
    """A drive with an offset of V_dc/2 leaves V_dc/2 on the series capacitor: DC + AC peak add (circuit theory)."""
    found = solve(
        drive(HERTZ, 100.0, "peak", extra='offset = "160 V"'), inductor("L", "in", "a", HENRY, 'resistance = "5 ohm"'),
        capacitor("C", "a", "ground", FARAD),
    )  # fmt: skip
    assert found["C.voltage_peak"] == pytest.approx(160.0 + 100.0 * X0 / 5.0, rel=1e-9)
    assert found["C.voltage_rms"] == pytest.approx(100.0 * X0 / 5.0 / math.sqrt(2.0), rel=1e-9)


def test_c10_string_of_five_units_worst_share() -> None:
    """C10: n = 5 units of 10 % in series: the worst carries 17.0 % over an equal share."""
    extra = 'in_series = 5\nunit_tolerance = "10 %"'
    found = solve(drive(1e3, 500.0, "peak"), capacitor("C", "in", "ground", 1e-6, extra))
    assert found["C.voltage_peak"] == pytest.approx(100.0 * 1.170, abs=0.03)

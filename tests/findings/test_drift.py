"""Values that drift with temperature: wider intervals, self-heating included, and no answer where it doesn't settle."""

from __future__ import annotations

import pytest

from stresscheck.chain import review
from stresscheck.circuit.build import build
from stresscheck.circuit.drift import drift_factors
from stresscheck.design.load import read_design
from stresscheck.findings.drift import drifted

TEXT = """
title = "drift"
derating = "as-rated"
[site]
ambient = ["0 degC", "70 degC"]
[drive.D]
between = ["a", "ground"]
peak = "10 V"
frequency = "100 kHz"
source_resistance = "5 ohm"
rating = { current_peak = "90 A" }
[capacitor.C]
between = ["a", "b"]
value = "10 nF"
temperature_coefficient = "-750 ppm/K"
dissipation_factor = 0.001
EXTRA
rating = { voltage_peak = "9 kV", current_rms = "90 A" }
[inductor.L]
between = ["b", "ground"]
value = "250 uH"
resistance = "2 ohm"
family = "air core"
rating = { current_rms = "90 A", voltage_peak = "9 kV" }
"""


def test_coefficient_widens_the_interval_over_the_ambient_range() -> None:
    network = build(read_design(TEXT.replace("EXTRA", "")))
    axis = network.axes.items[network.axes.index("capacitor.C.value")]
    assert axis.nominal == pytest.approx(10e-9)
    assert axis.low == pytest.approx(10e-9 * (1.0 - 750e-6 * 50.0))
    assert axis.high == pytest.approx(10e-9 * (1.0 + 750e-6 * 25.0))


@pytest.mark.parametrize("per_kelvin", [100e-6, -100e-6])
def test_factors_hold_for_either_reference_temperature(per_kelvin: float) -> None:
    low, high = drift_factors(per_kelvin, 273.15, 343.15)
    for reference in (293.15, 298.15):
        for kelvin in (273.15, 300.0, 343.15):
            assert low <= 1.0 + per_kelvin * (kelvin - reference) <= high


def test_drift_can_carry_a_circuit_through_resonance() -> None:
    """Resonance at 100.7 kHz at 20 degC; warm, C falls and it moves away; cold, it passes the drive at 100 kHz."""
    still = TEXT.replace('temperature_coefficient = "-750 ppm/K"\n', "").replace("EXTRA", "")
    moving = TEXT.replace("EXTRA", "")
    one, two = ({f.id: f for f in review(read_design(t)).findings}["C.voltage_peak@normal"] for t in (still, moving))
    assert two.worst > 1.02 * one.worst
    assert two.worst <= two.bound
    assert 9.625e-9 <= dict(two.at.values)["capacitor.C.value"] <= 10.1875e-9


def test_self_heating_is_inside_the_interval_that_is_searched() -> None:
    design = read_design(TEXT.replace("EXTRA", 'thermal_resistance = "40 K/W"'))
    network = drifted(design, build(design), 0.05, lambda decided: False)
    axis = network.axes.items[network.axes.index("capacitor.C.value")]
    assert axis.low < 10e-9 * (1.0 - 750e-6 * 50.0)
    finding = {f.id: f for f in review(design).findings}["C.voltage_peak@normal"]
    assert finding.verdict == "within"
    hottest = 298.15 + (1.0 - axis.low / 10e-9) / 750e-6 - 5.0
    heat = build(design, {"C": hottest})
    assert heat.axes.items[heat.axes.index("capacitor.C.value")].low == pytest.approx(axis.low, rel=1e-9)


def test_drift_that_feeds_itself_is_no_answer() -> None:
    text = TEXT.replace("EXTRA", 'thermal_resistance = "9000 K/W"').replace('"-750 ppm/K"', '"-3000 ppm/K"')
    found = review(read_design(text)).findings
    assert {f.verdict for f in found} == {"not-checked"}
    assert any("drift" in f.why or "zero" in f.why for f in found)

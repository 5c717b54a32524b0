"""Copper: the coldest winding for voltage, the winding's own temperature for heat, and runaway on both sides of 1."""

from __future__ import annotations

import math

import pytest

from stresscheck.chain import review
from stresscheck.design.load import read_design
from stresscheck.physics.copper import COPPER_COEFFICIENT, ROOM

TEXT = """
title = "tank"
derating = "as-rated"
SITE
[drive.D]
between = ["a", "ground"]
peak = "10 V"
frequency = "100 kHz"
rating = { current_peak = "900 A" }
[inductor.L]
between = ["a", "b"]
value = "100 uH"
resistance = "1 ohm"
family = "air core"
thermal_resistance = "RTH K/W"
rating = { current_rms = "900 A", voltage_peak = "90 kV", dissipation = "90 kW", temperature = "900 degC" }
[capacitor.C]
between = ["b", "ground"]
value = "FARAD F"
rating = { voltage_peak = "90 kV", current_rms = "900 A" }
"""
FARAD = 1.0 / ((2.0 * math.pi * 1e5) ** 2 * 100e-6)


def _found(site: str, rth: float) -> dict[str, object]:
    text = TEXT.replace("SITE", site).replace("RTH", repr(rth)).replace("FARAD", repr(FARAD))
    return {f.id.removesuffix("@normal"): f for f in review(read_design(text)).findings if f.event == "steady"}


def _factor(celsius: float) -> float:
    return 1.0 + COPPER_COEFFICIENT * (celsius - 20.0)


def test_voltage_is_that_of_the_coldest_winding() -> None:
    """At resonance 10 V through R: the current, and with it the capacitor's voltage, grows as copper gets cold."""
    plain, cold = _found("", 0.1), _found('[site]\nambient = ["-20 degC", "50 degC"]', 0.1)
    assert plain["L.current_rms"].worst == pytest.approx(10.0 / math.sqrt(2.0))
    assert cold["L.current_rms"].worst == pytest.approx(10.0 / math.sqrt(2.0) / _factor(-20.0))
    ratio = cold["C.voltage_peak"].worst / plain["C.voltage_peak"].worst
    assert ratio == pytest.approx(1.0 / _factor(-20.0))


@pytest.mark.parametrize("rth", [0.05, 0.5, 1.5])
def test_heat_settles_where_loss_and_cooling_balance(rth: float) -> None:
    """An energy balance: R_th x (R at T) x I^2 is what lifts the winding above the hottest ambient."""
    found = _found('[site]\nambient = ["20 degC", "50 degC"]', rth)
    watt, kelvin = found["L.dissipation"].worst, found["L.temperature"].worst
    current = found["L.current_rms"].worst
    assert kelvin == pytest.approx(ROOM + 30.0 + rth * watt, rel=1e-9)
    assert watt == pytest.approx(current**2 * _factor(kelvin - ROOM + 20.0), rel=1e-9)
    assert found["L.temperature"].bound == pytest.approx(kelvin, rel=1e-5)


@pytest.mark.parametrize(("gain", "runs_away"), [(0.98, False), (1.02, True)])
def test_loop_gain_of_one_divides_settling_from_runaway(gain: float, runs_away: bool) -> None:
    """50 W at 20 degC: k R_th P = 1 at R_th = 1/(0.00393 x 50) K/W."""
    found = _found('[site]\nambient = "20 degC"', gain / (COPPER_COEFFICIENT * 50.0))
    for quantity in ("dissipation", "temperature"):
        finding = found[f"L.{quantity}"]
        if runs_away:
            assert finding.verdict == "not-checked"
            assert "runaway" in finding.why
        else:
            assert finding.worst is not None
            assert finding.verdict in ("within", "above-rating")
    if not runs_away:
        assert found["L.temperature"].worst == pytest.approx(ROOM + 0.98 / COPPER_COEFFICIENT / 0.02, rel=1e-6)


def test_without_thermal_resistance_heat_is_that_of_the_hottest_ambient() -> None:
    text = TEXT.replace("SITE", '[site]\nambient = ["20 degC", "80 degC"]').replace("FARAD", repr(FARAD))
    text = text.replace('thermal_resistance = "RTH K/W"\n', "").replace(', temperature = "900 degC"', "")
    found = {f.id: f for f in review(read_design(text)).findings}
    assert found["L.dissipation@normal"].worst == pytest.approx(50.0 * _factor(80.0))

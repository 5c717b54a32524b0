"""Limits of parts under the shipped policies, each figure checked against the row it stands for."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from rated_parts import COIL, CURVE, KHZ, LINE, allowed, ask, capacitor, inductor, resistor

from stresscheck.design.parts import Resistor
from stresscheck.limits.part_limits import limits_for
from stresscheck.limits.policy import load_policy
from stresscheck.limits.quantities import quantities_of

# --- which ratings a quantity is compared with -----------------------------------------------------


def test_capacitor_voltage_peak_is_compared_with_both_ratings_given() -> None:
    part = capacitor(voltage_dc="1000 V", voltage_peak="900 V")
    assert allowed(ask("src-severe", "capacitor", part, "voltage_peak")) == {
        "voltage_peak": pytest.approx(540.0),
        "voltage_dc": pytest.approx(600.0),
    }


def test_inductor_current_peak_is_compared_with_saturation_and_peak() -> None:
    part = inductor("ferrite core", saturation_current="9 A", current_peak="8 A")
    found = allowed(ask("uniform-50", "inductor", part, "current_peak"))
    assert found == {"saturation_current": 4.5, "current_peak": 4.0}


def test_limit_on_a_curve_moves_with_frequency_and_is_silent_above_it() -> None:
    (limit,) = ask("uniform-80", "capacitor", capacitor(voltage_rms=CURVE), "voltage_rms").limits
    assert not limit.constant
    assert limit.rated(np.array([5e3, 85e3])).tolist() == [450.0, 400.0]
    assert limit.allowed(np.array([5e3, 85e3])).tolist() == pytest.approx([360.0, 320.0])
    assert np.isnan(limit.allowed(np.array([200.1e3]))).all()
    low, high = np.array([5e3, 9e4]), np.array([85e3, 3e5])
    assert limit.allowed_smallest(low, high)[0] == pytest.approx(320.0)
    assert limit.rated_smallest(low, high)[0] == 400.0
    assert np.isnan(limit.allowed_smallest(low, high)[1])
    assert "200000 Hz" in limit.silent_text()


def test_limit_keeps_the_rating_as_written_and_its_source() -> None:
    part = capacitor(voltage_dc="1.0 kV", source="maker's sheet, revision 3, p. 4")
    (limit,) = ask("as-rated", "capacitor", part, "voltage_peak").limits
    assert (limit.rated_text, limit.rating_source) == ("1.0 kV", "maker's sheet, revision 3, p. 4")
    assert limit.constant
    assert limit.silent_text() == ""


def test_limit_without_document_says_that_none_is_named() -> None:
    (limit,) = ask("as-rated", "capacitor", capacitor(voltage_dc="1 kV"), "voltage_peak").limits
    assert limit.rating_source == "capacitor.X.rating of the design, which names no document"


# --- missing ratings -------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("kind", "part", "expected"),
    [
        ("capacitor", capacitor(), {"voltage_peak", "voltage_rms"}),
        ("capacitor", capacitor(voltage_dc="1 kV"), {"voltage_rms"}),
        ("capacitor", capacitor(slew_rate="1 V/us", current_peak="3 A"), {"voltage_peak", "voltage_rms"}),
        ("capacitor", capacitor(voltage_peak="1 kV", current_rms="3 A"), set()),
        ("capacitor", capacitor(voltage_peak="1 kV", reactive_power="3 kvar"), set()),
        ("capacitor", capacitor(voltage_peak="1 kV", dissipation="3 W"), set()),
        ("capacitor", capacitor(voltage_peak="1 kV", voltage_rms=CURVE), set()),
        ("inductor", inductor(None), {"current_peak", "current_rms", "voltage_peak"}),
        ("inductor", inductor("air-core"), {"current_rms", "voltage_peak"}),
        ("inductor", inductor("ferrite", **COIL), {"current_peak"}),
        ("inductor", inductor("ferrite", **COIL, saturation_current="2 A"), set()),
        ("inductor", inductor("ferrite", **COIL, current_peak="2 A"), {"current_peak"}),
        ("resistor", resistor(), {"dissipation"}),
        ("resistor", resistor(dissipation="1 W"), set()),
        ("drive", None, {"current_peak"}),
    ],
)  # fmt: skip
def test_missing_rating_is_reported_once_by_its_group(kind: str, part: Any, expected: set[str]) -> None:
    found = {
        quantity.name: limits_for(load_policy("as-rated"), kind, "X", part, quantity.name, kelvin=300.0, full=False)
        for quantity in quantities_of(kind)
    }
    assert {name for name, limits in found.items() if limits.outcome == "no-rating"} == expected
    for name in expected:
        assert found[name].required
        assert f"{kind}.X.rating" in found[name].why
    others = {limits.outcome for name, limits in found.items() if name not in expected}
    assert others <= {"limits", "not-asked"}


def test_missing_group_beside_a_given_rating_keeps_the_known_limit() -> None:
    found = ask("as-rated", "inductor", inductor("ferrite", current_peak="2 A"), "current_peak")
    assert found.outcome == "no-rating"
    assert "saturation_current" in found.why
    assert [limit.rating_key for limit in found.limits] == ["current_peak"]


def test_part_without_rating_table_is_asked_only_for_what_sign_off_needs() -> None:
    part = Resistor.model_validate({"between": ["a", "b"], "value": "1 ohm"})
    assert ask("as-rated", "resistor", part, "voltage_peak").outcome == "not-asked"
    assert ask("as-rated", "resistor", part, "dissipation").outcome == "no-rating"


# --- temperature -----------------------------------------------------------------------------------


def test_rating_by_temperature_without_temperature_names_what_to_give() -> None:
    found = ask("as-rated", "resistor", resistor(dissipation=LINE), "dissipation")
    assert found.outcome == "no-rating"
    assert found.limits == ()
    assert "thermal_resistance" in found.why
    assert "ambient" in found.why


def test_rating_by_temperature_is_read_at_the_part() -> None:
    found = allowed(ask("as-rated", "resistor", resistor(dissipation=LINE), "dissipation", kelvin=385.65))
    assert found["dissipation"] == pytest.approx(5.0, rel=1e-6)


@pytest.mark.parametrize("kelvin", [340.0, 430.0])
def test_rating_by_temperature_outside_its_points_gives_no_limit(kelvin: float) -> None:
    found = ask("as-rated", "resistor", resistor(dissipation=LINE), "dissipation", kelvin=kelvin)
    assert found.outcome == "no-rating"
    assert "only, and the part reaches" in found.why


@pytest.mark.parametrize("kelvin", [math.nan, math.inf])
def test_temperature_that_is_no_number_counts_as_unknown(kelvin: float) -> None:
    found = ask("as-rated", "resistor", resistor(dissipation=LINE), "dissipation", kelvin=kelvin)
    assert found.outcome == "no-rating"
    assert "isn't known" in found.why


def test_nasa_parallel_line_reaches_zero_at_t2() -> None:
    """T2 = T1 + 0.60 (T3 - T1): 70 to 155 degC gives 121 degC (EEE-INST-002 section R1, secondary)."""
    part = resistor("metal film", dissipation=LINE)
    for celsius, expected in ((70.0, 6.0), (95.5, 3.0), (121.0, 0.0), (140.0, 0.0)):
        found = ask("nasa-eee-inst-002", "resistor", part, "dissipation", kelvin=celsius + 273.15)
        assert allowed(found)["dissipation"] == pytest.approx(expected, abs=1e-5)


def test_nasa_parallel_line_on_a_rating_over_frequency_is_its_fraction() -> None:
    curve = {"by": "frequency", "points": [["10 kHz", "10 W"], ["200 kHz", "5 W"]]}
    (limit,) = ask("nasa-eee-inst-002", "resistor", resistor("film", dissipation=curve), "dissipation").limits
    assert limit.allowed(np.array([1e4, 2e5])).tolist() == pytest.approx([6.0, 3.0])
    assert limit.allowed_fraction == pytest.approx(0.6)
    assert limit.steps(1e4)[1].numbers == "0.6 x 10 W"


def test_nasa_chip_film_power_falls_to_zero_at_118_degc() -> None:
    """Full fraction to 70 degC, straight line to zero at 118 degC (section R1, table 4, transcription)."""
    part = resistor("chip film", dissipation="1 W")
    for celsius, expected in ((20.0, 0.6), (70.0, 0.6), (94.0, 0.3), (118.0, 0.0)):
        found = ask("nasa-eee-inst-002", "resistor", part, "dissipation", kelvin=celsius + 273.15)
        assert allowed(found)["dissipation"] == pytest.approx(expected, abs=1e-12)
    beyond = ask("nasa-eee-inst-002", "resistor", part, "dissipation", kelvin=391.2)
    assert beyond.outcome == "not-checked"
    assert "118 degC" in beyond.why


def test_nasa_solid_tantalum_falls_from_70_to_110_degc() -> None:
    """0.50 at 70 degC, 0.30 at 110 degC, none above, straight line between (section C1, secondary)."""
    part = capacitor("solid tantalum", voltage_dc="50 V")
    for celsius, expected in ((25.0, 25.0), (70.0, 25.0), (90.0, 20.0), (110.0, 15.0)):
        found = ask("nasa-eee-inst-002", "capacitor", part, "voltage_peak", kelvin=celsius + 273.15)
        assert allowed(found)["voltage_dc"] == pytest.approx(expected, rel=1e-12)
    assert ask("nasa-eee-inst-002", "capacitor", part, "voltage_peak", kelvin=383.2).outcome == "not-checked"


@pytest.mark.parametrize(("kelvin", "outcome"), [(383.15, "limits"), (383.2, "not-checked"), (None, "not-checked")])
def test_nasa_ceramic_row_ends_at_110_degc(kelvin: float | None, outcome: str) -> None:
    part = capacitor("C0G", voltage_dc="100 V")
    found = ask("nasa-eee-inst-002", "capacitor", part, "voltage_peak", kelvin=kelvin)
    assert found.outcome == outcome
    if outcome == "limits":
        assert allowed(found)["voltage_dc"] == pytest.approx(60.0)
    else:
        assert "ceramic-voltage" in found.why


def test_nasa_coil_class_180_shows_both_rows_and_the_lower_counts() -> None:
    """160 degC by the class row, 135 degC by 0.75 of the maximum; each less 10 K from rise to hot spot."""
    found = ask("nasa-eee-inst-002", "inductor", inductor(temperature="180 degC"), "temperature")
    values = sorted(float(limit.allowed(KHZ)[0]) - 273.15 for limit in found.limits)
    assert values == pytest.approx([125.0, 150.0])
    assert all(limit.allowed_fraction is None for limit in found.limits)


@pytest.mark.parametrize(("maximum", "hot_spot"), [(85, 65), (105, 85), (125, 105), (130, 110), (150, 130)])
def test_nasa_coil_classes_have_their_hot_spots(maximum: int, hot_spot: int) -> None:
    """EEE-INST-002 section M1, table 4 (transcription)."""
    found = ask("nasa-eee-inst-002", "inductor", inductor(temperature=f"{maximum} degC"), "temperature")
    values = {round(float(limit.allowed(KHZ)[0]) - 273.15, 9) for limit in found.limits}
    assert values == {hot_spot - 10.0, 0.75 * maximum - 10.0}


def test_nasa_coil_of_no_listed_class_has_the_fraction_alone() -> None:
    found = ask("nasa-eee-inst-002", "inductor", inductor(temperature="155 degC"), "temperature")
    (limit,) = found.limits
    assert float(limit.allowed(KHZ)[0]) == pytest.approx(273.15 + 116.25 - 10.0)


# --- voltage of resistors --------------------------------------------------------------------------


def test_nasa_resistor_rms_voltage_is_also_bounded_by_power() -> None:
    part = resistor("film", dissipation="10 W", voltage_rms="300 V")
    found = allowed(ask("nasa-eee-inst-002", "resistor", part, "voltage_rms"))
    assert found["voltage_rms"] == pytest.approx(240.0)
    assert found["dissipation"] == pytest.approx(math.sqrt(0.6 * 10.0 * 50.0 * 0.95), rel=1e-12)


def test_nasa_resistor_that_can_be_set_has_no_voltage_by_power() -> None:
    part = resistor("film", value=["10 ohm", "1 kohm"], dissipation="10 W", voltage_rms="300 V")
    assert set(allowed(ask("nasa-eee-inst-002", "resistor", part, "voltage_rms"))) == {"voltage_rms"}


def test_other_policies_leave_resistor_voltage_to_its_rating() -> None:
    part = resistor("film", dissipation="10 W", voltage_rms="300 V")
    assert set(allowed(ask("src-severe", "resistor", part, "voltage_rms"))) == {"voltage_rms"}


# --- policies, families, filling -------------------------------------------------------------------


@pytest.mark.parametrize(
    ("policy", "quantity", "rating", "filled"),
    [
        ("nasa-eee-inst-002", "voltage_peak", {"voltage_dc": "1 kV"}, False),
        ("nasa-eee-inst-002", "voltage_rms", {"voltage_rms": "1 kV"}, True),
        ("nasa-eee-inst-002", "slew_rate", {"slew_rate": "1 kV/us"}, True),
        ("nasa-eee-inst-002", "reactive_power", {"reactive_power": "1 kvar"}, True),
        ("src-benign", "temperature", {"temperature": "105 degC"}, False),
        ("src-benign", "current_rms", {"current_rms": "1 A"}, True),
    ],
)
def test_row_that_the_document_lacks_is_filled_and_says_so(
    policy: str, quantity: str, rating: dict[str, str], filled: bool
) -> None:
    found = ask(policy, "capacitor", capacitor(**rating), quantity)
    (limit,) = [limit for limit in found.limits if limit.rating_key in rating]
    family = "capacitors of family polypropylene film"
    text = f"{policy} has no row for {quantity} of {family}; filled from uniform-80"
    assert limit.derating_source.startswith(text) is filled
    if filled:
        assert limit.allowed_fraction == 0.8
        assert "own decision" in limit.derating_source


@pytest.mark.parametrize("family", ["vacuum", "gas", "other", "mica"])
def test_nasa_capacitor_family_without_row_is_filled(family: str) -> None:
    found = ask("nasa-eee-inst-002", "capacitor", capacitor(family, voltage_peak="3 kV"), "voltage_peak")
    assert allowed(found) == {"voltage_peak": pytest.approx(2400.0)}
    assert "has no row" in found.limits[0].derating_source


@pytest.mark.parametrize(
    ("family", "hint"), [(None, "isn't given"), ("polypropilene film", "did you mean polypropylene film?")]
)
def test_family_that_is_not_known_is_not_guessed(family: str | None, hint: str) -> None:
    part = capacitor(family, voltage_dc="1 kV", current_rms="3 A")
    found = ask("src-severe", "capacitor", part, "voltage_peak")
    assert found.outcome == "not-checked"
    assert hint in found.why
    assert "ceramic" in found.why
    assert ask("src-severe", "capacitor", part, "current_rms").outcome == "limits"
    assert ask("uniform-80", "capacitor", part, "voltage_peak").outcome == "limits"


def test_family_that_cannot_change_the_answer_is_not_asked_for() -> None:
    found = ask("nasa-eee-inst-002", "resistor", resistor(None, voltage_peak="300 V"), "voltage_peak")
    assert allowed(found) == {"voltage_peak": pytest.approx(240.0)}
    by_power = ask("nasa-eee-inst-002", "resistor", resistor(None, dissipation="3 W"), "dissipation")
    assert by_power.outcome == "not-checked"


def test_policy_without_row_and_without_filling_is_not_checked(tmp_path: Path) -> None:
    text = (
        'name = "own"\ntitle = "t"\ndocument = "d"\nedition = "e"\nsource = "s"\nevidence = "own decision"\n'
        '[row.v]\nkind = "capacitor"\nfamilies = []\nquantity = "voltage_peak"\nallowed_fraction = 0.7\n'
        'clause = "c"\nevidence = "own decision"\n'
    )
    (tmp_path / "own.toml").write_text(text, encoding="utf-8")
    policy = load_policy("own.toml", tmp_path)
    part = capacitor(voltage_dc="1 kV", current_rms="3 A")
    found = limits_for(policy, "capacitor", "X", part, "current_rms", kelvin=None, full=False)
    assert (found.outcome, found.limits) == ("not-checked", ())
    assert "own has no row" in found.why
    assert limits_for(policy, "capacitor", "X", part, "voltage_peak", kelvin=None, full=False).outcome == "limits"

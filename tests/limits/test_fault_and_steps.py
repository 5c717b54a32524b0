"""Full ratings of fault states, the working of a limit, and laws that all policies keep."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from rated_parts import CURVE, KHZ, ask, capacitor, inductor

from stresscheck.limits.part_limits import OUTCOMES, limits_for
from stresscheck.limits.policy import list_policies


def test_fault_state_takes_full_ratings_of_every_policy() -> None:
    part = capacitor("ceramic", voltage_dc="1 kV", voltage_rms=CURVE, temperature="85 degC")
    for policy in list_policies():
        for quantity, value in (("voltage_peak", 1000.0), ("voltage_rms", 400.0), ("temperature", 358.15)):
            found = limits_for(policy, "capacitor", "X", part, quantity, kelvin=None, full=True)
            (limit,) = found.limits
            assert limit.allowed(KHZ)[0] == limit.rated(KHZ)[0] == pytest.approx(value, rel=1e-15)
            assert limit.allowed_fraction == 1.0
            assert "full rating" in limit.derating_source


def test_fault_state_does_not_ask_for_the_family() -> None:
    found = ask("src-severe", "capacitor", capacitor(None, voltage_dc="1 kV"), "voltage_peak", full=True)
    assert found.outcome == "limits"


# --- working ---------------------------------------------------------------------------------------


def test_steps_redo_the_limit_by_numbers() -> None:
    part = capacitor(voltage_rms=CURVE, source="sheet, p. 4")
    (limit,) = ask("src-severe", "capacitor", part, "voltage_rms").limits
    rated, derated = limit.steps(85e3)
    assert (rated.value, rated.unit, rated.source) == (400.0, "V", "sheet, p. 4")
    assert "85 kHz 400 V" in rated.numbers
    assert "f = 85000 Hz" in rated.numbers
    assert (derated.formula, derated.numbers) == ("fraction x V_rated", "0.8 x 400 V")
    assert derated.value == pytest.approx(320.0)
    assert derated.source == limit.derating_source


@pytest.mark.parametrize(
    ("policy", "numbers"),
    [
        ("src-severe", ["180 degC - 20 K"]),
        ("nasa-eee-inst-002", ["0.75 x 180 degC - 10 K", "class 180 degC: 160 degC - 10 K"]),
    ],
)
def test_steps_of_temperatures_show_the_rule(policy: str, numbers: list[str]) -> None:
    found = ask(policy, "inductor", inductor(temperature="180 degC"), "temperature")
    assert [limit.steps(85e3)[1].numbers for limit in found.limits] == numbers


def test_steps_where_the_curve_is_silent_are_none() -> None:
    (limit,) = ask("src-severe", "capacitor", capacitor(voltage_rms=CURVE), "voltage_rms").limits
    assert limit.steps(1e6) == ()


# --- laws ------------------------------------------------------------------------------------------


@given(
    st.sampled_from([policy.name for policy in list_policies()]),
    st.sampled_from(["ceramic", "mica", "polyester", "vacuum", "electrolytic", "solid tantalum", "paper", "other"]),
    st.floats(1.0, 1e5),
    st.one_of(st.none(), st.floats(200.0, 500.0)),
)
def test_law_derated_limit_never_exceeds_the_rating(
    policy: str, family: str, volt: float, kelvin: float | None
) -> None:
    part = capacitor(family, voltage_dc=f"{volt:.6g} V", voltage_rms=CURVE, temperature="125 degC")
    for quantity in ("voltage_peak", "voltage_rms", "temperature"):
        found = ask(policy, "capacitor", part, quantity, kelvin)
        assert found.outcome in OUTCOMES
        assert (found.why != "") is (found.outcome != "limits")
        for limit in found.limits:
            hertz = np.array([1.0, 2e4, 1.9e5])
            assert np.all(limit.allowed(hertz) <= limit.rated(hertz) * (1.0 + 1e-12))
            for text in (limit.rating_source, limit.derating_source, limit.rated_text):
                assert text


def test_law_stricter_uniform_policy_is_stricter_everywhere() -> None:
    part = capacitor(voltage_dc="1 kV", voltage_rms=CURVE, current_rms="3 A", temperature="105 degC")
    for quantity in ("voltage_peak", "voltage_rms", "current_rms", "temperature"):
        levels = [
            float(ask(p, "capacitor", part, quantity).limits[0].allowed(KHZ)[0])
            for p in ("uniform-50", "uniform-80", "as-rated")
        ]
        assert levels == sorted(levels)
        assert len(set(levels)) == 3

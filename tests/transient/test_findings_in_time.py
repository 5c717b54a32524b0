"""Events, gating, single faults, saturation and discharge as a review tells them."""

from __future__ import annotations

import pytest

from stresscheck.chain import review
from stresscheck.design.load import read_design
from stresscheck.design.starter import starter_text
from stresscheck.findings.single_faults import fault_count

TEXT = starter_text()


def _found(text: str, **options: object) -> dict[str, object]:
    return {f.id: f for f in review(read_design(text), **options).findings}


def test_every_state_has_its_events_for_peak_ratings_only() -> None:
    found = _found(TEXT)
    events = {(f.state, f.event) for f in found.values()}
    for state in ("normal", "cold-coil", "capacitor-shorted"):
        assert {(state, e) for e in ("steady", "switch-on", "switch-off", "change")} <= events
    peaks = {"voltage_peak", "current_peak", "slew_rate", "flux_density"}
    assert all(f.quantity in peaks for f in found.values() if f.event != "steady")


def test_event_in_a_fault_state_is_compared_with_the_full_rating() -> None:
    found = _found(TEXT)
    fault, operating = found["L1.voltage_peak@capacitor-shorted/change"], found["L1.voltage_peak@cold-coil/change"]
    assert fault.allowed == pytest.approx(1200.0)
    assert operating.allowed == pytest.approx(0.8 * 1200.0)


def test_shorted_capacitor_s_voltage_does_not_appear_and_its_charge_is_not_carried() -> None:
    found = _found(TEXT)
    assert not any(key.startswith("C1.") and "capacitor-shorted" in key for key in found)


def test_gated_drive_stays_below_the_running_one_and_is_bounded() -> None:
    running = _found(TEXT, states=["normal"])
    gate = 'gating = { on = "100 us", period = "2 ms" }\npeak = "5 V" '
    gated = _found(TEXT.replace('peak = "5 V" ', gate, 1), states=["normal"])
    for key in ("C1.voltage_peak@normal", "C1.current_rms@normal", "L1.current_rms@normal"):
        assert gated[key].worst < 0.8 * running[key].worst
        assert gated[key].worst <= gated[key].bound
    assert {f.event for f in gated.values()} == {"steady"}


def test_gated_drive_that_is_nearly_always_on_equals_the_running_one() -> None:
    running = _found(TEXT, states=["normal"])
    gate = 'gating = { on = "9.9999 ms", period = "10 ms" }\npeak = "5 V" '
    gated = _found(TEXT.replace('peak = "5 V" ', gate, 1), states=["normal"])
    for key in ("C1.voltage_rms@normal", "C1.current_rms@normal", "L1.current_rms@normal"):
        assert gated[key].worst == pytest.approx(running[key].worst, rel=0.02)


def test_saturating_coil_withdraws_what_rests_on_it() -> None:
    """The coil's own current stays above its rating; what was within is no answer any more."""
    text = TEXT.replace('current_rms = "8 A"', 'current_rms = "8 A"\nsaturation_current = "3 A"')
    found = _found(text)
    assert found["L1.current_peak@normal"].verdict == "above-rating"
    withdrawn = found["C1.voltage_peak@normal"]
    assert withdrawn.verdict == "not-checked"
    assert "L1 is driven above its saturation current" in withdrawn.why
    assert _found(TEXT)["C1.voltage_peak@normal"].verdict == "within"


def test_coil_that_saturates_in_an_event_only_withdraws_that_event() -> None:
    text = """
title = "inrush"
derating = "as-rated"
[drive.D]
between = ["in", "ground"]
peak = "10 V"
frequency = "50 Hz"
source_resistance = "0.01 ohm"
rating = { current_peak = "900 A" }
[inductor.L]
between = ["in", "out"]
value = "10 uH"
resistance = "10 mohm"
rating = { current_rms = "90 A", saturation_current = "20 A", voltage_peak = "90 V" }
[capacitor.C]
between = ["out", "ground"]
value = "100 uF"
rating = { voltage_peak = "90 V", current_rms = "90 A" }
"""
    found = _found(text)
    assert found["L.current_peak@normal"].verdict == "within"
    assert found["L.current_peak@normal/switch-on"].verdict == "above-rating"
    assert found["C.voltage_peak@normal"].verdict == "within"
    assert found["C.voltage_peak@normal/switch-on"].verdict == "not-checked"


def test_single_faults_name_what_else_exceeds_and_what_can_t_be_solved() -> None:
    design = read_design(TEXT)
    record = review(design, every_fault=True)
    assert len(record.single_faults) == fault_count(design) == 4
    told = {(f.part, f.how): f for f in record.single_faults}
    assert told["C1", "short"].outcome == "none found"
    assert record.verdict == review(design).verdict
    text = TEXT.replace('source_resistance = "0.5 ohm"\n', "").replace("[state.", "[capacitor.C9]\n"
        'between = ["in", "ground"]\nvalue = "1 nF"\nrating = { voltage_dc = "90 V", current_rms = "1 A" }\n[state.', 1)  # fmt: skip
    faults = {(f.part, f.how): f for f in review(read_design(text), every_fault=True).single_faults}
    assert faults["C9", "short"].outcome == "no solution"
    assert faults["C9", "short"].why


def test_single_fault_that_exceeds_a_rating_is_in_its_table() -> None:
    text = TEXT.replace("[capacitor.C1]", '[resistor.R1]\nbetween = ["x", "ground"]\nvalue = "20 ohm"\n'
        'rating = { dissipation = "90 W" }\n[capacitor.C1]').replace('["top", "ground"]', '["top", "x"]')  # fmt: skip
    text = text.replace('current_rms = "12 A"', 'current_rms = "0.4 A"')
    told = {(f.part, f.how): f for f in review(read_design(text), every_fault=True).single_faults}
    short = told["R1", "short"]
    assert short.outcome == "exceeds"
    assert short.findings[0].part != "R1"
    assert any(f.id.startswith("C1.current_rms") for f in short.findings)


def test_bleeder_is_advised_with_value_voltage_and_power() -> None:
    text = TEXT.replace('peak = "5 V" ', 'offset = "600 V"\npeak = "5 V" ', 1)
    record = review(read_design(text))
    told = [c for c in record.cautions if "bleeder of at most" in c.text]
    assert told
    assert all(word in told[0].text for word in ("ohm for", "takes C1 alone to", "while it is on"))


def test_interruption_leaves_events_not_checked_instead_of_out() -> None:
    """What isn't looked at is said: a review whose events are missing would read as a pass."""
    text = TEXT.replace('peak = "5 V" ', 'any_waveform = true\npeak = "5 V" ', 1)
    whole = _found(text)
    cut = _found(text, interrupted=lambda: True)
    assert set(cut) == set(whole)
    events = [f for f in cut.values() if f.event != "steady"]
    assert {f.event for f in events} == {"switch-on", "switch-off", "change", "any-waveform"}
    assert all(f.verdict == "not-checked" and "interrupted" in f.why for f in events)


def test_any_waveform_of_a_gated_drive_is_no_answer() -> None:
    both = 'any_waveform = true\ngating = { on = "100 us", period = "2 ms" }\npeak = "5 V" '
    found = _found(TEXT.replace('peak = "5 V" ', both, 1))
    assert {f.verdict for f in found.values()} == {"not-checked"}
    assert all("any_waveform" in f.why for f in found.values())

"""Cautions at each side of every threshold, one a subject, and the words that none of them may use."""

from __future__ import annotations

import math
import re
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from stresscheck.cautions.caution import Caution
from stresscheck.cautions.discharge import seconds_to
from stresscheck.cautions.facts import CapacitorFact, Facts, NodeFact
from stresscheck.cautions.registry import HAZARDS, cautions_for

CLEARING = re.compile(
    r"\b(safe|safely|harmless|compliant|complies|permitted|allowed|passes|passed|cleared|acceptable"
    r"|no (danger|risk|hazard))\b",
    re.IGNORECASE,
)


def node(peak: float = 0.0, rms: float | None = None, dc: float = 0.0, hertz: float = 50.0, **more: Any) -> NodeFact:
    given_rms = max(0.0, peak - dc) / math.sqrt(2.0) if rms is None else rms
    fields: dict[str, Any] = {
        "node": "hot", "state": "normal", "volt_rms": given_rms, "volt_peak": peak, "volt_dc": dc,
        "hertz": hertz, "drive": "bridge", "drive_volt_peak": 12.0, "gain": peak / 12.0,
        "resonance_hertz": 85.09e3, "reachable": True,
    }  # fmt: skip
    return NodeFact(**(fields | more))


def cap(farad: float, volt: float, *, path: bool = True, ohm: float | None = 1.0, **more: Any) -> CapacitorFact:
    fields: dict[str, Any] = {
        "part": "C1", "state": "normal", "farad": farad, "volt_peak": volt, "volt_dc_trapped": None,
        "has_discharge_path": path, "discharge_ohm": ohm, "kind_family": "polypropylene film",
    }  # fmt: skip
    return CapacitorFact(**(fields | more))


def run(*facts: NodeFact | CapacitorFact, low: float = 50.0, high: float = 50.0) -> tuple[Caution, ...]:
    nodes = tuple(fact for fact in facts if isinstance(fact, NodeFact))
    capacitors = tuple(fact for fact in facts if isinstance(fact, CapacitorFact))
    return cautions_for(Facts(nodes, capacitors, "ordinary", low, high))


def ids(*facts: NodeFact | CapacitorFact, **band: float) -> list[str]:
    return [caution.id for caution in run(*facts, **band)]


def one(name: str, *facts: NodeFact | CapacitorFact, **band: float) -> Caution:
    (found,) = [caution for caution in run(*facts, **band) if caution.id == name]
    return found


# --- touch -----------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("fact", "expected"),
    [
        (node(42.39), []),
        (node(42.4), ["touch-notice.hot"]),
        (node(42.39, rms=0.0, dc=42.39), []),
        (node(42.4, rms=0.0, dc=42.4), ["touch-notice.hot"]),
        (node(70.69, rms=49.99), ["touch-notice.hot"]),
        (node(70.72, rms=50.0), ["touch-voltage.hot"]),
        (node(49.99, rms=0.0, dc=49.99), ["touch-notice.hot"]),
        (node(50.0, rms=0.0, dc=50.0), ["touch-voltage.hot"]),
        (node(72.5, rms=30.0, dc=39.9), ["touch-notice.hot"]),
        (node(72.5, rms=30.0, dc=40.0), ["touch-voltage.hot"]),
        (node(1e4, reachable=False), []),
        (node(0.0), []),
    ],
)
def test_touch_fires_at_each_figure_and_not_below(fact: NodeFact, expected: list[str]) -> None:
    assert ids(fact) == expected


def test_touch_of_several_states_names_the_worst_once() -> None:
    facts = (node(100.0), node(900.0, state="unloaded"), node(60.0, state="third"))
    found = one("touch-voltage.hot", *facts)
    assert ids(*facts) == ["touch-voltage.hot"]
    assert "in state unloaded" in found.text
    assert "900 V peak" in found.text
    assert found.value == pytest.approx(900.0 / math.sqrt(2.0))
    assert found.threshold == 50.0


def test_touch_notice_in_one_state_gives_way_to_the_full_one_in_another() -> None:
    assert ids(node(45.0), node(80.0, state="unloaded")) == ["touch-voltage.hot"]


def test_touch_has_no_relief_for_high_frequency() -> None:
    assert "touch-voltage.hot" in ids(node(80.0, hertz=27.12e6), high=27.12e6)


# --- radio frequency -------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("peak", "hertz", "fires"),
    [
        (42.4, 30e3, True),
        (42.4, 29.999e3, False),
        (42.39, 30e3, False),
        (42.39, 1e6, False),
        (500.0, 50.0, False),
    ],
)
def test_rf_burn_needs_touch_and_30_khz(peak: float, hertz: float, fires: bool) -> None:
    assert ("rf-burn.hot" in ids(node(peak, hertz=hertz), high=hertz)) is fires


@pytest.mark.parametrize(("hertz", "silent"), [(99.9e3, False), (100e3, True)])
def test_rf_burn_from_100_khz_says_that_nothing_warns(hertz: float, silent: bool) -> None:
    found = one("rf-burn.hot", node(500.0, hertz=hertz), high=hertz)
    assert ("without prior tingling" in found.text and "brushing" in found.text) is silent
    assert ("IEEE C95.1" in found.source) is silent


def test_rf_burn_takes_the_upper_end_of_the_band() -> None:
    assert one("rf-burn.hot", node(500.0, hertz=25e3), high=40e3).value == 40e3


def test_rf_burn_of_pure_dc_or_out_of_reach_is_none() -> None:
    assert ids(node(60.0, rms=0.0, dc=60.0), high=1e6) == ["touch-voltage.hot"]
    assert ids(node(500.0, hertz=1e6, reachable=False), high=1e6) == []


# --- stored energy ---------------------------------------------------------------------------------


def farad_for(joule: float, volt: float) -> float:
    return 2.0 * joule / volt**2


@pytest.mark.parametrize(
    ("joule", "volt", "fires"),
    [
        (0.2499, 400.0, False),
        (0.2501, 400.0, True),
        (0.2501, 399.9, False),
        (0.999, 399.9, False),
        (1.001, 399.9, True),
        (1.001, 100.0, True),
        (1.001, 99.9, False),
        (99.9, 99.9, False),
        (100.1, 99.9, True),
        (100.1, 12.0, True),
        (0.2501, 30e3, True),
    ],
)
def test_stored_energy_fires_above_the_tier_of_its_voltage(joule: float, volt: float, fires: bool) -> None:
    assert ("stored-energy.C1" in ids(cap(farad_for(joule, volt), volt))) is fires


def test_stored_energy_exactly_at_the_figure_does_not_fire() -> None:
    assert cap(2e-4, 100.0).joule == 1.0
    assert "stored-energy.C1" not in ids(cap(2e-4, 100.0))


@pytest.mark.parametrize(("joule", "volt", "shock"), [(9.99, 100.0, False), (10.01, 100.0, True), (200.0, 99.9, False)])
def test_stored_energy_older_tier_is_named_from_10_joule(joule: float, volt: float, shock: bool) -> None:
    found = one("stored-energy.C1", cap(farad_for(joule, volt), volt))
    assert ("risk of shock" in found.text) is shock is ("DOE" in found.source)


def test_stored_energy_state_that_fires_counts_before_one_with_more_energy() -> None:
    """0.9 J at 399 V stays below its tier while 0.3 J at 450 V is above its own."""
    quiet, firing = cap(farad_for(0.9, 399.0), 399.0), cap(farad_for(0.3, 450.0), 450.0, state="unloaded")
    assert "in state unloaded" in one("stored-energy.C1", quiet, firing).text


def test_stored_energy_counts_trapped_dc_that_outlasts_the_peak() -> None:
    assert one("stored-energy.C1", cap(1e-5, 10.0, volt_dc_trapped=-400.0)).value == pytest.approx(0.8)


@pytest.mark.parametrize(("family", "named"), [("electrolytic", True), ("polypropylene film", False), ("", False)])
def test_stored_energy_of_electrolytics_says_that_voltage_recovers(family: str, named: bool) -> None:
    found = one("stored-energy.C1", cap(1e-3, 400.0, kind_family=family))
    assert ("recovers 10 to 15 %" in found.text) is named


# --- stored charge ---------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("farad", "volt", "fires"),
    [
        (0.11e-6, 42.4, False),
        (0.11e-6, 42.41, True),
        (0.1e-6, 42.41, False),
        (0.1e-6, 449.0, False),
        (0.11e-6, 450.0, True),
        (0.0999e-6, 450.0, False),
        (45e-6 / 512.0, 512.0, False),
        (45.1e-6 / 450.1, 450.1, True),
        (44.9e-6 / 450.1, 450.1, False),
        (45.1e-6 / 15e3, 15e3, True),
        (44.9e-6 / 15e3, 15e3, False),
        (2.0 * 0.351 / 15001.0**2, 15001.0, True),
        (2.0 * 0.349 / 15001.0**2, 15001.0, False),
    ],
)
def test_stored_charge_fires_above_the_tier_of_its_voltage(farad: float, volt: float, fires: bool) -> None:
    assert ("stored-charge.C1" in ids(cap(farad, volt))) is fires


def test_stored_charge_state_that_fires_counts_before_one_with_more_charge() -> None:
    quiet, firing = cap(0.05e-6, 449.0), cap(0.2e-6, 100.0, state="bigger")
    assert quiet.farad * quiet.volt > firing.farad * firing.volt
    assert "in state bigger" in one("stored-charge.C1", quiet, firing).text


# --- discharge -------------------------------------------------------------------------------------


@pytest.mark.parametrize(("volt", "expected"), [(42.39, []), (42.4, ["no-discharge-path.C1"])])
def test_no_discharge_path_fires_from_the_notice_up(volt: float, expected: list[str]) -> None:
    assert ids(cap(1e-9, volt, path=False, ohm=None)) == expected


@pytest.mark.parametrize(("trapped", "expected"), [(42.39, []), (42.4, ["trapped-dc.C1"]), (-160.0, ["trapped-dc.C1"])])
def test_trapped_dc_fires_from_the_notice_up(trapped: float, expected: list[str]) -> None:
    assert ids(cap(1e-9, 40.0, volt_dc_trapped=trapped)) == expected


def test_trapped_dc_without_path_is_one_caution_with_both_figures() -> None:
    found = run(cap(1e-9, 412.0, path=False, ohm=None, volt_dc_trapped=160.0))
    assert [caution.id for caution in found] == ["trapped-dc.C1"]
    assert found[0].text.startswith("412 V peak can stay on C1, 160 V of it trapped DC")
    assert found[0].value == 412.0


@pytest.mark.parametrize(("seconds", "threshold"), [(0.999, None), (1.001, 1.0), (4.999, 1.0), (5.001, 5.0)])
def test_slow_discharge_fires_above_one_and_five_seconds(seconds: float, threshold: float | None) -> None:
    """400 V to 60 V: t = R C ln(400/60)."""
    farad = 1e-9
    found = run(cap(farad, 400.0, ohm=seconds / farad / math.log(400.0 / 60.0)))
    assert [caution.threshold for caution in found] == ([] if threshold is None else [threshold])
    if threshold is not None:
        assert found[0].id == "slow-discharge.C1"
        assert found[0].value == pytest.approx(seconds)
        assert ("plug" in found[0].text.split("Asked for")[0]) is (threshold == 1.0)


@pytest.mark.parametrize(("volt", "expected"), [(60.0, []), (60.1, ["discharge-time-unknown.C1"])])
def test_discharge_path_of_unknown_resistance_is_asked_about(volt: float, expected: list[str]) -> None:
    assert ids(cap(1e-9, volt, ohm=None)) == expected
    assert ids(cap(1e-9, volt, ohm=math.inf)) == expected


@pytest.mark.parametrize(
    ("start", "end", "time", "rc"), [(400.0, 60.0, 5.0, 2.64), (1e3, 50.0, 60.0, 20.0), (5e3, 50.0, 300.0, 65.1)]
)
def test_seconds_to_agrees_with_the_check_values(start: float, end: float, time: float, rc: float) -> None:
    """t = R C ln(V0/V): circuit theory, three check values printed to three digits."""
    assert time / seconds_to(1.0, 1.0, start, end) == pytest.approx(rc, rel=2e-3)
    assert seconds_to(2.0, 3.0, end, end) == 0.0


def test_discharge_names_what_documents_ask_for() -> None:
    text = one("no-discharge-path.C1", cap(1e-9, 400.0, path=False)).text
    for words in ("60 V in 5 s", "50 V in 1 min", "in 5 min", "NEC 460.6", "8 CCR 2893(a)", "75 V in 3 min"):
        assert words in text


# --- figures that are missing ----------------------------------------------------------------------


def test_node_without_figure_is_treated_as_live() -> None:
    found = run(node(5.0), node(math.nan, state="odd"))
    assert [caution.id for caution in found] == ["unknown-voltage.hot"]
    assert "in state odd" in found[0].text
    assert found[0].value == 42.4
    assert ids(node(math.nan, reachable=False)) == []


def test_capacitor_without_figure_is_treated_as_live() -> None:
    assert ids(cap(1e-9, math.nan)) == ["unknown-charge.C1"]
    assert ids(cap(1e-9, math.inf)) == ["unknown-charge.C1"]


def test_node_and_capacitor_of_one_name_keep_their_own_cautions() -> None:
    assert ids(node(math.nan, node="C1"), cap(1e-9, math.nan)) == ["unknown-charge.C1", "unknown-voltage.C1"]


def test_known_states_still_count_beside_one_without_figure() -> None:
    assert ids(node(500.0), node(math.nan, state="odd")) == ["touch-voltage.hot", "unknown-voltage.hot"]


# --- order, words ----------------------------------------------------------------------------------

EVERYTHING = (
    node(500.0, hertz=1e6),
    node(45.0, node="arm", hertz=1e6),
    node(math.nan, node="odd", hertz=1e6),
    node(60.0, node="bus", rms=1.0, dc=59.0, hertz=1e6),
    cap(100e-6, 800.0, kind_family="electrolytic", ohm=1e6, part="C9"),
    cap(1e-6, 500.0, part="C2", path=False, ohm=None),
    cap(1e-6, 500.0, part="C3", volt_dc_trapped=160.0),
    cap(1e-6, 500.0, part="C4", ohm=None),
    cap(
        1e-6,
        20e3,
        part="C5",
        ohm=3e6,
        drive="bridge",
        drive_volt_peak=12.0,
        gain=1700.0,
        resonance_hertz=85e3,
    ),
    cap(3e-6, 200.0, part="C6"),
    cap(3e-6, math.nan, part="C7"),
)


def test_cautions_are_ordered_by_severity_then_subject() -> None:
    found = run(*EVERYTHING, high=1e6)
    order = {
        "touch-voltage": 0, "unknown-voltage": 1, "unknown-charge": 1, "stored-energy": 2,
        "trapped-dc": 3, "no-discharge-path": 3, "rf-burn": 4, "stored-charge": 5,
        "slow-discharge": 6, "discharge-time-unknown": 6, "touch-notice": 7,
    }  # fmt: skip
    keys = [(order[caution.id.split(".")[0]], caution.subject) for caution in found]
    assert keys == sorted(keys)
    assert {caution.id.split(".")[0] for caution in found} == set(order)
    assert len(HAZARDS) == 8


def test_cautions_are_one_for_a_hazard_and_a_subject() -> None:
    found = [caution.id for caution in run(*EVERYTHING, *EVERYTHING, high=1e6)]
    assert len(found) == len(set(found))


def test_every_caution_defers_names_its_limits_and_its_source() -> None:
    for caution in run(*EVERYTHING, high=1e6):
        assert "local codes" in caution.text
        assert "licensed or qualified person" in caution.text
        assert "Not covered: " in caution.text
        assert "evidence: " in caution.source
        assert "edition: " in caution.source
        assert caution.evidence
        assert math.isfinite(caution.value)
        assert caution.threshold is not None


def test_every_caution_begins_with_its_figure_where_it_has_one() -> None:
    for caution in run(*EVERYTHING, high=1e6):
        if not caution.id.startswith("unknown"):
            assert re.match(r"[0-9.]+ ([kMnum]?[VJCs]|min|h)\b", caution.text), caution.text


def test_no_caution_uses_a_word_that_clears() -> None:
    for caution in run(*EVERYTHING, high=1e6):
        assert CLEARING.search(caution.text) is None, caution.text
    assert CLEARING.search("this node is safe to touch") is not None


def test_touch_text_names_peak_rms_dc_and_the_reason() -> None:
    text = one("touch-voltage.hot", node(218.4, rms=154.44, dc=0.0, hertz=85.1e3), high=85.1e3).text
    assert text.startswith("219 V peak, 155 V RMS of AC, 0 V DC on node hot")
    assert "Reason: gain 18.2 x drive bridge 12 V peak at the resonance at 85.09 kHz." in text
    assert "wet skin, children, large contact areas" in text


def test_reason_without_gain_or_resonance_says_what_is_known() -> None:
    bare = node(500.0, drive_volt_peak=None, gain=None, resonance_hertz=None)
    assert "Reason: drive bridge." in one("touch-voltage.hot", bare).text
    assert "Reason" not in one("touch-voltage.hot", node(500.0, drive="")).text


def test_nothing_entered_triggers_nothing() -> None:
    assert run() == ()
    assert run(node(5.0), cap(1e-9, 5.0)) == ()


sizes = st.floats(0.0, 1e5)


@given(sizes, sizes, st.floats(1.0, 1e8), st.floats(1.0, 3.0))
def test_law_more_voltage_never_takes_a_touch_caution_away(rms: float, dc: float, hertz: float, more: float) -> None:
    """Raising every voltage keeps each subject cautioned, at the same tier or the fuller one."""
    rank = {"touch-notice": 1, "touch-voltage": 2}

    def tier(scale: float) -> int:
        fact = node(scale * (dc + math.sqrt(2.0) * rms), rms=scale * rms, dc=scale * dc, hertz=hertz)
        return max((rank.get(name.split(".")[0], 0) for name in ids(fact, high=hertz)), default=0)

    assert tier(more) >= tier(1.0)


@given(st.floats(1e-12, 1e-2), st.floats(1.0, 5e4), st.floats(1.0, 10.0))
def test_law_more_capacitance_never_takes_a_stored_caution_away(farad: float, volt: float, more: float) -> None:
    small, large = set(ids(cap(farad, volt))), set(ids(cap(farad * more, volt)))
    assert small <= large

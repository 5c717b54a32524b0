"""Every format holds the same content; free text comes out harmless; figures are rounded toward danger."""

from __future__ import annotations

import json
import re

import pytest

from stresscheck.chain import review
from stresscheck.design.load import read_design
from stresscheck.design.starter import starter_text
from stresscheck.findings.finding import EVENTS
from stresscheck.report import figures
from stresscheck.report.formats import FORMATS, renderer
from stresscheck.report.record import Review
from stresscheck.report.terminal_format import bar

CONTRACT = {
    "schema", "version", "design", "derating", "verdict", "counts", "resonances", "findings", "cautions", "checklist",
    "accepted",
}  # fmt: skip
FINDING = {
    "id", "state", "event", "part", "kind", "quantity", "unit", "nominal", "worst", "bound", "rated",
    "allowed_fraction", "allowed", "ratio", "verdict", "at", "working", "rating_source", "derating_source", "why",
}  # fmt: skip
CLEARING = re.compile(r"\b(safe|compliant|permitted|passes|passed)\b", re.IGNORECASE)


def _reviews() -> dict[str, Review]:
    ready = starter_text()
    over = ready.replace('peak = "5 V"', 'peak = "50 V"')
    gone = ready.replace('voltage_dc = "1600 V"            # or voltage_peak\n', "")
    accepted = ready + (
        '[accept.one]\nfinding = "L1.current_rms@normal"\nreason = "measured"\nby = "two of us"\nuntil = 2030-01-01\n'
    )
    return {name: review(read_design(text)) for name, text in
            (("ready", ready), ("exceeded", over), ("unanswered", gone), ("accepted", accepted))}  # fmt: skip


REVIEWS = _reviews()


@pytest.mark.parametrize("name", REVIEWS)
@pytest.mark.parametrize("form", FORMATS)
def test_format_holds_every_finding_caution_and_source(name: str, form: str) -> None:
    record = REVIEWS[name]
    text = renderer(form)(record).replace("\\", "")
    flat = " ".join(text.split())
    assert record.verdict in flat.lower()
    for finding in record.findings:
        assert finding.quantity in flat
        if finding.verdict != "within" or form != "terminal":
            assert finding.id in flat
        if finding.why and form == "json":
            assert finding.why in flat
    for caution in record.cautions:
        assert caution.id in flat
        assert "local codes" in caution.text
    assert record.design.sha256 in flat
    assert not CLEARING.search(flat)


def test_verdicts_of_the_four_reviews() -> None:
    assert {name: r.verdict for name, r in REVIEWS.items()} == {
        "ready": "ready", "exceeded": "exceeded", "unanswered": "unanswered", "accepted": "ready",
    }  # fmt: skip
    assert dict(REVIEWS["accepted"].counts)["accepted"] == 1


@pytest.mark.parametrize("name", REVIEWS)
def test_json_has_the_keys_of_the_contract(name: str) -> None:
    data = json.loads(renderer("json")(REVIEWS[name]), parse_constant=lambda c: pytest.fail(c))
    assert set(data) >= CONTRACT
    assert data["schema"] == "stresscheck.review/1"
    assert set(data["counts"]) == {
        "within", "unproved", "above-derated", "above-rating", "no-rating", "not-checked", "accepted",
    }  # fmt: skip
    for finding in data["findings"]:
        assert set(finding) >= FINDING
        assert finding["event"] in EVENTS
        moment = "" if finding["event"] == "steady" else f"/{finding['event']}"
        assert finding["id"] == f"{finding['part']}.{finding['quantity']}@{finding['state']}{moment}"
        for step in finding["working"]:
            assert set(step) == {"symbol", "formula", "numbers", "value", "unit", "source"}


@pytest.mark.parametrize("width", [60, 80, 120])
def test_terminal_keeps_to_its_width_and_cuts_nothing(width: int) -> None:
    from stresscheck.report.terminal_format import render

    text = render(REVIEWS["exceeded"], width)
    assert max(len(line) for line in text.splitlines()) <= width
    assert "…" not in text


def test_terminal_color_changes_no_words() -> None:
    from stresscheck.report.terminal_format import render

    plain, colored = render(REVIEWS["exceeded"]), render(REVIEWS["exceeded"], color=True)
    assert "\x1b[" in colored
    assert re.sub(r"\x1b\[[0-9;]*m", "", colored) == plain


@pytest.mark.parametrize("hostile", ["Q[/] L[red]x", "a|b`c<script>alert(1)</script>", "*_#~", "x" * 200, "=1+1"])
def test_hostile_title_comes_out_harmless_in_every_format(hostile: str) -> None:
    text = starter_text().replace("Series tank to begin with (invented)", hostile)
    record = review(read_design(text))
    json_text = renderer("json")(record)
    assert json.loads(json_text)["design"]["title"] == hostile
    markdown = renderer("markdown")(record)
    assert "<script>" not in markdown
    assert not re.search(r"(?<!\\)\|b", markdown)
    terminal = renderer("terminal")(record)
    assert hostile.replace(" ", "") in terminal.splitlines()[0].replace(" ", "") + "".join(terminal.split()[:40])


def test_figures_are_rounded_toward_danger() -> None:
    assert figures.stress(1.0001, "V") == "1.001 V"
    assert figures.limit(1.9999, "V") == "1.999 V"
    assert figures.percent(1.00001) == "100.1 %"
    assert figures.percent(0.5) == "50.0 %"
    assert figures.stress(313.1500001, "K") == "40.01 degC"
    assert figures.percent(None) == "-"


def test_bar_over_the_limit_goes_beyond_its_mark() -> None:
    over = next(f for f in REVIEWS["exceeded"].findings if f.verdict == "above-rating")
    within = next(f for f in REVIEWS["ready"].findings if f.verdict == "within")
    assert "|>" in bar(over)
    assert bar(within).endswith("|")
    assert bar(within).isascii()


def test_corners_line_stands_where_corners_fall_short() -> None:
    text = renderer("terminal")(REVIEWS["exceeded"])
    assert "corners alone would have said" in text

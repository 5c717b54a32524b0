"""Every format of the registry says everything of reviews made by hand, in order of need, and lets no text act."""

from __future__ import annotations

import dataclasses
import json
import math
import re
import unicodedata

import pytest
from sample_reviews import EXCEEDED, HOSTILE, READY, SAMPLES, UNANSWERED, VOLT

from stresscheck.report import figures, json_format, terminal_format
from stresscheck.report.formats import FORMATS, render_all, renderer
from stresscheck.report.plain_text import harmless
from stresscheck.report.record import Review

EVERY = [(form, name) for form in FORMATS for name in SAMPLES]
PEOPLE = [form for form in FORMATS if form != "json"]


def _flat(form: str, record: Review) -> str:
    """Text without folds and escapes."""
    return " ".join(renderer(form)(record).replace("\\", "").split())


@pytest.mark.parametrize(("form", "name"), EVERY)
def test_format_of_a_sample_shows_figures_verdict_and_reason_of_every_finding(form: str, name: str) -> None:
    record = SAMPLES[name]
    flat = _flat(form, record)
    for finding in record.findings:
        for key in ("nominal", "worst", "bound", "allowed"):
            value = getattr(finding, key)
            if value is None:
                continue
            shown = {"nominal": figures.plain, "allowed": figures.limit}.get(key, figures.stress)(value, finding.unit)
            assert (repr(value) if form == "json" else shown) in flat, (finding.id, key)
        if form != "json" and finding.ratio is not None:
            assert figures.room(finding) in flat
        assert finding.verdict in flat
        assert all(remark in flat for remark in finding.remarks)
        assert finding.verdict == "within" or finding.reason in flat


@pytest.mark.parametrize(("form", "name"), EVERY)
def test_format_of_a_sample_shows_everything_around_the_findings(form: str, name: str) -> None:
    record = SAMPLES[name]
    flat = _flat(form, record)
    for caution in record.cautions:
        assert caution.id in flat
        assert caution.text in flat
        assert caution.source in flat
    for line in record.checklist:
        assert line.text in flat
        assert line.because in flat
    for item in record.accepted:
        for text in (item.finding, item.reason, item.by, item.until):
            assert text in flat
    for text in (*record.assumptions, *record.problems, record.design.sha256, record.version, record.derating.name,
                 record.derating.source, record.derating.edition, "data sheet, revision 3, p. 4"):  # fmt: skip
        assert text in flat
    for word, number in record.counts:
        assert not number or re.search(rf'{number} {word}|"{word}": {number}', flat)
    for mode in record.resonances:
        assert (repr(mode.hertz) if form == "json" else figures.plain(mode.hertz, "Hz")) in flat


@pytest.mark.parametrize(("form", "name"), EVERY)
def test_format_rendered_twice_gives_the_same_text(form: str, name: str) -> None:
    assert renderer(form)(SAMPLES[name]) == renderer(form)(dataclasses.replace(SAMPLES[name]))


@pytest.mark.parametrize("form", FORMATS)
def test_hostile_text_reaches_no_output_with_a_character_that_acts(form: str) -> None:
    text = renderer(form)(UNANSWERED)
    assert all(c == "\n" or unicodedata.category(c)[0] not in "C" for c in text)


def test_hostile_text_in_markdown_starts_no_markup_of_its_own() -> None:
    text = renderer("markdown")(UNANSWERED)
    assert not re.search(r"(?<!\\)<(?!U\+)", text.replace("\\<", ""))
    rows = [line for line in text.splitlines() if line.startswith("| ")]
    assert {len(re.findall(r"(?<!\\)\|", row)) for row in rows if "Ctank" in row} == {8}


def test_hostile_text_in_json_comes_back_as_it_was() -> None:
    data = json.loads(renderer("json")(UNANSWERED))
    assert data["design"]["title"] == HOSTILE
    assert renderer("json")(UNANSWERED).isascii()


@pytest.mark.parametrize("value", [math.nan, math.inf, -math.inf])
def test_json_of_a_number_it_cannot_carry_is_null(value: float) -> None:
    mode = dataclasses.replace(READY.resonances[0], ring_time_s=value)
    record = dataclasses.replace(
        READY, resonances=(mode,), findings=(dataclasses.replace(VOLT, bound=value),),
    )  # fmt: skip
    data = json.loads(renderer("json")(record), parse_constant=lambda c: pytest.fail(c))
    assert data["resonances"][0]["ring_time_s"] is None
    assert data["findings"][0]["bound"] is None


@pytest.mark.parametrize("width", [40, 80, 132])
@pytest.mark.parametrize("name", SAMPLES)
def test_terminal_of_a_sample_at_any_width_loses_no_character(name: str, width: int) -> None:
    text = terminal_format.render(SAMPLES[name], width)
    assert max(map(len, text.splitlines())) <= max(width, 50)
    packed = re.sub(r"\s", "", text)
    for finding in SAMPLES[name].findings:
        for note in (finding.why, *finding.remarks):
            assert re.sub(r"\s", "", harmless(note)) in packed


def test_terminal_answers_at_its_top_what_is_worst_why_and_where() -> None:
    top = "\n".join(terminal_format.render(EXCEEDED).split("\n\n")[1].splitlines())
    assert top.startswith("EXCEEDED")
    for text in ("Ctank.voltage_peak@normal", "1.001 kV", "gain 18.2 x drive", "Ctank 142.5 nF", "1 above-rating"):
        assert text in " ".join(top.split())


def test_terminal_lists_findings_by_need_and_accepted_ones_with_their_verdict() -> None:
    text = terminal_format.render(EXCEEDED)
    heads = ["above-rating (1)", "above-derated (1)", "accepted (1), not counted", "within (1)"]
    places = [text.index(head) for head in heads]
    assert places == sorted(places)
    assert "Ctank.voltage_peak@fault, above-derated" in text


def test_terminal_of_ready_review_with_accepted_findings_claims_nothing_about_them() -> None:
    assert "every finding that counts" in terminal_format.render(READY)


def test_terminal_figures_just_over_a_limit_never_read_as_the_limit() -> None:
    text = terminal_format.render(EXCEEDED)
    assert "worst 600.1 V against 600.0 V" in text
    assert "100.1 %" in text
    assert "worst 1.001 kV" in text


@pytest.mark.parametrize("form", FORMATS)
def test_several_reviews_hold_what_each_holds(form: str) -> None:
    text = render_all(form, list(SAMPLES.values()))
    if form == "json":
        assert [d["verdict"] for d in json.loads(text)] == list(SAMPLES)
        assert json.loads(text)[0] == json_format.as_data(READY)
    else:
        assert all(renderer(form)(record) in text for record in SAMPLES.values())


def test_several_reviews_at_a_terminal_end_with_a_line_for_each() -> None:
    tail = render_all("terminal", list(SAMPLES.values())).split("3 designs\n")[1]
    assert [line.split()[0] for line in tail.splitlines() if line[2] != " "] == list(SAMPLES)


@pytest.mark.parametrize("form", PEOPLE)
def test_closing_words_defer_and_nothing_clears(form: str) -> None:
    for record in SAMPLES.values():
        flat = _flat(form, record)
        assert "Local codes and a licensed or qualified person decide." in flat
        assert not re.search(r"\b(sa" + r"fe|compl" + r"iant|permi" + r"tted|passes)\b", flat, re.IGNORECASE)


def test_harmless_leaves_letters_of_every_script_and_shows_what_has_no_shape() -> None:
    assert harmless("Größe Ω µ 線圈") == "Größe Ω µ 線圈"
    assert harmless("a\x1b[0m\u202e\u200b\ud800") == "a<U+001B>[0m<U+202E><U+200B><U+D800>"
    assert harmless("a\nb", keep="\n") == "a\nb"

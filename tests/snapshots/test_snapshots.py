"""Golden texts of reviews made by hand: a change of a format shows as a difference that somebody has to read.

STRESSCHECK_WRITE_SNAPSHOTS=1 in the environment writes them anew; look at the difference before keeping it.
"""

from __future__ import annotations

import os
from pathlib import Path

import pytest
from sample_reviews import EXCEEDED, SAMPLES, VOLT

from stresscheck.report.explain_format import explain
from stresscheck.report.formats import FORMATS, render_all, renderer

GOLDEN = Path(__file__).resolve().parent / "golden"
TEXTS = {f"{name}.{form}.txt": renderer(form)(record) for name, record in SAMPLES.items() for form in FORMATS}
TEXTS["exceeded.color.txt"] = render_all("terminal", [EXCEEDED], color=True)
TEXTS["all.terminal.txt"] = render_all("terminal", list(SAMPLES.values()), width=100)
TEXTS["explain.txt"] = explain(EXCEEDED, VOLT.id)


@pytest.mark.parametrize("name", TEXTS)
def test_text_of_a_sample_is_the_golden_one(name: str) -> None:
    golden = GOLDEN / name
    if os.environ.get("STRESSCHECK_WRITE_SNAPSHOTS") == "1":
        GOLDEN.mkdir(exist_ok=True)
        golden.write_text(TEXTS[name], encoding="utf-8", newline="\n")
    assert TEXTS[name] == golden.read_text(encoding="utf-8")


def test_no_golden_text_is_left_over() -> None:
    assert sorted(p.name for p in GOLDEN.iterdir()) == sorted(TEXTS)

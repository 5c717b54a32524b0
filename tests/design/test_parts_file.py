"""Parts by name from shipped files and from a file beside the design."""

from __future__ import annotations

from pathlib import Path

import pytest
from bench_design import TANK

from stresscheck.design.load import load_design, read_design
from stresscheck.design.model import Design
from stresscheck.errors import InputError

MINE = """\
title = "Parts of the bench"
source = "bench notes"
evidence = "text"
[capacitor.big]
value = "2 uF"
tolerance = "5 %"
q = 500
q_at = "1 kHz"
[capacitor.big.rating]
voltage_dc = "100 V"
current_rms = "3 A"
"""


def _with(tmp_path: Path, more: str, parts: str = MINE) -> Design:
    (tmp_path / "mine.toml").write_text(parts, encoding="utf-8")
    text = TANK.replace('value = "1 uF"\n', 'part = "mine.toml#big"\n' + more)
    (tmp_path / "tank.toml").write_text(text, encoding="utf-8")
    return load_design(tmp_path / "tank.toml")


def test_part_beside_the_design_gives_values_and_ratings(tmp_path: Path) -> None:
    found = _with(tmp_path, "").capacitor["C"]
    assert (found.value, found.q, found.part) == (2e-6, 500.0, "mine.toml#big")
    assert found.rating is not None
    assert (found.rating.voltage_dc, found.rating.source) == (100.0, "bench notes (text)")


def test_part_value_of_the_design_wins_key_by_key(tmp_path: Path) -> None:
    found = _with(tmp_path, 'value = "3 uF"\ndissipation_factor = 0.001\nrating = { voltage_dc = "50 V" }\n').capacitor[
        "C"
    ]
    assert (found.value, found.q, found.dissipation_factor) == (3e-6, None, 0.001)
    assert found.rating is not None
    assert (found.rating.voltage_dc, found.rating.current_rms) == (50.0, 3.0)
    assert found.rating.source == "bench notes (text); voltage_dc: the design"


def test_part_file_is_read_again_when_it_has_changed(tmp_path: Path) -> None:
    assert _with(tmp_path, "").capacitor["C"].value == 2e-6
    assert _with(tmp_path, "", MINE.replace('"2 uF"', '"2.25 uF"')).capacitor["C"].value == 2.25e-6


def test_shipped_part_is_found_by_name() -> None:
    found = read_design(TANK.replace('value = "1 uF"', 'part = "generic-mica-1n"')).capacitor["C"]
    assert found.value == 1e-9
    assert found.rating is not None
    assert "invented" in (found.rating.source or "")


@pytest.mark.parametrize(
    ("line", "instead", "key", "number"),
    [
        ('value = "2 uF"', 'value = "2 uf"', "capacitor.big.value", 5),
        ('value = "2 uF"', 'value = "2 uF"\nbetween = ["a", "b"]', "capacitor.big.between", 6),
        ('voltage_dc = "100 V"', 'voltage_dcc = "100 V"', "capacitor.big.rating.voltage_dcc", 10),
        ('source = "bench notes"\n', "", "source", None), ("[capacitor.big]", "[valve.big]", "valve", 4),
        ('evidence = "text"', "evidence = 5", "evidence", 3),
    ],
)  # fmt: skip
def test_bad_parts_file_is_told_by_its_own_lines_and_by_the_design_s(
    tmp_path: Path, line: str, instead: str, key: str, number: int | None
) -> None:
    with pytest.raises(InputError) as caught:
        _with(tmp_path, "", MINE.replace(line, instead))
    told = {(p.file, p.key): p for p in caught.value.problems}
    assert {p.code for p in told.values()} == {"bad-rating-file"}
    assert told["mine.toml", key].line == number
    assert told["tank.toml", "capacitor.C.part"].line is not None


@pytest.mark.parametrize(
    "parts", ["title = ", "\x00", "[a]\n[a]", "x = " + "[" * 9999], ids=["cut", "nul", "twice", "deep"]
)
def test_parts_file_that_is_no_toml_is_refused(tmp_path: Path, parts: str) -> None:
    with pytest.raises(InputError, match="bad-rating-file"):
        _with(tmp_path, "", parts)


def test_unknown_part_names_the_nearest() -> None:
    with pytest.raises(InputError, match=r"did you mean generic-mica-1n\?"):
        read_design(TANK.replace('value = "1 uF"', 'part = "generic-mica"'))

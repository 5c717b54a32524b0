"""Families: aliases, wider families, and files that can't be used."""

from __future__ import annotations

from pathlib import Path

import pytest

from stresscheck.errors import InputError
from stresscheck.limits.families import load_families


@pytest.mark.parametrize(
    ("kind", "text", "name"),
    [
        ("capacitor", "polypropylene film", "polypropylene film"),
        ("capacitor", "Polypropylene-Film", "polypropylene film"),
        ("capacitor", "C0G", "ceramic class 1"),
        ("capacitor", "NP0", "ceramic class 1"),
        ("capacitor", "x7r", "ceramic class 2"),
        ("capacitor", "silvered_mica", "mica"),
        ("capacitor", "air variable", "variable air"),
        ("inductor", "air-core", "air core"),
        ("resistor", "wirewound", "wire wound"),
        ("resistor", "film", "film"),
        ("capacitor", "film", "plastic film"),
    ],
)
def test_find_alias_gives_the_family(kind: str, text: str, name: str) -> None:
    family = load_families().find(kind, text)
    assert family is not None
    assert family.name == name


@pytest.mark.parametrize("text", [None, "", "unobtainium", "air core"])
def test_find_unknown_or_missing_gives_none(text: str | None) -> None:
    assert load_families().find("capacitor", text) is None


def test_belongs_to_wider_family_and_to_rows_for_all() -> None:
    family = load_families().find("capacitor", "PP film")
    assert family is not None
    assert family.belongs_to(("paper", "plastic film"))
    assert family.belongs_to(())
    assert not family.belongs_to(("ceramic",))


def test_nearest_misspelt_word_is_the_known_one() -> None:
    assert load_families().nearest("capacitor", "polypropilene film") == "polypropylene film"


def test_load_families_all_problems_are_reported_together(tmp_path: Path) -> None:
    path = tmp_path / "families.toml"
    path.write_text(
        'title = "t"\ndocument = "d"\nedition = "e"\nevidence = "own decision"\n'
        '[capacitor.a]\naliases = ["b"]\nwithin = ["z"]\n[capacitor.b]\naliases = []\nwith = ["a"]\n',
        encoding="utf-8",
    )
    with pytest.raises(InputError) as caught:
        load_families(path)
    found = {(problem.code, problem.key, problem.line) for problem in caught.value.problems}
    assert found == {
        ("unknown-name", "capacitor.a.within", 7),
        ("duplicate-name", "capacitor.b", 8),
        ("unknown-key", "capacitor.b.with", 10),
    }

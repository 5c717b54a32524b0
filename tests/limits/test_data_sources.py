"""No figure in ratings/ without document, edition, clause, evidence: in the raw files and in the loaders."""

from __future__ import annotations

import copy
import re
import tomllib
from pathlib import Path
from typing import Any

import pytest

from stresscheck.cautions.thresholds import load_thresholds
from stresscheck.errors import InputError
from stresscheck.limits.data_file import EVIDENCE
from stresscheck.limits.policy import load_policy
from stresscheck.shipped import ratings_dir

FILES = sorted(ratings_dir().rglob("*.toml"))
SOURCE = ("document", "edition", "clause", "evidence")
FIGURE = re.compile(r"^[+-]?[0-9.]+([eE][+-]?[0-9]+)? ?([A-Za-z%/^0-9]+)?$|^[0-9.]+$")
NOT_FIGURES = {*SOURCE, "source", "title", "name", "notes", "says", "basis"}


def figures_without_source(data: dict[str, Any], path: str = "", above: frozenset[str] = frozenset()) -> list[str]:
    """Paths of figures whose table, with the tables above it, lacks a part of the source."""
    has = above | {key for key in SOURCE if isinstance(data.get(key), str) and data[key].strip()}
    found = []
    for key, value in data.items():
        here = f"{path}.{key}" if path else key
        if isinstance(value, dict):
            found += figures_without_source(value, here, has)
        elif isinstance(value, list) and value and all(isinstance(item, dict) for item in value):
            for item in value:
                found += figures_without_source({**item, "figure": 0}, here)
        elif key not in NOT_FIGURES and holds_figure(value) and len(has) < len(SOURCE):
            found.append(f"{here} lacks {', '.join(sorted(set(SOURCE) - has))}")
    return found


def holds_figure(value: Any) -> bool:
    if isinstance(value, bool):
        return False
    if isinstance(value, int | float):
        return True
    if isinstance(value, list):
        return any(holds_figure(item) for item in value)
    return isinstance(value, str) and FIGURE.match(value) is not None and any(ch.isdigit() for ch in value)


def parsed(path: Path) -> dict[str, Any]:
    return tomllib.loads(path.read_text(encoding="utf-8"))


def is_parts(path: Path) -> bool:
    return path.parent.name == "parts"


@pytest.mark.parametrize("path", [p for p in FILES if not is_parts(p)], ids=lambda p: p.stem)
def test_data_file_every_figure_carries_its_source(path: Path) -> None:
    assert figures_without_source(parsed(path)) == []


@pytest.mark.parametrize("path", [p for p in FILES if not is_parts(p)], ids=lambda p: p.stem)
def test_data_file_every_evidence_word_is_known(path: Path) -> None:
    words = re.findall(r'\bevidence = "([^"]*)"', path.read_text(encoding="utf-8"))
    assert words
    assert set(words) <= set(EVIDENCE) - {"invented"}


@pytest.mark.parametrize("path", [p for p in FILES if is_parts(p)], ids=lambda p: p.stem)
def test_parts_file_every_part_is_marked_invented(path: Path) -> None:
    data = parsed(path)
    assert data["invented"] is True
    assert data["evidence"] == "invented"
    assert "invented" in data["source"]
    for kind in ("capacitor", "inductor", "resistor"):
        for part in data.get(kind, {}).values():
            assert "invented" in part["rating"]["source"]
            assert "between" not in part


@pytest.mark.parametrize("lost", SOURCE)
def test_walker_source_taken_out_of_a_row_is_noticed(lost: str) -> None:
    data = parsed(ratings_dir() / "policies" / "src-severe.toml")
    broken = copy.deepcopy(data)
    for table in (broken, *broken["row"].values(), *broken["reference"].values()):
        table.pop(lost, None)
    assert figures_without_source(data) == []
    assert any(lost in line for line in figures_without_source(broken))


def rows_of(path: Path) -> list[tuple[str, str]]:
    return [(table, name) for table in ("row", "reference", "threshold") for name in parsed(path).get(table, {})]


def without(text: str, table: str, name: str, key: str) -> str:
    """The file's text with one key of one table taken out."""
    head, header, body = text.partition(f"[{table}.{name}]")
    table_text, bracket, rest = body.partition("\n[")
    taken = re.sub(rf"(?m)^{key} = .*\n?", "", table_text + "\n", count=1)
    assert taken != table_text + "\n"
    return head + header + taken + bracket + rest


POLICY_ROWS = [(p, *row) for p in FILES if p.parent.name == "policies" for row in rows_of(p)]


@pytest.mark.parametrize("key", ["clause", "evidence"])
@pytest.mark.parametrize(("path", "table", "name"), POLICY_ROWS, ids=lambda v: v.stem if isinstance(v, Path) else v)
def test_load_policy_row_without_clause_or_evidence_is_refused(
    path: Path, table: str, name: str, key: str, tmp_path: Path
) -> None:
    changed = tmp_path / path.name
    changed.write_text(without(path.read_text(encoding="utf-8"), table, name, key), encoding="utf-8")
    with pytest.raises(InputError) as caught:
        load_policy(str(changed))
    assert [problem.key for problem in caught.value.problems] == [f"{table}.{name}.{key}"]


THRESHOLD_ROWS = [(p, name) for p in FILES if p.parent.name == "thresholds" for _, name in rows_of(p)]


@pytest.mark.parametrize("key", SOURCE)
@pytest.mark.parametrize(("path", "name"), THRESHOLD_ROWS, ids=lambda v: v.stem if isinstance(v, Path) else v)
def test_load_thresholds_row_without_part_of_its_source_is_refused(
    path: Path, name: str, key: str, tmp_path: Path
) -> None:
    changed = without(path.read_text(encoding="utf-8"), "threshold", name, key)
    (tmp_path / path.name).write_text(changed, encoding="utf-8")
    with pytest.raises(InputError) as caught:
        load_thresholds(tmp_path)
    assert [problem.key for problem in caught.value.problems] == [f"threshold.{name}.{key}"]


def test_ratings_folder_says_how_a_figure_gets_in() -> None:
    text = (ratings_dir() / "README.md").read_text(encoding="utf-8")
    for word in EVIDENCE:
        assert f"`{word}`" in text

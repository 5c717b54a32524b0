"""Lines of keys against tomllib's own key paths, on hand-made traps and on random documents."""

from __future__ import annotations

import json
import tomllib
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from stresscheck.design.positions import Lines, key_lines

TRAPS = '''\
# [not.a.table]
title = """
[not] = "a table"
x = 1 \\""""
a."b.c".'d e' = { f = 1, "g" = { h = [1, { i = 2 }] } }   # j = 3
s = ['[k]', """l = 5""", \'\'\'
m = 6\'\'\']

[ t . "u" ]
"v # w" = "\\"x = 1"
date = 2027-03-01
[t.y]
z = [
  1, # one = 1
  { q = 1 },
]
'''


def test_key_lines_find_keys_and_skip_strings_and_comments() -> None:
    found = key_lines(TRAPS)
    expected = {
        ("title",): 2, ("a",): 5, ("a", "b.c"): 5, ("a", "b.c", "d e"): 5, ("a", "b.c", "d e", "f"): 5,
        ("a", "b.c", "d e", "g"): 5, ("a", "b.c", "d e", "g", "h"): 5, ("s",): 6, ("t",): 9, ("t", "u"): 9,
        ("t", "u", "v # w"): 10, ("t", "u", "date"): 11, ("t", "y"): 12, ("t", "y", "z"): 13,
    }  # fmt: skip
    assert {path: line for path, line in found.items() if path[-1] not in ("i", "q")} == expected


@pytest.mark.parametrize("newline", ["\n", "\r\n"])
def test_key_lines_count_lines_whatever_ends_them(newline: str) -> None:
    assert key_lines(newline.join(["a = 1", "", "[b]", "c = 2"])) == {("a",): 1, ("b",): 3, ("b", "c"): 4}


def test_lines_of_an_unknown_key_are_those_of_the_table_around_it() -> None:
    lines = Lines("a = 1\n[b.c]\nd = 1\n")
    assert lines.of(("b", "c", "x", "y")) == 2
    assert lines.of(("z",)) is None


def _paths(raw: Any, above: tuple[str, ...] = ()) -> set[tuple[str, ...]]:
    """All key paths of a document, tables inside lists apart."""
    found: set[tuple[str, ...]] = set()
    for key, value in raw.items():
        found.add((*above, key))
        if isinstance(value, dict):
            found |= _paths(value, (*above, key))
    return found


BARE = st.text("abcXYZ019_-", min_size=1, max_size=6)
TEXTS = st.text(st.characters(blacklist_categories=["Cs", "Cc"]) | st.sampled_from("[]{}#=.,'\n"), max_size=12)


def _basic(text: str) -> str:
    return json.dumps(text, ensure_ascii=False).replace("\x7f", "\\u007f")


KEYS = BARE | TEXTS.map(_basic) | st.text('ab .#[]{}="', max_size=6).map(lambda t: f"'{t}'")
SCALARS = (
    TEXTS.map(_basic) | st.text("ab#[]{}=,\n\"", max_size=9).map(lambda t: f"'''{t}'''")
    | st.text("ab#[]{}=,\n'", max_size=9).map(lambda t: f'"""{t}"""') | st.integers(-9, 99).map(str)
    | st.sampled_from(["true", "1.5e3", "2027-03-01", "07:32:00", "nan"])
)  # fmt: skip
GAPS = st.sampled_from(["", " ", "  \t"])


def _pair(key: list[str], gap: str, value: str) -> str:
    return f"{f'{gap}.{gap}'.join(key)}{gap}={gap}{value}"


def _nested(inner: st.SearchStrategy[str]) -> st.SearchStrategy[str]:
    pairs = st.builds(_pair, st.lists(KEYS, min_size=1, max_size=2), GAPS, inner)
    lists = st.builds(
        lambda items, end: "[" + ",\n # c = [\n".join(items) + end + "]", st.lists(inner, max_size=3), GAPS
    )
    return lists | st.lists(pairs, max_size=3).map(lambda items: "{" + ", ".join(items) + "}")


VALUES = st.recursive(SCALARS, _nested, max_leaves=6)
ROWS = (
    st.builds(lambda key, gap, value, end: _pair(key, gap, value) + end, st.lists(KEYS, min_size=1, max_size=3), GAPS, VALUES,
              st.sampled_from(["", " # x = [1", "\t"]))
    | st.builds(lambda key, gap: f"[{gap}{f'{gap}.'.join(key)}{gap}]", st.lists(KEYS, min_size=1, max_size=3), GAPS)
    | st.sampled_from(["", "# [a.b] = 1", "  "])
)  # fmt: skip


@settings(max_examples=500, deadline=None)
@given(st.lists(ROWS, max_size=8), st.sampled_from(["\n", "\r\n"]))
def test_key_lines_agree_with_tomllib_on_random_documents(rows: list[str], newline: str) -> None:
    text = newline.join(rows)
    try:
        raw = tomllib.loads(text)
    except tomllib.TOMLDecodeError:
        return
    found = key_lines(text)
    assert _paths(raw) <= set(found)
    starts = [0]
    for row in rows:
        starts.append(starts[-1] + 1 + row.count("\n"))
    for path, line in found.items():
        assert 1 <= line <= starts[-1], path


@settings(deadline=None)
@given(st.lists(BARE, min_size=1, max_size=12, unique=True), st.integers(0, 3))
def test_key_lines_of_simple_rows_are_their_numbers(keys: list[str], gap: int) -> None:
    rows = [f"{key} = 1" + "\n" * gap for key in keys]
    assert key_lines("\n".join(rows)) == {(key,): 1 + number * (gap + 1) for number, key in enumerate(keys)}

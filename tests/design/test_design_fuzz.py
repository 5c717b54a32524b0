"""Whatever the text: a design or an InputError, never anything else."""

from __future__ import annotations

import random

from bench_design import WHOLE
from hypothesis import given, settings
from hypothesis import strategies as st

from stresscheck.design.load import read_design
from stresscheck.errors import InputError, Problem

LINES = WHOLE.splitlines()
PIECES = [
    "", "=", "[", "]", "{", "}", '"', "'", "#", "\n", ".", "1", "true", '"5 %"', '"open"', "[]", "{}", "\x00", "\u202e", "[[a]]",
    "[state.s]", 'change = { "capacitor.Ctank" = "open" }', 'change = { "capacitor.Ctank.rating.x.y" = 1 }', "rating = 5",
    '[coupling.k]\nof = ["Lwork", "Lwork"]\nfactor = 2', '[accept.a]\nfinding = 5', "[capacitor]\nx = 5", 'part = "#"',
    "[drive.e]", "inf", "nan", "2027-01-01", "capacitor = 1", '[transformer.t]\nprimary = ["in"]', 'part = "a.toml#b"',
    'value = ["1 F", "2 F"]', 'nominal = "1 F"', 'harmonics = [[1, 2, 3]]', 'gating = { on = "1 s", period = "1 s" }',
]  # fmt: skip


def _survives(text: str | bytes) -> None:
    problems: tuple[Problem, ...] = ()
    try:
        design = read_design(text)
    except InputError as error:
        problems, design = error.problems, None
    assert (design is None) == bool(problems)
    for problem in problems:
        assert str(problem).isprintable()
    for name in () if design is None else design.states:
        design.in_state(name)


@settings(max_examples=200, deadline=None)
@given(st.text(max_size=200) | st.binary(max_size=200))
def test_random_text_is_refused_in_order(text: str | bytes) -> None:
    _survives(text)


@settings(max_examples=300, deadline=None)
@given(st.integers(0, 2**32), st.lists(st.sampled_from(PIECES), min_size=1, max_size=4))
def test_mutated_design_loads_or_is_refused_in_order(seed: int, pieces: list[str]) -> None:
    rng = random.Random(seed)
    lines = list(LINES)
    for piece in pieces:
        at = rng.randrange(len(lines))
        move = rng.randrange(5)
        if move == 0:
            lines[at] = piece
        elif move == 1:
            lines.insert(at, piece)
        elif move == 2:
            del lines[at]
        elif move == 3:
            lines[at] = lines[at].split("=")[0] + "= " + piece
        else:
            cut = rng.randrange(len(lines[at]) + 1)
            lines[at] = lines[at][:cut] + piece + lines[at][cut:]
    _survives("\n".join(lines))


@settings(max_examples=150, deadline=None)
@given(st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats() | st.text(max_size=9),
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(st.text(max_size=5), inner, max_size=3),
    max_leaves=6,
), st.sampled_from(["drive", "capacitor", "state", "site", "coupling", "accept", "probe", "title", "derating"]))  # fmt: skip
def test_any_value_in_place_of_a_table_is_refused_in_order(value: object, key: str) -> None:
    _survives(f"{key} = {_toml(value)}\n" + "\n".join(line for line in LINES if not line.startswith((key, f"[{key}"))))


def _toml(value: object) -> str:
    if value is None:
        return '"none"'
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, (int, float)):
        return repr(value)
    if isinstance(value, str):
        return '"' + "".join(f"\\U{ord(c):08x}" for c in value) + '"'
    if isinstance(value, list):
        return "[" + ", ".join(map(_toml, value)) + "]"
    assert isinstance(value, dict)
    return "{" + ", ".join(f"{_toml(k)} = {_toml(v)}" for k, v in value.items()) + "}"

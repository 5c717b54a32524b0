"""Policies: the shipped rows against the figures they stand for, and files that can't be used."""

from __future__ import annotations

from pathlib import Path

import pytest

from stresscheck.errors import InputError
from stresscheck.limits.policy import Policy, list_policies, load_policy, policy_names
from stresscheck.limits.policy_rows import Row
from stresscheck.limits.rules import Fraction, KelvinBelow

NAMES = ("as-rated", "nasa-eee-inst-002", "src-benign", "src-severe", "uniform-50", "uniform-80")

BELOW = "row.all.kelvin_below_maximum"
HEAD = 'name = "own"\ntitle = "t"\ndocument = "d"\nedition = "e"\nsource = "s"\nevidence = "own decision"\n'
ROW = (
    '[row.all]\nkind = "any"\nfamilies = []\nquantity = "any"\nallowed_fraction = 0.7\n'
    'clause = "c"\nevidence = "own decision"\n'
)


def row(policy: Policy, name: str) -> Row:
    return next(row for row in policy.rows if row.name == name)


def write(folder: Path, text: str) -> str:
    path = folder / "own.toml"
    path.write_text(text, encoding="utf-8")
    return str(path)


def problems(folder: Path, text: str) -> set[tuple[str, str]]:
    with pytest.raises(InputError) as caught:
        load_policy(write(folder, text))
    return {(problem.code, problem.key) for problem in caught.value.problems}


def test_list_policies_gives_the_six_by_name() -> None:
    assert tuple(policy.name for policy in list_policies()) == NAMES == policy_names()


@pytest.mark.parametrize("name", NAMES)
def test_policy_filling_only_where_a_document_stands_behind(name: str) -> None:
    fill = load_policy(name).fill
    stands_for_document = name.startswith(("nasa", "src"))
    assert (fill.name if fill else None) == ("uniform-80" if stands_for_document else None)


@pytest.mark.parametrize(
    ("policy", "electrolytic", "others"),
    [("src-severe", 0.7, 0.6), ("src-benign", 0.8, 0.7)],
)
def test_src_rows_carry_the_two_columns(policy: str, electrolytic: float, others: float) -> None:
    """Source: Part Derating Parameters, System Reliability Center (Rome), capacitor rows."""
    loaded = load_policy(policy)
    assert row(loaded, "aluminium-electrolytic-voltage").rule == Fraction(electrolytic)
    assert row(loaded, "aluminium-electrolytic-temperature").rule == KelvinBelow(20.0)
    for family in ("ceramic", "mica-glass", "paper-film", "variable-air"):
        assert row(loaded, f"{family}-voltage").rule == Fraction(others)
        assert row(loaded, f"{family}-temperature").rule == KelvinBelow(10.0)


@pytest.mark.parametrize("policy", ["src-severe", "src-benign"])
def test_src_tantalum_takes_the_stricter_figure_of_the_other_document(policy: str) -> None:
    tantalum = row(load_policy(policy), "solid-tantalum-voltage")
    assert tantalum.rule == Fraction(0.5)
    assert "EEE-INST-002" in tantalum.document
    assert tantalum.evidence == "own decision"


@pytest.mark.parametrize(
    ("name", "fraction", "below"), [("as-rated", 1.0, 0.0), ("uniform-80", 0.8, 20.0), ("uniform-50", 0.5, 40.0)]
)
def test_uniform_policies_use_one_fraction_for_all_but_temperature(name: str, fraction: float, below: float) -> None:
    policy = load_policy(name)
    for kind, quantity in (("capacitor", "voltage_peak"), ("drive", "power"), ("inductor", "flux_density")):
        assert [r.rule for r in policy.rows_for(kind, None, quantity)] == [Fraction(fraction)]
    assert [r.rule for r in policy.rows_for("resistor", None, "temperature")] == [KelvinBelow(below)]


def test_load_policy_unknown_name_lists_the_known_and_the_nearest() -> None:
    with pytest.raises(InputError) as caught:
        load_policy("src-sever")
    (problem,) = caught.value.problems
    assert problem.code == "unknown-name"
    assert "src-severe" in problem.repair
    assert all(name in problem.expected for name in NAMES)


def test_load_policy_path_is_read_against_the_folder_of_the_design(tmp_path: Path) -> None:
    write(tmp_path, HEAD + ROW)
    assert load_policy("own.toml", tmp_path).rows[0].rule == Fraction(0.7)
    assert load_policy("./own.toml", tmp_path).name == "own"


def test_load_policy_fill_from_shipped_policy_answers_for_its_gaps(tmp_path: Path) -> None:
    text = HEAD + 'fill_from = "uniform-50"\n' + ROW.replace('quantity = "any"', 'quantity = "power"')
    policy = load_policy(write(tmp_path, text))
    assert policy.rows_for("capacitor", None, "voltage_peak") == ()
    assert policy.fill is not None
    assert policy.fill.name == "uniform-50"


def test_load_policy_fill_from_policy_that_fills_itself_is_refused(tmp_path: Path) -> None:
    assert problems(tmp_path, HEAD + 'fill_from = "src-severe"\n' + ROW) == {("bad-rating-file", "fill_from")}


def test_load_policy_missing_file_is_unreadable(tmp_path: Path) -> None:
    with pytest.raises(InputError) as caught:
        load_policy("nowhere.toml", tmp_path)
    assert caught.value.problems[0].code == "file-unreadable"


@pytest.mark.parametrize(
    ("content", "code"),
    [
        (b"name = ", "not-toml"),
        (b"\xff\xfe", "file-unreadable"),
        (b"x = " + b"[" * 100_000, "not-toml"),
        (b"x = " + b"9" * 5000, "not-toml"),
        (b"#" * (1 << 20) + b"\n", "file-unreadable"),
    ],
    ids=["cut off", "not UTF-8", "deep", "long number", "too large"],
)
def test_load_policy_hostile_bytes_are_refused(content: bytes, code: str, tmp_path: Path) -> None:
    path = tmp_path / "own.toml"
    path.write_bytes(content)
    with pytest.raises(InputError) as caught:
        load_policy(str(path))
    assert [problem.code for problem in caught.value.problems] == [code]


@pytest.mark.parametrize("key", ["name", "title", "document", "edition", "source", "evidence"])
def test_load_policy_head_without_a_key_is_refused(key: str, tmp_path: Path) -> None:
    text = "".join(line + "\n" for line in HEAD.splitlines() if not line.startswith(f"{key} "))
    assert problems(tmp_path, text + ROW) == {("missing-key", key)}


@pytest.mark.parametrize(
    ("old", "new", "expected"),
    [
        ("allowed_fraction = 0.7", "allowed_fraction = 1.2", ("out-of-range", "row.all.allowed_fraction")),
        ("allowed_fraction = 0.7", "allowed_fraction = nan", ("out-of-range", "row.all.allowed_fraction")),
        ("allowed_fraction = 0.7", "allowed_fraction = true", ("out-of-range", "row.all.allowed_fraction")),
        ("allowed_fraction = 0.7", 'allowed_fraction = "70 %"', ("out-of-range", "row.all.allowed_fraction")),
        ("allowed_fraction = 0.7", "", ("conflicting-keys", "row.all")),
        ("clause", 'kelvin_below_maximum = "5 K"\nclause', ("conflicting-keys", "row.all")),
        ("allowed_fraction = 0.7", 'kelvin_below_maximum = "5 K"', ("conflicting-keys", BELOW)),
        ('kind = "any"', 'kind = "valve"', ("wrong-type", "row.all.kind")),
        ('quantity = "any"', 'quantity = "volts"', ("wrong-type", "row.all.quantity")),
        ("families = []", "", ("missing-key", "row.all.families")),
        ("families = []", 'families = "ceramic"', ("wrong-type", "row.all.families")),
        ('evidence = "own decision"', 'evidence = "memory"', ("wrong-type", "row.all.evidence")),
        ('clause = "c"', 'clause = " "', ("wrong-type", "row.all.clause")),
        ('clause = "c"', 'clause = "a\\u0007b"', ("bad-text", "row.all.clause")),
        ('clause = "c"', 'clause = "c"\nfactor = 0.6', ("unknown-key", "row.all.factor")),
        ('clause = "c"', 'clause = "c"\nup_to = "110"', ("bad-quantity", "row.all.up_to")),
        ('clause = "c"', 'clause = "c"\nup_to = 110', ("wrong-type", "row.all.up_to")),
    ],
)  # fmt: skip
def test_load_policy_row_that_cannot_be_used_is_refused(
    old: str, new: str, expected: tuple[str, str], tmp_path: Path
) -> None:
    assert old in ROW
    head, changed = HEAD, ROW.replace(old, new)
    assert expected in problems(tmp_path, head + changed)


def test_load_policy_row_for_unknown_family_names_the_known_ones(tmp_path: Path) -> None:
    text = ROW.replace('kind = "any"', 'kind = "capacitor"').replace("[]", '["unobtainium"]')
    assert problems(tmp_path, HEAD + text) == {("unknown-name", "row.all.families")}


def test_load_policy_row_for_a_quantity_of_another_kind_is_refused(tmp_path: Path) -> None:
    text = ROW.replace('kind = "any"', 'kind = "resistor"').replace('quantity = "any"', 'quantity = "slew_rate"')
    assert problems(tmp_path, HEAD + text) == {("bad-rating-file", "row.all.quantity")}


@pytest.mark.parametrize(
    "points",
    ['[["70 degC", 0.5]]', '[["110 degC", 0.5], ["70 degC", 0.3]]', '[["70 degC", 0.5], ["110 degC", 1.3]]'],
)
def test_load_policy_curve_that_is_none_is_refused(points: str, tmp_path: Path) -> None:
    curve = f'allowed_fraction = {{ by = "temperature", points = {points} }}'
    text = HEAD + ROW.replace("allowed_fraction = 0.7", curve)
    assert problems(tmp_path, text) == {("out-of-range", "row.all.allowed_fraction.points")}


def test_load_policy_all_problems_come_at_once_with_their_lines(tmp_path: Path) -> None:
    text = HEAD.replace('title = "t"\n', "") + ROW.replace('clause = "c"', "claus = 3").replace("0.7", "7")
    with pytest.raises(InputError) as caught:
        load_policy(write(tmp_path, text))
    found = {(problem.code, problem.key, problem.line) for problem in caught.value.problems}
    assert found == {
        ("missing-key", "title", None),
        ("out-of-range", "row.all.allowed_fraction", 10),
        ("missing-key", "row.all.clause", 6),
        ("unknown-key", "row.all.claus", 11),
    }
    assert all(problem.file == "own.toml" for problem in caught.value.problems)


def test_load_policy_without_rows_is_refused(tmp_path: Path) -> None:
    assert problems(tmp_path, HEAD) == {("missing-key", "row")}

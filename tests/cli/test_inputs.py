"""What the command line names and can't be used: said all at once, by the names that were typed, with a repair."""

from __future__ import annotations

import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

from stresscheck.chain import review
from stresscheck.cli import guarded
from stresscheck.cli.inputs import load_all
from stresscheck.design.load import load_design, read_design
from stresscheck.design.starter import starter_text
from stresscheck.errors import InputError

ROOT = Path(__file__).resolve().parents[2]
HEATER = ROOT / "examples" / "ready" / "induction-heater.toml"
ENDLESS = Path("/dev/zero")


@pytest.fixture
def tank(tmp_path: Path) -> Path:
    file = tmp_path / "tank.toml"
    file.write_text(starter_text(), encoding="utf-8")
    return file


def test_problems_of_files_of_the_same_name_say_the_paths_typed(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    files = [tmp_path / folder / "tank.toml" for folder in ("left", "right")]
    for file in files:
        file.parent.mkdir()
        file.write_text(starter_text().replace('title = "', 'titel = "'), encoding="utf-8")
    assert guarded(["review", *map(str, files)]) == 2
    told = capsys.readouterr().err
    assert all(f"{file}:4  titel" in told for file in files)


def test_problems_of_options_files_states_and_output_come_in_one_go(
    tank: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    arguments = [
        "--format",
        "jsn",
        "--budget",
        "ten",
        "--state",
        "cold-coil",
        "--output",
        str(tank.parent / "no" / "x"),
    ]
    assert guarded(["review", str(tank), str(HEATER), "missing.toml", *arguments]) == 2
    told = capsys.readouterr().err
    assert told.startswith("5 problems; nothing was reviewed\n")
    for place in ("line  --format", "line  --budget", f"{HEATER}  --state", "x  --output", "\nmissing.toml\n"):
        assert place in told


@pytest.mark.parametrize(
    ("arguments", "repair"),
    [
        (["review", "TANK", "--format", "jsno"], "did you mean json?"),
        (["review", "TANK", "--state", "cold-coli"], "did you mean cold-coil?"),
        (["review", "TANK", "--derating", "src-sever"], "did you mean src-severe?"),
        (["review", "TANK", "--explain", "C1.voltge_peak@normal"], "did you mean C1.voltage_peak@normal?"),
        (["resonances", "TANK", "--state", "normla"], "did you mean normal?"),
        (["library", "polices"], "did you mean policies?"),
        (["library", "policies", "uniform80"], "did you mean uniform-80?"),
    ],
)
def test_name_misspelt_is_answered_with_the_nearest(
    arguments: list[str], repair: str, tank: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    assert guarded([str(tank) if word == "TANK" else word for word in arguments]) == 2
    assert repair in capsys.readouterr().err


@pytest.mark.parametrize("option", ["--derating", "--state", "--explain", "--format", "--gap", "--today", "--output"])
def test_option_empty_is_refused_and_never_taken_for_left_out(option: str, tank: Path) -> None:
    assert guarded(["review", str(tank), option, ""]) == 2


def test_review_under_an_empty_policy_name_raises_instead_of_taking_the_files_own() -> None:
    with pytest.raises(InputError, match="src-severe"):
        review(read_design(starter_text()), derating="")


def test_policy_missing_is_a_problem_of_whoever_named_it(tank: Path) -> None:
    tank.write_text(starter_text().replace("uniform-80", "uniform-81"), encoding="utf-8")
    (by_file,) = load_all([tank], None, None)[1]
    assert (by_file.file, by_file.key) == (str(tank), "derating")
    (by_option,) = load_all([tank, tank], "uniform-81", None)[1]
    assert (by_option.file, by_option.key) == ("command line", "--derating")
    assert load_all([tank], None, None, policies=False)[1] == []


def test_explain_with_another_format_is_refused(tank: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert guarded(["review", str(tank), "--explain", "C1.voltage_peak@normal", "--format", "json"]) == 2
    read = capsys.readouterr()
    assert read.out == ""
    assert "leave one of the two out" in read.err


def test_start_names_no_option_that_it_doesn_t_have(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert guarded(["start", str(tmp_path / "no" / "x.toml")]) == 2
    assert guarded(["start", str(tmp_path)]) == 2
    told = capsys.readouterr().err
    assert "--output" not in told
    assert "reviewed" not in told
    assert "a folder" in told


@pytest.mark.skipif(not ENDLESS.exists(), reason="needs a device without end")
def test_device_without_end_is_refused_and_never_read_to_the_end(tank: Path) -> None:
    with pytest.raises(InputError, match="1 MiB"):
        load_design(ENDLESS)
    with pytest.raises(InputError, match="1 MiB"):
        read_design(starter_text().replace("[capacitor.C1]", f'[capacitor.C1]\npart = "{ENDLESS}#x"'))
    assert guarded(["review", str(tank), "--derating", str(ENDLESS)]) == 2


@pytest.mark.parametrize(
    ("arguments", "code"), [("--version", 0), ("library families", 0), ("review {tank}", 0), ("review missing", 2)]
)
def test_streams_closed_by_the_caller_leave_the_exit_code(arguments: str, code: int, tank: Path) -> None:
    command = f'"{sys.executable}" -m stresscheck {arguments.format(tank=tank)} >&- 2>&-'
    assert subprocess.run(["bash", "-c", command], timeout=60, check=False).returncode == code


def test_output_file_is_whole_where_both_streams_are_closed(tank: Path, tmp_path: Path) -> None:
    target = tmp_path / "out.json"
    command = f'"{sys.executable}" -m stresscheck review "{tank}" --format json --output "{target}" >&- 2>&-'
    assert subprocess.run(["bash", "-c", command], timeout=60, check=False, env={**os.environ}).returncode == 0
    assert json.loads(target.read_text(encoding="utf-8"))["verdict"] == "ready"


@pytest.mark.parametrize("arguments", [["--version"], ["--help"], ["review", "--help"]])
def test_quick_answers_import_nothing_heavy(arguments: list[str]) -> None:
    done = subprocess.run(
        [sys.executable, "-X", "importtime", "-m", "stresscheck", *arguments],
        capture_output=True, text=True, timeout=60, check=False,
    )  # fmt: skip
    loaded = {line.rpartition("|")[2].strip() for line in done.stderr.splitlines()}
    assert done.returncode == 0
    assert "stresscheck.cli" in loaded
    assert not loaded & {"numpy", "pint", "pydantic", "rich"}
    assert ("typer" in loaded) == (arguments != ["--version"])


def test_completion_offers_options_formats_and_policies() -> None:
    for words, count, offered in (
        ("stresscheck re", "1", "review\nresonances"),
        ("stresscheck review --format j", "3", "json"),
        ("stresscheck review --derating uniform", "3", "uniform-50\nuniform-80"),
        ("stresscheck library th", "2", "thresholds"),
    ):
        asked = {"_STRESSCHECK_COMPLETE": "complete_bash", "COMP_WORDS": words, "COMP_CWORD": count}
        done = subprocess.run(
            [sys.executable, "-c", "import sys; sys.argv[0] = 'stresscheck'; from stresscheck.cli import run; run()"],
            capture_output=True, text=True, timeout=60, check=False, env={**os.environ, **asked},
        )  # fmt: skip
        assert (done.returncode, done.stdout.strip()) == (0, offered)

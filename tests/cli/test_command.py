"""The command as its users call it: exit codes, streams, files, and what is said about mistakes."""

from __future__ import annotations

import json
import os
import subprocess
import sys
from pathlib import Path

import pytest
from typer.testing import CliRunner

from stresscheck.cli import guarded
from stresscheck.cli.app import app
from stresscheck.design.starter import starter_text

ROOT = Path(__file__).resolve().parents[2]
READY = str(ROOT / "examples" / "ready" / "induction-heater.toml")
OPEN = str(ROOT / "examples" / "unanswered" / "detuned-bank.toml")
OVER = str(ROOT / "examples" / "exceeded" / "wireless-link.toml")


def _run(*arguments: str, **environment: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-m", "stresscheck", *arguments],
        capture_output=True, text=True, encoding="utf-8", timeout=120, check=False, env={**os.environ, **environment},
    )  # fmt: skip


@pytest.mark.parametrize(("file", "code"), [(READY, 0), (OVER, 1), (OPEN, 3)])
def test_review_exit_code_says_the_verdict(file: str, code: int, capsys: pytest.CaptureFixture[str]) -> None:
    assert guarded(["review", file, "--budget", "2 s"]) == code
    assert "Local codes" in capsys.readouterr().out


def test_review_several_files_gives_list_and_worst_code(capsys: pytest.CaptureFixture[str]) -> None:
    assert guarded(["review", OPEN, OVER, "--format", "json", "--budget", "2 s"]) == 1
    assert [r["verdict"] for r in json.loads(capsys.readouterr().out)] == ["unanswered", "exceeded"]
    assert guarded(["review", OPEN, OPEN]) == 3
    assert "2 designs" in capsys.readouterr().out


def test_review_unusable_file_ends_with_2_and_writes_nothing(tmp_path: Path) -> None:
    bad = tmp_path / "bad.toml"
    bad.write_text('title = "x"\nderating = "as-rated"\n[capacitor.C]\nvalu = "1 nf"\n', encoding="utf-8")
    target = tmp_path / "out.json"
    done = _run("review", str(bad), READY, "--format", "json", "--output", str(target))
    assert done.returncode == 2
    assert done.stdout == ""
    assert "did you mean value?" in done.stderr
    assert "bad.toml:4" in done.stderr
    assert not target.exists()


def test_review_same_input_gives_same_bytes(tmp_path: Path) -> None:
    one, two = tmp_path / "one.json", tmp_path / "two.json"
    for target in (one, two):
        assert guarded(["review", OPEN, "--format", "json", "--output", str(target)]) == 3
    assert one.read_bytes() == two.read_bytes()
    assert str(ROOT) not in one.read_text(encoding="utf-8")


@pytest.mark.parametrize(
    ("arguments", "word"),
    [
        (["--format", "pdf"], "terminal, json, markdown"),
        (["--gap", "5 V"], "5 %"),
        (["--budget", "ten"], "10 s"),
        (["--today", "tomorrow"], "2027-03-01"),
        (["--state", "nowhere"], "normal"),
        (["--derating", "nothing"], "src-severe"),
        (["--explain", "Cbank.voltage@normal"], "Cbank.voltage_peak@normal"),
    ],
)
def test_review_wrong_option_ends_with_2_and_says_what_is_known(
    arguments: list[str], word: str, capsys: pytest.CaptureFixture[str]
) -> None:
    assert guarded(["review", OPEN, *arguments]) == 2
    assert word in capsys.readouterr().err


@pytest.mark.parametrize("arguments", [["revew"], ["review"], ["review", READY, "--no-such"], ["library", "nothing"]])
def test_command_misspelt_ends_with_2(arguments: list[str]) -> None:
    assert guarded(arguments) == 2


def test_explain_shows_working_point_and_proof(capsys: pytest.CaptureFixture[str]) -> None:
    assert guarded(["review", OPEN, "--explain", "Cbank.voltage_rms@normal"]) == 3
    text = capsys.readouterr().out
    for word in ("working", "proof", "capacitor.Cbank.value", "V / sqrt(2)", "box examined"):
        assert word in text


def test_start_writes_a_file_that_is_ready_and_never_overwrites(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    target = tmp_path / "tank.toml"
    assert guarded(["start", str(target)]) == 0
    assert target.read_text(encoding="utf-8") == starter_text()
    assert guarded(["review", str(target)]) == 0
    target.write_text("mine", encoding="utf-8")
    assert guarded(["start", str(target)]) == 2
    assert target.read_text(encoding="utf-8") == "mine"
    assert "exists" in capsys.readouterr().err


def test_resonances_library_and_schema_answer(capsys: pytest.CaptureFixture[str]) -> None:
    assert guarded(["resonances", READY]) == 0
    assert "87.55 kHz" in capsys.readouterr().out
    for shelf in ("policies", "parts", "thresholds", "families"):
        assert guarded(["library", shelf]) == 0
        assert len(capsys.readouterr().out) > 200
    assert guarded(["library", "policies", "src-severe"]) == 0
    assert "0.6 of the rating" in capsys.readouterr().out
    assert guarded(["schema"]) == 0
    assert json.loads(capsys.readouterr().out)["$schema"].endswith("2020-12/schema")


def test_derating_option_wins_over_the_file(capsys: pytest.CaptureFixture[str]) -> None:
    guarded(["review", READY, "--derating", "as-rated", "--format", "json", "--state", "normal"])
    record = json.loads(capsys.readouterr().out)
    assert record["derating"]["name"] == "as-rated"
    assert {f["state"] for f in record["findings"]} == {"normal"}


def test_closed_pipe_ends_with_141() -> None:
    command = f'"{sys.executable}" -m stresscheck library thresholds | true; echo "${{PIPESTATUS[0]}}"'
    done = subprocess.run(["bash", "-c", command], capture_output=True, text=True, timeout=60, check=False)
    assert done.stdout.strip() in ("141", "0")  # 0 where everything fitted into the pipe before it was closed
    assert "Traceback" not in done.stderr


def test_ascii_terminal_doesn_t_end_the_run(tmp_path: Path) -> None:
    file = tmp_path / "name.toml"
    file.write_text(starter_text().replace("Series tank", "Größe Ω tank"), encoding="utf-8")
    done = _run("review", str(file), PYTHONIOENCODING="ascii")
    assert done.returncode == 0
    assert "\\xf6" in done.stdout


def test_internal_error_ends_with_70_and_says_where_to_report(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    def broken(arguments: list[str]) -> int:
        raise ZeroDivisionError("a fault")

    monkeypatch.setattr("stresscheck.cli.app.call", broken)
    assert guarded(["review", READY]) == 70
    assert "Report it" in capsys.readouterr().err


def test_interrupt_before_the_search_ends_with_130(monkeypatch: pytest.MonkeyPatch) -> None:
    def interrupted(arguments: list[str]) -> int:
        raise KeyboardInterrupt

    monkeypatch.setattr("stresscheck.cli.app.call", interrupted)
    assert guarded(["review", READY]) == 130


def test_help_of_every_command_teaches_with_an_example() -> None:
    runner = CliRunner()
    for command in ("review", "resonances", "library", "schema", "start"):
        done = runner.invoke(app, [command, "--help"])
        assert done.exit_code == 0
        assert "xample" in done.output, command


@pytest.mark.parametrize("arguments", [["--version"], ["--version", "review"]])
def test_version_is_answered_before_any_command(arguments: list[str], capsys: pytest.CaptureFixture[str]) -> None:
    assert guarded(arguments) == 0
    assert capsys.readouterr().out.startswith("stresscheck 0.")


def test_python_calls_give_the_same_as_json(capsys: pytest.CaptureFixture[str]) -> None:
    from stresscheck import load_design, review
    from stresscheck.report.json_format import as_data

    record = as_data(review(load_design(OPEN)))
    guarded(["review", OPEN, "--format", "json"])
    assert json.loads(capsys.readouterr().out) == json.loads(json.dumps(record))


def test_readme_example_design_is_reviewed_as_it_stands(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    readme = (ROOT / "README.md").read_text(encoding="utf-8")
    file = tmp_path / "readme.toml"
    file.write_text(readme.split("```toml\n")[1].split("```")[0], encoding="utf-8")
    assert guarded(["review", str(file), "--format", "json"]) in (0, 1, 3)
    record = json.loads(capsys.readouterr().out)
    assert {f["state"] for f in record["findings"]} == {"normal", "cold"}
    assert all(f["verdict"] != "not-checked" for f in record["findings"])

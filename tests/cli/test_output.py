"""Where text goes: pipes, full disks, devices, files and other encodings, each with an exit code of the contract."""

from __future__ import annotations

import json
import os
import subprocess
import sys
import threading
from pathlib import Path

import pytest

from stresscheck.cli import guarded
from stresscheck.cli.output import style, write
from stresscheck.design.starter import starter_text
from stresscheck.errors import InputError
from stresscheck.report.formats import FORMATS

FULL = Path("/dev/full")
COMMAND = f'"{sys.executable}" -m stresscheck'


@pytest.fixture
def tank(tmp_path: Path) -> Path:
    file = tmp_path / "tank.toml"
    file.write_text(starter_text(), encoding="utf-8")
    return file


def _shell(line: str, **environment: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        ["bash", "-c", line],
        capture_output=True, text=True, timeout=120, check=False, env={**os.environ, **environment},
    )  # fmt: skip


@pytest.mark.parametrize("arguments", ["--help", "--version", "review --help", "library", "schema", "start"])
def test_pipe_closed_before_anything_is_written_ends_with_141(arguments: str) -> None:
    reader, writer = os.pipe()
    os.close(reader)
    with os.fdopen(writer, "wb") as closed:
        run = subprocess.run(
            [sys.executable, "-m", "stresscheck", *arguments.split()],
            stdout=closed, stderr=subprocess.PIPE, text=True, timeout=60, check=False,
        )  # fmt: skip
    assert run.returncode == 141
    assert run.stderr == ""


@pytest.mark.skipif(not FULL.exists(), reason="needs a device that is always full")
@pytest.mark.parametrize("arguments", ["--help", "--version", "library policies"])
def test_full_disk_ends_with_2_and_no_traceback(arguments: str) -> None:
    done = _shell(f"{COMMAND} {arguments} >{FULL}")
    assert done.returncode == 2
    assert "standard output" in done.stderr
    assert "internal" not in done.stderr
    assert "Traceback" not in done.stderr


def test_output_of_a_folder_or_into_a_missing_one_is_refused_before_the_search(
    tank: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr("stresscheck.chain.review", lambda *_, **__: pytest.fail("searched all the same"))
    for target in ("/", ".", "", str(tmp_path), str(tmp_path / "none" / "out.json")):
        assert guarded(["review", str(tank), "--output", target]) == 2


def test_output_over_the_design_file_is_refused(tank: Path, tmp_path: Path) -> None:
    link = tmp_path / "link.toml"
    link.symlink_to(tank)
    for target in (tank, link):
        assert guarded(["review", str(tank), "--output", str(target)]) == 2
    assert tank.read_text(encoding="utf-8") == starter_text()


def test_write_to_a_named_pipe_goes_through_it_and_leaves_it_there(tmp_path: Path) -> None:
    pipe = tmp_path / "pipe"
    os.mkfifo(pipe)
    got: list[str] = []
    reader = threading.Thread(target=lambda: got.append(pipe.read_text(encoding="utf-8")))
    reader.start()
    write("all of it\n", pipe)
    reader.join(timeout=10)
    assert got == ["all of it\n"]
    assert pipe.is_fifo()


def test_write_through_a_link_keeps_the_link_and_leaves_no_draft(tmp_path: Path) -> None:
    (tmp_path / "real").mkdir()
    link = tmp_path / "out.json"
    link.symlink_to(tmp_path / "real" / "out.json")
    write("new\n", link)
    assert link.is_symlink()
    assert (tmp_path / "real" / "out.json").read_text(encoding="utf-8") == "new\n"
    assert sorted(p.name for p in tmp_path.iterdir()) == ["out.json", "real"]


def test_write_that_fails_leaves_the_old_file_as_it_was(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    target = tmp_path / "out.json"
    target.write_text("old\n", encoding="utf-8")

    def full(self: Path, *_: object) -> None:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(Path, "replace", full)
    with pytest.raises(InputError, match="No space left"):
        write("new\n", target)
    assert target.read_text(encoding="utf-8") == "old\n"
    assert [p.name for p in tmp_path.iterdir()] == ["out.json"]


def test_file_gets_neither_tones_nor_the_width_of_the_terminal(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    monkeypatch.setattr("sys.stdout.isatty", lambda: True, raising=False)
    monkeypatch.setenv("COLUMNS", "120")
    monkeypatch.setenv("TERM", "xterm")
    monkeypatch.delenv("NO_COLOR", raising=False)
    assert style(None) == (120, True)
    assert style(tmp_path / "x") == (80, False)
    monkeypatch.setenv("NO_COLOR", "1")
    assert style(None) == (120, False)


def test_json_on_an_ascii_output_is_json(tank: Path) -> None:
    tank.write_text(starter_text().replace("Series tank", "Größe Ω"), encoding="utf-8")
    done = _shell(f"{COMMAND} review {tank} --format json", PYTHONIOENCODING="ascii")
    assert done.returncode == 0
    assert json.loads(done.stdout)["design"]["title"].startswith("Größe Ω")


def test_hostile_option_is_told_without_a_character_that_acts(tank: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert guarded(["review", str(tank), "--gap", "\x1b[31m5 %\u202e"]) == 2
    told = capsys.readouterr().err
    assert "<U+001B>" in told
    assert not {"\x1b", "\u202e"} & set(told)


@pytest.mark.parametrize(
    ("words", "expected"),
    [
        ("stresscheck re", {"review", "resonances"}),
        ("stresscheck review --format ", set(FORMATS)),
        ("stresscheck review --derating src-", {"src-severe", "src-benign"}),
        ("stresscheck library pol", {"policies"}),
    ],
)
def test_completion_of_a_shell_offers_what_the_registries_hold(words: str, expected: set[str]) -> None:
    run = subprocess.run(
        [sys.executable, "-c", "import sys; sys.argv = ['stresscheck']; from stresscheck.cli import run; run()"],
        env={**os.environ, "_STRESSCHECK_COMPLETE": "complete_bash", "COMP_WORDS": words,
             "COMP_CWORD": str(len(words.split(" ")) - 1)},
        capture_output=True, text=True, timeout=60, check=False,
    )  # fmt: skip
    assert set(run.stdout.split()) == expected

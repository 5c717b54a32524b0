"""Ctrl-C while searching: the report comes out with what is known by then, and nothing passes by it."""

from __future__ import annotations

import json
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest

from stresscheck.chain import review
from stresscheck.cli import guarded
from stresscheck.cli.interrupt import Interrupt
from stresscheck.design.load import read_design

SECTION = """
[inductor.L{n}]
between = ["n{n}", "n{m}"]
value = "80 uH"
tolerance = "5 %"
q = 200
q_at = "100 kHz"
family = "air core"
rating = {{ current_rms = "1 A", voltage_peak = "1 kV" }}
[capacitor.C{n}]
between = ["n{m}", "ground"]
value = "30 nF"
tolerance = "5 %"
dissipation_factor = 0.0005
family = "polypropylene film"
rating = {{ voltage_dc = "1 kV", current_rms = "10 A" }}
"""
HEAD = """title = "ladder, invented"
derating = "uniform-80"
[drive.d]
between = ["n0", "ground"]
peak = "10 V"
frequency = ["95 kHz", "105 kHz"]
source_resistance = "50 ohm"
rating = { current_peak = "1 A" }
[resistor.R]
between = ["n5", "ground"]
value = "50 ohm"
rating = { dissipation = "10 W" }
"""


TEXT = HEAD + "".join(SECTION.format(n=n, m=n + 1) for n in range(5))


def test_interrupt_while_searching_ends_it_and_writes_the_report(tmp_path: Path) -> None:
    """A gap that is never closed keeps the search going for a minute; Ctrl-C ends it at once."""
    file, out = tmp_path / "ladder.toml", tmp_path / "out.json"
    file.write_text(TEXT, encoding="utf-8")
    options = ["--budget", "600 s", "--gap", "0.0001 %", "--format", "json", "--output", str(out)]
    run = subprocess.Popen(
        [sys.executable, "-m", "stresscheck", "review", str(file), *options], stderr=subprocess.PIPE, text=True
    )
    time.sleep(4.0)
    assert run.poll() is None, "ended before it could be interrupted"
    run.send_signal(signal.SIGINT)
    _, told = run.communicate(timeout=60)
    assert "once more" in told
    record = json.loads(out.read_text(encoding="utf-8"))
    assert run.returncode == 3
    assert record["verdict"] == "unanswered"
    assert all(f["worst"] is not None for f in record["findings"] if f["event"] == "steady")
    events = [f for f in record["findings"] if f["event"] != "steady"]
    assert events
    assert all(f["verdict"] == "not-checked" for f in events)


def test_review_interrupted_at_once_passes_nothing_unproved() -> None:
    tight = TEXT.replace('voltage_dc = "1 kV"', 'voltage_dc = "9.1 V"')
    record = review(read_design(tight), interrupted=lambda: True)
    assert record.verdict == "unanswered"
    unproved = [f for f in record.findings if f.verdict == "unproved"]
    assert unproved
    for finding in record.findings:
        assert finding.verdict != "within" or finding.bound <= finding.allowed


def test_interrupt_handler_of_the_caller_is_back_after_the_search() -> None:
    before = signal.getsignal(signal.SIGINT)
    with Interrupt() as stop:
        assert not stop.asked()
        signal.raise_signal(signal.SIGINT)
        assert stop.asked()
        with pytest.raises(KeyboardInterrupt):
            signal.raise_signal(signal.SIGINT)
    assert signal.getsignal(signal.SIGINT) is before


def test_interrupt_while_a_file_is_read_ends_with_130(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    def stopped(path: Path) -> None:
        raise KeyboardInterrupt

    monkeypatch.setattr("stresscheck.design.load.load_design", stopped)
    assert guarded(["review", str(tmp_path / "any.toml")]) == 130

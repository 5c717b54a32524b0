"""Ctrl-C while searching: the report comes out with what is known by then, and nothing passes by it."""

from __future__ import annotations

import json
import signal
import subprocess
import sys
import time
from pathlib import Path

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
between = ["n6", "ground"]
value = "50 ohm"
rating = { dissipation = "10 W" }
"""


def test_interrupt_while_searching_reports_what_is_known_as_unproved(tmp_path: Path) -> None:
    file, out = tmp_path / "ladder.toml", tmp_path / "out.json"
    file.write_text(HEAD + "".join(SECTION.format(n=n, m=n + 1) for n in range(6)), encoding="utf-8")
    run = subprocess.Popen(
        [
            sys.executable,
            "-m",
            "stresscheck",
            "review",
            str(file),
            "--budget",
            "300 s",
            "--format",
            "json",
            "--output",
            str(out),
        ],
        stderr=subprocess.PIPE,
        text=True,
    )
    time.sleep(4.0)
    assert run.poll() is None, "ended before it could be interrupted"
    run.send_signal(signal.SIGINT)
    _, told = run.communicate(timeout=60)
    assert run.returncode == 3
    assert "once more" in told
    record = json.loads(out.read_text(encoding="utf-8"))
    assert record["verdict"] == "unanswered"
    assert record["counts"]["unproved"] > 0
    assert all(f["worst"] is not None for f in record["findings"])

"""Every shipped example, reviewed by the real command, must say what stands beside it."""

from __future__ import annotations

import json
import subprocess
import sys
import tomllib
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
EXAMPLES = ROOT / "examples"
DESIGNS = sorted(EXAMPLES.glob("*/*.toml"))


def test_examples_folders_hold_designs_of_every_verdict() -> None:
    assert {p.parent.name for p in DESIGNS} == {"ready", "exceeded", "unanswered"}
    assert all(p.with_suffix(".expect").exists() for p in DESIGNS)


@pytest.mark.parametrize("design", DESIGNS, ids=lambda p: p.stem)
def test_example_reviewed_by_the_command_says_what_is_expected(design: Path) -> None:
    expected = tomllib.loads(design.with_suffix(".expect").read_text(encoding="utf-8"))
    run = subprocess.run(
        [sys.executable, "-m", "stresscheck", "review", str(design), "--format", "json"],
        capture_output=True, text=True, encoding="utf-8", timeout=120, check=False,
    )  # fmt: skip
    assert run.returncode == expected["exit_code"], run.stderr
    record = json.loads(run.stdout)
    assert record["verdict"] == expected["verdict"] == design.parent.name
    findings = {finding["id"]: finding for finding in record["findings"]}
    for name, wanted in expected["finding"].items():
        found = findings[name]
        assert found["verdict"] == wanted["verdict"], name
        for key in ("nominal", "worst", "allowed"):
            if key in wanted:
                assert found[key] == pytest.approx(wanted[key], rel=2e-3), (name, key)
        if found["bound"] is not None:
            assert found["bound"] >= found["worst"]
    cautions = {caution["id"] for caution in record["cautions"]}
    assert set(expected["cautions"]) <= cautions
    for caution in record["cautions"]:
        assert "local codes" in caution["text"]


@pytest.mark.parametrize("design", DESIGNS, ids=lambda p: p.stem)
def test_example_design_says_that_it_is_invented(design: Path) -> None:
    text = design.read_text(encoding="utf-8")
    assert "nvented" in text.splitlines()[0]
    assert "(invented)" in tomllib.loads(text)["title"]

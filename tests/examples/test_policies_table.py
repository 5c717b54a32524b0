"""The table of README that sets one design under all six policies says what a review says."""

from __future__ import annotations

import math
from pathlib import Path

import pytest

from stresscheck import load_design, review
from stresscheck.findings.finding import Finding

ROOT = Path(__file__).resolve().parents[2]
COLUMNS = (
    "Cprimary.voltage_peak", "Cprimary.voltage_rms", "Lprimary.current_rms", "Rload.dissipation",
)  # fmt: skip


def _rows() -> dict[str, list[str]]:
    lines = (ROOT / "README.md").read_text(encoding="utf-8").splitlines()
    start = next(n for n, line in enumerate(lines) if line.startswith("| policy | verdict |"))
    found = {}
    for line in lines[start + 2 :]:
        if not line.startswith("|"):
            break
        cells = [cell.strip() for cell in line.strip("|").split("|")]
        found[cells[0].strip("`")] = cells[1:]
    return found


def _shown(finding: Finding) -> str:
    return f"{math.ceil(100.0 * finding.ratio - 1e-9)} %" if finding.ratio is not None else finding.verdict


def test_table_names_every_shipped_policy() -> None:
    assert set(_rows()) == {file.stem for file in (ROOT / "ratings" / "policies").glob("*.toml")}


@pytest.mark.parametrize("policy", sorted(_rows()))
def test_row_of_a_policy_is_what_the_review_says(policy: str) -> None:
    design = load_design(ROOT / "examples" / "exceeded" / "wireless-link.toml")
    record = review(design, derating=policy, states=["normal"])
    found = {f.id.removesuffix("@normal"): f for f in record.findings}
    assert _rows()[policy] == [record.verdict, *(_shown(found[key]) for key in COLUMNS)]

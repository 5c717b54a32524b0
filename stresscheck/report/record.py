"""Review: the frozen record of one reviewed design, from which every format is rendered."""

from __future__ import annotations

from dataclasses import dataclass

from stresscheck.cautions.caution import Caution, ChecklistLine
from stresscheck.findings.finding import Finding
from stresscheck.findings.outlook import DriveReport, Resonance
from stresscheck.findings.single_faults import SingleFault

SCHEMA = "stresscheck.review/1"


@dataclass(frozen=True, slots=True)
class DesignMark:
    """Which file was reviewed. `file` is its name without folders; `sha256` covers its bytes."""

    title: str
    revision: str
    file: str
    sha256: str


@dataclass(frozen=True, slots=True)
class DeratingMark:
    """Which derating policy was applied and which document it stands for."""

    name: str
    title: str
    edition: str
    source: str
    evidence: str


@dataclass(frozen=True, slots=True)
class Accepted:
    """A finding that named people take responsibility for until a date (ISO)."""

    finding: str
    reason: str
    by: str
    until: str
    counts: bool
    """False once its date has passed, or where it names no finding: then it changes no verdict."""


@dataclass(frozen=True, slots=True)
class Review:
    """One design reviewed. Same input, same record: no clock, no host, no absolute path."""

    schema: str
    version: str
    design: DesignMark
    derating: DeratingMark
    verdict: str
    counts: tuple[tuple[str, int], ...]
    resonances: tuple[Resonance, ...]
    drives: tuple[DriveReport, ...]
    findings: tuple[Finding, ...]
    cautions: tuple[Caution, ...]
    checklist: tuple[ChecklistLine, ...]
    accepted: tuple[Accepted, ...]
    assumptions: tuple[str, ...]
    problems: tuple[str, ...] = ()
    """Remarks of the whole run: budget spent, states that couldn't be solved."""
    single_faults: tuple[SingleFault, ...] = ()
    """Every part opened and shorted in turn, where that was asked for; changes no verdict."""

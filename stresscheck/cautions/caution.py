"""What can hurt a person, and a line of the checklist for the bench."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Caution:
    """Something that can hurt a person. It triggers, and never clears."""

    id: str
    subject: str
    text: str
    value: float
    unit: str
    threshold: float | None
    source: str
    evidence: str


@dataclass(frozen=True, slots=True)
class ChecklistLine:
    """One line to tick at the bench, and because of what it is there."""

    id: str
    text: str
    because: str

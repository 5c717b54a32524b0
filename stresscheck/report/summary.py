"""Several reviews at a glance."""

from __future__ import annotations

from collections.abc import Sequence

from stresscheck.report import figures
from stresscheck.report.lines import Lines
from stresscheck.report.record import Review


def summary(reviews: Sequence[Review], width: int = 80, *, color: bool = False) -> str:
    """One line a review: verdict, file, and the finding closest to its limit."""
    out = Lines(width)
    out.add(f"{len(reviews)} designs", tone="open")
    for review in reviews:
        worst = figures.closest(review.findings)
        tail = "" if worst is None else f": {worst.id} {figures.room(worst)}"
        out.add(f"{review.verdict:<11} {review.design.file}{tail}", indent=2, hang=12)
    return out.text(color=color)

"""The review as data, schema stresscheck.review/1: keys, verdict words and exit codes are a contract."""

from __future__ import annotations

import json
import math
from collections.abc import Sequence
from dataclasses import asdict
from typing import Any

from stresscheck.findings.finding import Finding
from stresscheck.report.record import Review


def render(review: Review) -> str:
    """One JSON document, ASCII, two spaces of indent, never NaN or infinity."""
    return dump(as_data(review))


def render_all(reviews: Sequence[Review], width: int = 80, *, color: bool = False) -> str:
    """One review as a document, several as a list of documents; width and color change nothing."""
    return render(reviews[0]) if len(reviews) == 1 else dump([as_data(review) for review in reviews])


def dump(data: Any) -> str:
    """JSON text of data, in reading order. ASCII, so that an output of any encoding carries the same bytes."""
    return json.dumps(data, indent=2, ensure_ascii=True, allow_nan=False) + "\n"


def as_data(review: Review) -> dict[str, Any]:
    """The review as plain lists and dicts, in the contract's order; what is missing is None."""
    data: dict[str, Any] = {
        "schema": review.schema,
        "version": review.version,
        "design": asdict(review.design),
        "derating": asdict(review.derating),
        "verdict": review.verdict,
        "counts": dict(review.counts),
        "resonances": [
            {**asdict(r), "energy": [{"part": part, "share": share} for part, share in r.energy]}
            for r in review.resonances
        ],
        "drives": [asdict(drive) for drive in review.drives],
        "findings": [_finding(finding) for finding in review.findings],
        "cautions": [asdict(caution) for caution in review.cautions],
        "checklist": [asdict(line) for line in review.checklist],
        "accepted": [asdict(item) for item in review.accepted],
        "assumptions": list(review.assumptions),
        "problems": list(review.problems),
        "single_faults": [
            {
                "part": fault.part,
                "how": fault.how,
                "outcome": fault.outcome,
                "why": fault.why,
                "findings": [_finding(finding) for finding in fault.findings],
            }
            for fault in review.single_faults
        ],
    }
    clean: dict[str, Any] = _finite(data)
    return clean


def _finding(finding: Finding) -> dict[str, Any]:
    at = None
    if finding.at is not None:
        at = {"hertz": finding.at.hertz, "values": dict(finding.at.values)}
    return {
        "id": finding.id,
        "state": finding.state,
        "state_kind": finding.state_kind,
        "event": finding.event,
        "part": finding.part,
        "kind": finding.kind,
        "quantity": finding.quantity,
        "unit": finding.unit,
        "nominal": finding.nominal,
        "worst": finding.worst,
        "bound": finding.bound,
        "rated": finding.rated,
        "allowed_fraction": finding.allowed_fraction,
        "allowed": finding.allowed,
        "ratio": finding.ratio,
        "ratio_bound": finding.ratio_bound,
        "verdict": finding.verdict,
        "at": at,
        "working": [asdict(step) for step in finding.working],
        "rating_source": finding.rating_source,
        "derating_source": finding.derating_source,
        "why": finding.why,
        "reason": finding.reason,
        "remarks": list(finding.remarks),
        "proof": None if finding.proof is None else asdict(finding.proof),
        "accepted": finding.accepted,
    }


def _finite(data: Any) -> Any:
    """None in place of every number that JSON can't carry."""
    if isinstance(data, float):
        return data if math.isfinite(data) else None
    if isinstance(data, dict):
        return {key: _finite(value) for key, value in data.items()}
    if isinstance(data, (list, tuple)):
        return [_finite(value) for value in data]
    return data

"""The working of one finding: every line that a reviewer needs to redo it with a calculator, and the proof in words."""

from __future__ import annotations

from stresscheck.findings.finding import Finding
from stresscheck.report import figures
from stresscheck.report.lines import Lines
from stresscheck.report.record import Review


def explain(review: Review, finding_id: str, width: int = 80, *, color: bool = False) -> str:
    """Text for one finding; KeyError with the known ids where there is none of this id."""
    found = next((f for f in review.findings if f.id == finding_id), None)
    if found is None:
        raise KeyError(", ".join(f.id for f in review.findings))
    out = Lines(width)
    out.add(f"{found.id}   {found.verdict}", tone="head")
    _point(out, found)
    _working(out, found)
    _proof(out, found)
    if found.reason:
        out.add(f"because: {found.reason}")
    if found.why:
        out.add(f"why: {found.why}")
    return out.text(color=color)


def _point(out: Lines, finding: Finding) -> None:
    if finding.at is None:
        return
    out.add()
    out.add("the point where the worst was found", tone="open")
    for path, value in finding.at.values:
        out.add(f"{path} = {value:.9g}   ({figures.place_value(path, value)})", indent=2)


def _working(out: Lines, finding: Finding) -> None:
    out.add()
    out.add("working", tone="open")
    for step in finding.working:
        out.add(f"{step.symbol} = {step.formula}", indent=2, tone="head")
        out.add(f"{step.numbers} = {step.value:.7g} {step.unit}", indent=6)
        out.add(f"source: {step.source}", indent=6, tone="quiet")
    if not finding.working:
        out.add("none: the check could not be made", indent=2)


def _proof(out: Lines, finding: Finding) -> None:
    out.add()
    out.add("proof", tone="open")
    proof = finding.proof
    if proof is None:
        out.add("none", indent=2)
        return
    out.add(f"method: {proof.method}", indent=2)
    if finding.bound is None:
        out.add(f"{_boxes(proof.boxes)} examined; no bound was found", indent=2)
    else:
        gap = "" if proof.gap is None else f", {100 * proof.gap:.3g} % above the worst found"
        out.add(
            f"{_boxes(proof.boxes)} examined; no point of the box exceeds {finding.bound:.7g} {finding.unit}{gap}",
            indent=2,
        )
    if finding.ratio_bound is not None:
        out.add(f"that is at most {figures.percent(finding.ratio_bound)} of the allowed value", indent=2)
    for remark in finding.remarks:
        out.add(remark, indent=2)
    if proof.corners is not None:
        out.add(f"largest at the corners of the box: {proof.corners:.7g} {finding.unit}", indent=2)


def _boxes(count: int) -> str:
    return "1 box" if count == 1 else f"{count} boxes"

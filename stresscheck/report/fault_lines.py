"""Single faults in words: one line a fault, the same in every text format."""

from __future__ import annotations

from stresscheck.findings.finding import Finding
from stresscheck.findings.single_faults import SingleFault
from stresscheck.report import figures

INTRODUCTION = (
    "Every part opened and shorted in turn, other parts against their full ratings, steady state only. "
    "It changes no verdict."
)
MOST = 4


def fault_line(fault: SingleFault) -> str:
    """What a fault does to the other parts."""
    head = f"{fault.part} {fault.how}: {fault.outcome}"
    if fault.why:
        return f"{head}, {fault.why}"
    told = [_one(finding) for finding in fault.findings[:MOST]]
    more = len(fault.findings) - len(told)
    if more:
        told.append(f"and {more} more")
    return "; ".join([head, *told])


def _one(finding: Finding) -> str:
    name = f"{finding.part} {finding.quantity}"
    if not finding.verdict.startswith("above"):
        return f"{name} {finding.verdict}"
    return f"{name} {figures.stress(finding.worst, finding.unit)} against {figures.limit_in_words(finding)}"

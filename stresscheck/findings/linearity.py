"""Where a coil saturates the linear solution doesn't hold: what it says within limits is then no answer."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace

import numpy as np

from stresscheck.findings.checks import Check
from stresscheck.findings.finding import Finding


def guarded(findings: Sequence[Finding], checks: Sequence[Check]) -> tuple[Finding, ...]:
    """Findings of one state with those withdrawn that rest on a coil driven above its saturation current.

    Steady saturation withdraws every finding of the state, that of an event the findings of this event. A finding that
    is above its limit stays: the coil's own current certainly is, and others are at least a warning.
    """
    rated = _saturation(checks)
    over: dict[str, list[str]] = {}
    for finding in findings:
        limit = rated.get(finding.part)
        known = finding.quantity == "current_peak" and finding.worst is not None and limit is not None
        if known and not finding.worst <= limit:  # type: ignore[operator]
            over.setdefault(finding.event, []).append(finding.part)
    if not over:
        return tuple(findings)
    return tuple(_withdrawn(f, over) if f.verdict in ("within", "unproved") else f for f in findings)


def _saturation(checks: Sequence[Check]) -> Mapping[str, float]:
    """Full saturation current of every coil that declares one [A]; at its smallest where it moves."""
    found = {}
    for check in checks:
        if check.kind != "inductor" or check.quantity != "current_peak":
            continue
        values = [
            float(limit.rated_smallest(np.zeros(1), np.zeros(1))[0])
            for limit in check.limits.limits
            if limit.rating_key == "saturation_current"
        ]
        if values and np.isfinite(values).all():
            found[check.part] = min(values)
    return found


def _withdrawn(finding: Finding, over: Mapping[str, list[str]]) -> Finding:
    coils = list(dict.fromkeys(over.get("steady", []) + over.get(finding.event, [])))
    if not coils:
        return finding
    names = ", ".join(coils)
    why = f"{names} is driven above its saturation current: a linear solution doesn't hold"
    return replace(finding, verdict="not-checked", why=why)

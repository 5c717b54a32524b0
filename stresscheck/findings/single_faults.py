"""Every part opened and shorted in turn: what else exceeds its full rating then, or can't be told."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import TYPE_CHECKING

from stresscheck.findings.assemble import find_all
from stresscheck.findings.finding import Finding
from stresscheck.limits.policy import Policy

if TYPE_CHECKING:
    from stresscheck.design.model import Design

KINDS = ("capacitor", "inductor", "resistor")
BAD = ("above-rating", "above-derated", "unproved", "not-checked", "no-rating")


@dataclass(frozen=True, slots=True)
class SingleFault:
    """One part opened or shorted in the state `normal`, steady state, full ratings.

    `outcome`: "exceeds" (some other part's stress is above its rating), "open question" (nothing is, but something has
    no answer), "none found", or "no solution" (`why` says what can't be solved). `findings`: those above their rating,
    worst first, then those without an answer.
    """

    part: str
    how: str
    outcome: str
    why: str
    findings: tuple[Finding, ...]


def single_faults(
    design: Design,
    policy: Policy,
    gap: float,
    stop_of: Callable[[int], Callable[[bool], bool]],
    tell: Callable[[str, float], None] = lambda text, done: None,
) -> tuple[SingleFault, ...]:
    """Open and short every capacitor, inductor and resistor in turn. stop_of: fault number → stop function.

    Switch-on in the fault isn't computed here; declare the fault as a state for that.
    """
    cases = [(name, how) for kind in KINDS for name in getattr(design, kind) for how in ("open", "short")]
    found = []
    for number, (part, how) in enumerate(cases):
        tell(f"{part} {how}", number / len(cases))
        found.append(_one(design.with_fault(part, how), part, how, policy, gap, stop_of(number)))
    return tuple(found)


def _one(faulty: Design, part: str, how: str, policy: Policy, gap: float, stop: Callable[[bool], bool]) -> SingleFault:
    result = find_all(faulty, f"{part}-{how}", "fault", policy, gap, stop)
    if result.why:
        return SingleFault(part, how, "no solution", result.why, ())
    bad = [f for f in result.findings if f.verdict in BAD and f.part != part and f.kind not in ("spacing", "probe")]
    above = sorted((f for f in bad if f.verdict.startswith("above")), key=lambda f: -(f.ratio or 0.0))
    open_ = [f for f in bad if not f.verdict.startswith("above")]
    outcome = "exceeds" if above else "open question" if open_ else "none found"
    return SingleFault(part, how, outcome, "", (*above, *open_))


def fault_count(design: Design) -> int:
    """How many single faults there are."""
    return 2 * sum(len(getattr(design, kind)) for kind in KINDS)

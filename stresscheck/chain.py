"""The whole program on one page: a design goes in, a frozen record comes out."""

from __future__ import annotations

import datetime
import time
from collections.abc import Callable, Sequence
from dataclasses import replace
from typing import TYPE_CHECKING

from stresscheck.caution_facts import capacitor_facts, node_facts
from stresscheck.cautions.facts import CapacitorFact, Facts, NodeFact
from stresscheck.cautions.registry import cautions_for
from stresscheck.circuit.build import build
from stresscheck.errors import CheckError, InputError, Problem
from stresscheck.findings.assemble import StateFindings, find_all
from stresscheck.findings.events import find_events
from stresscheck.findings.finding import VERDICTS, Finding
from stresscheck.findings.linearity import guarded
from stresscheck.findings.outlook import DriveReport, Resonance, drive_reports, resonances
from stresscheck.findings.single_faults import SingleFault, fault_count, single_faults
from stresscheck.limits.policy import Policy, load_policy
from stresscheck.report.record import SCHEMA, Accepted, DeratingMark, DesignMark, Review

if TYPE_CHECKING:
    from stresscheck.design.model import Design

DECIDED_SHARE = 0.2
"""Part of the budget spent on closing gaps once every finding is decided against its limit."""

ASSUMPTIONS = (
    "Events: switch-on from rest and switch-off of all drives at once, and changes from normal and back to it; peak "
    "ratings only. A drive that is off is zero volt behind its resistance, or zero ampere; interrupting its current, "
    "arcs and bouncing contacts aren't covered. Of a gated drive its bursts stand for these events, and changes while it "
    "runs aren't covered.",
    "Windings are copper: declared resistances and Qs hold at 20 degC; where an ambient is declared, voltages and currents "
    "are those of the coldest winding and heat is that of the winding at its own temperature.",
    "Every part is linear; losses and values are those declared; wiring and stray coupling only as declared.",
    "Worst case over declared tolerances, ranges and bands, taken as independent of each other.",
    "Peaks of drives at different frequencies, or without stated phase, are added.",
)

Progress = Callable[[str, float], None]


def review(
    design: Design,
    *,
    derating: str | None = None,
    states: Sequence[str] | None = None,
    gap: float = 0.05,
    budget: float = 10.0,
    today: datetime.date | None = None,
    progress: Progress | None = None,
    interrupted: Callable[[], bool] | None = None,
    every_fault: bool = False,
) -> Review:
    """Review a loaded design under its policy, or under `derating`.

    states: names of the states to review, all without it; gap: relative distance between bound and found value at
    which a search stops; budget: seconds for the whole review; today: date against which accepted findings expire;
    progress: called with a text and the done share; interrupted: True ends the search, what isn't proved by then is
    `unproved`; every_fault: also open and short every part in turn. Raises InputError for an unknown policy or state.
    """
    policy = load_policy(design.derating if derating is None else derating, design.folder)
    names = _states(design, states)
    results: list[tuple[Design, StateFindings]] = []
    clock = _Clock(budget, len(names), interrupted)
    for number, name in enumerate(names):
        if progress is not None:
            progress(f"state {name}", number / len(names))
        there = design.in_state(name)
        results.append((there, find_all(there, name, _kind(design, name), policy, gap, clock.next())))
    results = _with_events(design, results, progress, interrupted or (lambda: False))
    faults: tuple[SingleFault, ...] = ()
    if every_fault:
        clock = _Clock(budget, fault_count(design), interrupted)
        faults = single_faults(design, policy, gap, lambda _: clock.next(), progress or (lambda text, share: None))
    return replace(_record(design, policy, results, today or datetime.date.today()), single_faults=faults)


def _record(
    design: Design, policy: Policy, results: list[tuple[Design, StateFindings]], today: datetime.date
) -> Review:
    """Put everything that was found into the frozen record."""
    from stresscheck import __version__

    accepted = _accepted(design, results, today)
    counted = {item.finding for item in accepted if item.counts}
    findings = tuple(
        replace(f, accepted=True) if f.id in counted else f for _, found in results for f in found.findings
    )
    outlook = [found for _, found in results if found.network is not None]
    return Review(
        schema=SCHEMA,
        version=__version__,
        design=DesignMark(design.title, design.revision or "", design.file, design.sha256),
        derating=DeratingMark(policy.name, policy.title, policy.edition, policy.source, policy.evidence),
        verdict=verdict_of(findings),
        counts=_counts(findings),
        resonances=tuple(r for f in outlook if f.network for r in resonances(f.network, f.state)),
        drives=tuple(d for f in outlook if f.network for d in drive_reports(f.network, f.state)),
        findings=findings,
        cautions=cautions_for(_facts(design, results)),
        checklist=(),
        accepted=accepted,
        assumptions=(*ASSUMPTIONS, *_cut_offs(outlook)),
        problems=tuple(f"state {found.state}: {found.why}" for _, found in results if found.why),
    )


def _cut_offs(outlook: Sequence[StateFindings]) -> tuple[str, ...]:
    """Up to which harmonic squares and triangles are summed, and what that leaves out."""
    found = []
    for state in outlook:
        network = state.network
        if network is None or not any(source.waveform.endless for source in network.sources):
            continue
        top = max(line.order for line in network.lines)
        found.append(
            f"State {state.state}: harmonics are summed up to order {top}. At the points looked at, those beyond it add "
            f"at most {100.0 * network.left_out:.2g} % of any stress; bounds cover them."
        )
    return tuple(found)


def _with_events(
    design: Design,
    results: list[tuple[Design, StateFindings]],
    progress: Progress | None,
    interrupted: Callable[[], bool],
) -> list[tuple[Design, StateFindings]]:
    """Add the findings on switch-on, switch-off and change to those of each state.

    A state is reached from `normal` while running, `normal` from every other operating state.
    """
    out = []
    for number, (there, found) in enumerate(results):
        if progress is not None:
            progress(f"events of state {found.state}", number / len(results))
        others = [o for _, o in results if o.state != found.state and _leads(design, o.state, found.state)]
        free = frozenset(name for name, drive in there.drive.items() if drive.any_waveform)
        events = find_events(found, others, interrupted, free)
        checks = () if found.steady is None else found.steady.checks
        out.append((there, replace(found, findings=guarded(found.findings + events, checks))))
    return out


def _leads(design: Design, before: str, after: str) -> bool:
    return before == "normal" or (after == "normal" and _kind(design, before) == "operating")


def resonances_of(design: Design, states: Sequence[str] | None = None) -> tuple[Resonance, ...]:
    """Natural modes of the design in each state, every value nominal. Raises InputError for an unknown state."""
    found: list[Resonance] = []
    for name in _states(design, states):
        try:
            found.extend(resonances(build(design.in_state(name)), name))
        except CheckError:
            continue
    return tuple(found)


def verdict_of(findings: Sequence[Finding]) -> str:
    """`exceeded` if any finding that counts is above; else `unanswered` if any has no answer; else `ready`.

    A review without a single finding answers nothing. Accepted findings don't count.
    """
    verdicts = {finding.verdict for finding in findings if not finding.accepted}
    if verdicts & {"above-derated", "above-rating"}:
        return "exceeded"
    if verdicts - {"within"} or not findings:
        return "unanswered"
    return "ready"


class _Clock:
    """Shares the budget among the states: each gets an equal part of what is left."""

    def __init__(self, budget: float, states: int, interrupted: Callable[[], bool] | None) -> None:
        self.end = time.monotonic() + budget
        self.left = states
        self.interrupted = interrupted or (lambda: False)

    def next(self) -> Callable[[bool], bool]:
        """The stop function of the next state."""
        start = time.monotonic()
        share = max(0.0, self.end - start) / max(1, self.left)
        self.left -= 1

        def stop(decided: bool) -> bool:
            spent = time.monotonic() - start
            return self.interrupted() or spent > (DECIDED_SHARE * share if decided else share)

        return stop


def _states(design: Design, wanted: Sequence[str] | None) -> list[str]:
    known = list(design.states)
    if not wanted:
        return known
    problems = [
        Problem("unknown-name", design.file, None, "state", name, "one of " + ", ".join(known), "name one of these")
        for name in wanted
        if name not in known
    ]
    if problems:
        raise InputError(problems)
    return [name for name in known if name in wanted]


def _kind(design: Design, state: str) -> str:
    return "operating" if state == "normal" else design.state[state].kind


def _accepted(
    design: Design, results: list[tuple[Design, StateFindings]], today: datetime.date
) -> tuple[Accepted, ...]:
    """Accepted findings; one counts while its date hasn't passed and the finding exists."""
    ids = {finding.id for _, found in results for finding in found.findings}
    return tuple(
        Accepted(
            item.finding, item.reason, item.by, item.until.isoformat(), item.finding in ids and today <= item.until
        )
        for item in design.accept.values()
    )


def _counts(findings: Sequence[Finding]) -> tuple[tuple[str, int], ...]:
    live = [finding for finding in findings if not finding.accepted]
    counted = [(word, sum(finding.verdict == word for finding in live)) for word in VERDICTS]
    return (*counted, ("accepted", len(findings) - len(live)))


def _facts(design: Design, results: list[tuple[Design, StateFindings]]) -> Facts:
    nodes: list[NodeFact] = []
    capacitors: list[CapacitorFact] = []
    low: list[float] = []
    high: list[float] = []
    for there, found in results:
        nodes.extend(node_facts(there, found))
        capacitors.extend(capacitor_facts(there, found))
        bands = [] if found.network is None else found.network.weighty_bands()
        low += [band[0] for band in bands]
        high += [band[1] for band in bands]
    return Facts(tuple(nodes), tuple(capacitors), design.site.access, min(low, default=0.0), max(high, default=0.0))


__all__ = ["DriveReport", "Resonance", "resonances_of", "review", "verdict_of"]

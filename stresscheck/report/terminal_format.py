"""The review for people at a terminal: is it ready, what is worst, why, where."""

from __future__ import annotations

from collections.abc import Sequence

from stresscheck.findings.finding import Finding
from stresscheck.report import figures
from stresscheck.report.fault_lines import INTRODUCTION, fault_line
from stresscheck.report.lines import Lines
from stresscheck.report.record import Review
from stresscheck.report.summary import summary

ANSWER = {
    "ready": "READY       every finding that counts is within its limit, by proof",
    "exceeded": "EXCEEDED    a limit is exceeded",
    "unanswered": "UNANSWERED  nothing found above its limit, but not everything has an answer",
}
BAR = 30
"""Characters of a bar between nothing and the limit."""
CLOSING = (
    "This review rests on the data entered. What it doesn't caution against is not thereby harmless. "
    "Local codes and a licensed or qualified person decide."
)


def render(review: Review, width: int = 80, *, color: bool = False) -> str:
    """The whole review as text. Wide unbroken words are folded, nothing is left out."""
    out = Lines(width)
    _head(out, review)
    _attention(out, review)
    _within(out, review)
    _faults(out, review)
    _circuit(out, review)
    _cautions(out, review)
    _checklist(out, review)
    _notes(out, review)
    out.add()
    out.add(CLOSING, hang=0, tone="quiet")
    return out.text(color=color)


def render_all(reviews: Sequence[Review], width: int = 80, *, color: bool = False) -> str:
    """Reviews one after the other; of several, a summary at the end, where a terminal stands still."""
    texts = [render(review, width, color=color) for review in reviews]
    if len(reviews) > 1:
        texts.append(summary(reviews, width, color=color))
    return "\n".join(texts)


def _head(out: Lines, review: Review) -> None:
    design = review.design
    revision = f", revision {design.revision}" if design.revision else ""
    out.add(f"{design.title}{revision}", tone="head")
    out.add(f"{design.file}   derating {review.derating.name}   stresscheck {review.version}", tone="quiet")
    out.add()
    out.add(ANSWER[review.verdict], hang=12, tone="head" if review.verdict == "ready" else "grave")
    counts = ", ".join(f"{number} {word}" for word, number in review.counts if number)
    out.add(f"findings    {counts or 'none'}", hang=12)
    worst = figures.closest(review.findings)
    if worst is not None:
        reached = figures.stress(worst.worst, worst.unit)
        out.add(
            f"worst       {worst.id}: {reached} against {figures.limit_in_words(worst)}, {figures.room(worst)}", hang=12
        )
        if worst.reason:
            out.add(f"because     {worst.reason}", hang=12)
        if worst.at is not None:
            out.add(f"where       {where(worst).removeprefix('at ')}", hang=12)
    no_answer = [f for f in review.findings if f.verdict in ("no-rating", "not-checked") and not f.accepted]
    if no_answer:
        more = f" (and {len(no_answer) - 1} more)" if len(no_answer) > 1 else ""
        out.add(f"no answer   {no_answer[0].id}: {no_answer[0].why}{more}", hang=12)
    if review.cautions:
        out.add(f"cautions    {len(review.cautions)}, listed below", hang=12)


def _attention(out: Lines, review: Review) -> None:
    order = ("above-rating", "above-derated", "unproved", "no-rating", "not-checked")
    for verdict in order:
        found = [f for f in review.findings if f.verdict == verdict and not f.accepted]
        found.sort(key=lambda f: -(figures.share(f) or 0.0))
        if found:
            out.add()
            out.add(f"{verdict} ({len(found)})", tone="open")
        beside = {event.id for event in found for steady in found if figures.adds_nothing(event, steady)}
        for finding in found:
            if finding.id in beside:
                continue
            if verdict != "not-checked" or finding.worst is not None:
                _in_full(out, finding)
                _beside(out, [e for e in found if e.id in beside and figures.adds_nothing(e, finding)])
        if verdict == "not-checked":
            _grouped(out, [f for f in found if f.worst is None])
    accepted = [f for f in review.findings if f.accepted]
    if accepted:
        out.add()
        out.add(f"accepted ({len(accepted)}), not counted", tone="open")
        for finding in accepted:
            _in_full(out, finding)


def _beside(out: Lines, events: list[Finding]) -> None:
    """Events that only come up to the steady figure: one line each, under it."""
    for event in events:
        worst = figures.stress(event.worst, event.unit)
        out.add(f"{event.id}: worst {worst}; {_figures(event)}", indent=4, hang=2)


def _grouped(out: Lines, found: list[Finding]) -> None:
    """Findings without a figure and with the same reason together: one missing thing is told once."""
    reasons: dict[str, list[str]] = {}
    for finding in found:
        limit = f", limit {figures.limit_in_words(finding)}" if finding.allowed is not None else ""
        reasons.setdefault(finding.why, []).append(finding.id + limit)
    for why, ids in reasons.items():
        out.add(f"{', '.join(ids)}: {why}", indent=2, hang=2)


def _in_full(out: Lines, finding: Finding) -> None:
    out.add(f"{finding.id}, {finding.verdict}" if finding.accepted else finding.id, indent=2, tone="head")
    if finding.worst is not None:
        share = f"   {figures.room(finding)}" if finding.ratio is not None else ""
        out.add(
            f"worst {figures.stress(finding.worst, finding.unit)} against {figures.limit_in_words(finding)}{share}",
            indent=4,
        )
        if finding.ratio is not None:
            out.fixed("    " + bar(finding))
        out.add(_figures(finding), indent=4)
        out.add(where(finding), indent=4)
    if finding.reason:
        out.add(f"because: {finding.reason}", indent=4)
    short = figures.corners_fall_short(finding)
    if short:
        out.add(short, indent=4)
    if finding.why:
        out.add(f"why: {finding.why}", indent=4)
    for remark in finding.remarks:
        out.add(remark, indent=4)


def _figures(finding: Finding) -> str:
    nominal = figures.plain(finding.nominal, finding.unit)
    bound = figures.stress(finding.bound, finding.unit)
    proved = f"no point of the box above {bound}" if finding.bound is not None else "no bound proved"
    return proved if finding.nominal is None else f"nominal {nominal}; {proved}"


def where(finding: Finding) -> str:
    """The point of the worst case: values of the elements and the drives' frequencies."""
    if finding.at is None:
        return ""
    shown = [
        figures.place_value(path, value)
        for path, value in finding.at.values
        if path.split(".")[-1] in ("value", "factor", "frequency")
    ]
    return "at " + ", ".join(shown)


def bar(finding: Finding, size: int = BAR) -> str:
    """Stress against limit: # up to the worst found, + on to the bound, | the limit, > what lies beyond it."""
    worst = max(0.0, figures.share(finding) or 0.0)
    bound = max(worst, figures.share_of_bound(finding) or 0.0)
    filled = min(size, round(worst * size))
    reached = min(size, max(filled, round(min(bound, 1e6) * size)))
    inside = "#" * filled + "+" * (reached - filled) + "." * (size - reached)
    beyond = ">" * min(12, max(1, round((worst - 1.0) * size))) if worst > 1.0 else ""
    return f"{inside}|{beyond}"


def _within(out: Lines, review: Review) -> None:
    found = [f for f in review.findings if f.verdict == "within" and not f.accepted]
    if not found:
        return
    out.add()
    out.add(f"within ({len(found)}); bars: # worst found, + bound, | limit", tone="open")
    for state, event in dict.fromkeys((f.state, f.event) for f in found):
        mine = [f for f in found if (f.state, f.event) == (state, event)]
        full = ", full ratings" if mine[0].state_kind == "fault" else ""
        moment = "" if event == "steady" else f", {event}"
        out.add(f"state {state}{moment}{full}", indent=2, tone="head")
        for finding in mine:
            _compact(out, finding)
        _remarks(out, mine)


def _faults(out: Lines, review: Review) -> None:
    if not review.single_faults:
        return
    out.add()
    out.add(f"single faults ({len(review.single_faults)})", tone="open")
    out.add(INTRODUCTION, indent=2, tone="quiet")
    for fault in review.single_faults:
        out.add(fault_line(fault), indent=2, hang=2)


def _compact(out: Lines, finding: Finding) -> None:
    name = f"{finding.part} {finding.quantity}"
    left = f"    {name:<28}"
    worst = figures.stress(finding.worst, finding.unit)
    allowed = figures.limit(finding.allowed, finding.unit)
    row = f"{left}{worst:>10} of {allowed:<10} {bar(finding, 10)} {figures.room(finding):>8}"
    if len(row) <= out.width:
        out.fixed(row)
    else:
        out.add(f"{name}: {worst} of {allowed}, {figures.room(finding)}", indent=4)
    bound = figures.stress(finding.bound, finding.unit)
    notes = [f"bound {bound}"]
    if finding.nominal is not None:
        notes = [f"nominal {figures.plain(finding.nominal, finding.unit)}, bound {bound}"]
    short = figures.corners_fall_short(finding)
    out.add("; ".join([*notes, short] if short else notes), indent=6, tone="quiet")


def _remarks(out: Lines, found: list[Finding]) -> None:
    """Remarks on findings of a state, each distinct one told once."""
    told: dict[str, list[str]] = {}
    for finding in found:
        for remark in finding.remarks:
            told.setdefault(remark, []).append(f"{finding.part} {finding.quantity}")
    for remark, names in told.items():
        out.add(f"{', '.join(names)}: {remark}", indent=4, tone="quiet")


def _circuit(out: Lines, review: Review) -> None:
    if review.resonances:
        out.add()
        out.add("resonances, every value nominal", tone="open")
    for r in review.resonances:
        q = "no loss" if r.q is None else f"Q {r.q:.4g}, bandwidth {figures.plain(r.bandwidth_hertz, 'Hz')}"
        ring = "" if r.ring_time_s is None else f", rings for {figures.plain(r.ring_time_s, 's')}"
        energy = ", ".join(f"{part} {100 * share:.0f} %" for part, share in r.energy if share >= 0.005)
        out.add(f"{r.state}: {figures.plain(r.hertz, 'Hz')}, {q}{ring}; energy in {energy}", indent=2)
    if review.drives:
        out.add()
        out.add("drives, every value nominal", tone="open")
    for d in review.drives:
        lag = abs(d.phase_degrees)
        side = (
            "in phase"
            if d.side == "in phase"
            else f"current {'lags' if d.side == 'inductive' else 'leads'} {lag:.1f} deg"
        )
        out.add(
            f"{d.state}: {d.drive} at {figures.plain(d.hertz, 'Hz')} gives {figures.plain(d.volt_peak, 'V')} peak, "
            f"{figures.plain(d.ampere_peak, 'A')} peak; {figures.plain(d.real_watt, 'W')} real, "
            f"{figures.plain(d.reactive_var, 'var')} reactive, {figures.plain(d.apparent_va, 'VA')} apparent; {side}",
            indent=2,
        )


def _cautions(out: Lines, review: Review) -> None:
    if not review.cautions:
        return
    out.add()
    out.add(f"cautions ({len(review.cautions)}), most severe first", tone="open")
    for caution in review.cautions:
        out.add(caution.id, indent=2, tone="head")
        out.add(caution.text, indent=4, hang=0)


def _checklist(out: Lines, review: Review) -> None:
    if not review.checklist:
        return
    out.add()
    out.add("before it is powered", tone="open")
    for line in review.checklist:
        out.add(f"( ) {line.text}: {line.because}", indent=2, hang=4)


def _notes(out: Lines, review: Review) -> None:
    out.add()
    out.add("taken for granted", tone="open")
    for text in (*review.assumptions, *review.problems):
        out.add(f"- {text}", indent=2)
    for item in review.accepted:
        counts = "counts" if item.counts else "does not count: its date has passed, or there is no such finding"
        out.add(f"- {item.finding} accepted by {item.by} until {item.until}, {item.reason} ({counts})", indent=2)
    out.add()
    out.add("sources", tone="open")
    d = review.derating
    out.add(f"- derating: {d.title}, {d.edition} (evidence: {d.evidence}); {d.source}", indent=2)
    for text in dict.fromkeys(f.rating_source for f in review.findings if f.rating_source):
        out.add(f"- ratings: {text}", indent=2)
    for text in dict.fromkeys(f.derating_source for f in review.findings if f.derating_source):
        out.add(f"- {text}", indent=2)
    for text in dict.fromkeys(c.source for c in review.cautions):
        out.add(f"- cautions: {text}", indent=2)
    out.add(f"- design file sha256 {review.design.sha256}", indent=2)

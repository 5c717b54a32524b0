"""The review as Markdown: the same content, for documents and merge requests. Free text comes out harmless."""

from __future__ import annotations

from collections.abc import Iterable

from stresscheck.findings.finding import Finding
from stresscheck.report import figures
from stresscheck.report.fault_lines import INTRODUCTION, fault_line
from stresscheck.report.lines import clean
from stresscheck.report.record import Review
from stresscheck.report.terminal_format import CLOSING, where

_SPECIAL = "\\`*_{}[]<>|~&#"


def render(review: Review) -> str:
    """The whole review."""
    parts = [
        *_head(review), *_findings(review), *_faults(review), *_working(review), *_circuit(review), *_cautions(review),
        *_checklist(review), *_notes(review), "", text(CLOSING), "",
    ]  # fmt: skip
    return "\n".join(parts)


def text(raw: str) -> str:
    """Free text with every character that Markdown or HTML could take as markup escaped."""
    return "".join("\\" + c if c in _SPECIAL else c for c in clean(raw))


def _row(cells: Iterable[str]) -> str:
    return "| " + " | ".join(cells) + " |"


def _head(review: Review) -> list[str]:
    design = review.design
    revision = f", revision {text(design.revision)}" if design.revision else ""
    counts = ", ".join(f"{number} {word}" for word, number in review.counts if number)
    return [
        f"# {text(design.title)}{revision}", "", f"**Verdict: {review.verdict}** ({counts or 'no findings'})", "",
        f"File {text(design.file)}, sha256 {design.sha256}; derating {text(review.derating.name)}; "
        f"stresscheck {review.version}", "",
    ]  # fmt: skip


def _findings(review: Review) -> list[str]:
    out = ["## Findings", "", _row(["finding", "verdict", "nominal", "worst", "bound", "limit", "of limit"])]
    out.append(_row(["---"] * 7))
    for f in review.findings:
        mark = f"{f.verdict} (accepted)" if f.accepted else f.verdict
        out.append(_row([
            text(f.id), mark, figures.plain(f.nominal, f.unit), figures.stress(f.worst, f.unit),
            figures.stress(f.bound, f.unit), text(figures.limit_in_words(f)), figures.room(f),
        ]))  # fmt: skip
    out.append("")
    for f in review.findings:
        notes = [note for note in (f.why, figures.corners_fall_short(f), *f.remarks) if note]
        if f.verdict != "within" or notes:
            because = [f"because: {f.reason}"] if f.reason else []
            told = "; ".join(text(note) for note in (*notes, *because, where(f)) if note)
            out.append(f"- **{text(f.id)}** {f.verdict}: {told or 'see the table'}")
    return [*out, ""]


def _faults(review: Review) -> list[str]:
    if not review.single_faults:
        return []
    return ["## Single faults", "", INTRODUCTION, "", *(f"- {text(fault_line(f))}" for f in review.single_faults), ""]


def _working(review: Review) -> list[str]:
    out = ["## Working", ""]
    for f in review.findings:
        out += [f"### {text(f.id)}", ""]
        out += [_step(f, index) for index in range(len(f.working))] or ["No working: the check could not be made."]
        if f.at is not None:
            out.append(f"- {text(where(f))}")
        if f.proof is not None:
            boxes = "1 box" if f.proof.boxes == 1 else f"{f.proof.boxes} boxes"
            out.append(f"- proof: {text(f.proof.method)}; {boxes}")
        out.append("")
    return out


def _step(finding: Finding, index: int) -> str:
    step = finding.working[index]
    return (
        f"- {text(step.symbol)} = {text(step.formula)}: {text(step.numbers)} = {step.value:.7g} {text(step.unit)} "
        f"({text(step.source)})"
    )


def _circuit(review: Review) -> list[str]:
    out = [
        "## Resonances",
        "",
        _row(["state", "frequency", "Q", "bandwidth", "ring time", "energy"]),
        _row(["---"] * 6),
    ]
    for r in review.resonances:
        energy = ", ".join(f"{text(part)} {100 * share:.0f} %" for part, share in r.energy)
        q = "no loss" if r.q is None else f"{r.q:.4g}"
        out.append(_row([
            text(r.state), figures.plain(r.hertz, "Hz"), q, figures.plain(r.bandwidth_hertz, "Hz"),
            figures.plain(r.ring_time_s, "s"), energy,
        ]))  # fmt: skip
    columns = ["state", "drive", "frequency", "voltage peak", "current peak"]
    columns += ["real", "reactive", "apparent", "phase of current", "side"]
    out += ["", "## Drives", "", _row(columns), _row(["---"] * len(columns))]
    for d in review.drives:
        out.append(_row([
            text(d.state), text(d.drive), figures.plain(d.hertz, "Hz"), figures.plain(d.volt_peak, "V"),
            figures.plain(d.ampere_peak, "A"), figures.plain(d.real_watt, "W"), figures.plain(d.reactive_var, "var"),
            figures.plain(d.apparent_va, "VA"), f"{-d.phase_degrees:.2f} deg", d.side,
        ]))  # fmt: skip
    return [*out, ""]


def _cautions(review: Review) -> list[str]:
    out = ["## Cautions", ""]
    out += [
        f"- **{text(c.id)}**: {text(c.text)} (source: {text(c.source)}; evidence: {c.evidence})"
        for c in review.cautions
    ]
    return [*out, "" if review.cautions else "None was triggered by the data entered.", ""]


def _checklist(review: Review) -> list[str]:
    if not review.checklist:
        return []
    return ["## Before it is powered", "", *(f"- {text(c.text)}: {text(c.because)}" for c in review.checklist), ""]


def _notes(review: Review) -> list[str]:
    out = ["## Taken for granted", ""]
    out += [f"- {text(line)}" for line in (*review.assumptions, *review.problems)]
    for item in review.accepted:
        counts = "counts" if item.counts else "does not count"
        out.append(
            f"- {text(item.finding)} accepted by {text(item.by)} until {item.until}: {text(item.reason)} ({counts})"
        )
    d = review.derating
    out += [
        "",
        "## Sources",
        "",
        f"- derating: {text(d.title)}, {text(d.edition)} ({text(d.evidence)}); {text(d.source)}",
    ]
    out += [f"- {text(line)}" for line in dict.fromkeys(f.rating_source for f in review.findings if f.rating_source)]
    out += [
        f"- {text(line)}" for line in dict.fromkeys(f.derating_source for f in review.findings if f.derating_source)
    ]
    return out

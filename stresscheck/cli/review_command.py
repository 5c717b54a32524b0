"""`stresscheck review`."""

from __future__ import annotations

import datetime
import sys
import time
from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING, Annotated, Any

import typer

from stresscheck.cli.interrupt import Interrupt
from stresscheck.report.formats import FORMATS, render_all

if TYPE_CHECKING:
    from stresscheck.design.model import Design
    from stresscheck.errors import Problem
    from stresscheck.report.record import Review

EXIT_OF = {"ready": 0, "exceeded": 1, "unanswered": 3}
WORST_FIRST = (1, 3, 0)
"""Of several files the first of these that any gave is the exit code; files that can't be used end with 2 at once."""
FORMS = f"One of {', '.join(FORMATS)}."


def complete_format(incomplete: str) -> list[str]:
    """Formats that begin so, for the completion of a shell."""
    return [name for name in FORMATS if name.startswith(incomplete)]


def complete_policy(incomplete: str) -> list[str]:
    """Names of shipped policies that begin so, for the completion of a shell."""
    from stresscheck.shipped import ratings_dir

    return [
        file.stem for file in sorted((ratings_dir() / "policies").glob("*.toml")) if file.stem.startswith(incomplete)
    ]


Files = Annotated[list[Path], typer.Argument(metavar="FILE", help="Design files (TOML).", show_default=False)]
Form = Annotated[str, typer.Option("--format", metavar="FORMAT", help=FORMS, autocompletion=complete_format)]
Output = Annotated[Path | None, typer.Option(metavar="FILE", help="Write here instead of standard output.")]
Derating = Annotated[
    str | None,
    typer.Option(metavar="POLICY", help="Another derating policy: a name or a file.", autocompletion=complete_policy),
]
States = Annotated[list[str] | None, typer.Option(metavar="STATE", help="Only this state; may be given several times.")]
Gap = Annotated[str, typer.Option(metavar="PERCENT", help="How far a proved bound may stay above the worst found.")]
Budget = Annotated[str, typer.Option(metavar="TIME", help="Time for searching and proving, per file.")]
Explain = Annotated[str | None, typer.Option(metavar="ID", help="Show the working of one finding.")]
SingleFaults = Annotated[
    bool, typer.Option("--single-faults", help="Also open and short every part in turn; changes no verdict.")
]
Today = Annotated[
    str | None, typer.Option(metavar="DATE", help="Date against which accepted findings expire; the day's without it.")
]


def review(
    files: Files,
    form: Form = "terminal",
    output: Output = None,
    derating: Derating = None,
    state: States = None,
    gap: Gap = "5 %",
    budget: Budget = "10 s",
    explain: Explain = None,
    today: Today = None,
    single_faults: SingleFaults = False,
) -> None:
    """Review design files: find and prove worst stresses, compare them with derated ratings, list cautions.

    Examples:

      stresscheck review tank.toml

      stresscheck review tank.toml --format json --output tank.json

      stresscheck review tank.toml --explain Ctank.voltage_peak@normal

    The exit code says what came out: 0 ready, 1 something is above its limit, 3 something is unanswered, 2 the input
    can't be used (then nothing is written). Ctrl-C ends the search; what isn't proved by then is "unproved".
    """
    from stresscheck.cli.inputs import load_all
    from stresscheck.cli.output import check_target, style, write
    from stresscheck.errors import InputError

    options, mistakes = _options(form, gap, budget, today, explain)
    options["every_fault"] = single_faults
    designs, problems = load_all(files, derating, state)
    try:
        check_target(output, files)
    except InputError as error:
        mistakes.extend(error.problems)
    if mistakes or problems:
        raise InputError([*mistakes, *problems])
    with Interrupt() as stop:
        reviews = [
            _one(design, derating, state, options, stop.asked, f"{design.file}: " if len(designs) > 1 else "")
            for design in designs
        ]
    columns, tones = style(output)
    if explain is None:
        write(render_all(form, reviews, width=columns, color=tones), output)
    else:
        write(_explained(reviews, explain, columns, tones), output)
    codes = {EXIT_OF[r.verdict] for r in reviews}
    raise typer.Exit(next(code for code in WORST_FIRST if code in codes))


def _options(
    form: str, gap: str, budget: str, today: str | None, explain: str | None
) -> tuple[dict[str, Any], list[Problem]]:
    """Options as figures, and every wrong one as a problem of the command line."""
    from stresscheck.cli.inputs import not_known, wrong
    from stresscheck.units import UnitError, Wanted, parse

    problems: list[Problem] = []
    found: dict[str, Any] = {"today": None}
    if form not in FORMATS:
        problems.append(not_known("command line", "--format", form, FORMATS, "bad-command"))
    elif explain is not None and form != "terminal":
        problems.append(wrong("--explain", f"--format {form}", "--format terminal", "leave one of the two out"))
    for name, text, wanted in (
        ("gap", gap, Wanted("a gap", "%", 1e-6, 10.0, "5 %")),
        ("budget", budget, Wanted("a time", "s", 0.001, 1e6, "10 s")),
    ):
        try:
            found[name] = parse(text, wanted)
        except UnitError as error:
            problems.append(wrong(f"--{name}", text, error.expected, error.repair))
    if today is not None:
        try:
            found["today"] = datetime.date.fromisoformat(today)
        except ValueError:
            problems.append(wrong("--today", today, "a date such as 2027-03-01", "write year-month-day"))
    return found, problems


def _one(
    design: Design,
    derating: str | None,
    states: list[str] | None,
    options: dict[str, Any],
    interrupted: Callable[[], bool],
    label: str,
) -> Review:
    from stresscheck.chain import review as review_design

    start = time.monotonic()

    def progress(text: str, share: float) -> None:
        if sys.stderr.isatty() and time.monotonic() - start > 1.0:
            print(f"{label}{text}, {100 * share:.0f} % done", file=sys.stderr)

    return review_design(
        design, derating=derating, states=states, progress=progress, interrupted=interrupted, **options
    )


def _explained(reviews: list[Review], finding: str, columns: int, tones: bool) -> str:
    from stresscheck.cli.inputs import not_known
    from stresscheck.errors import InputError
    from stresscheck.report.explain_format import explain

    parts = []
    known: list[str] = []
    for r in reviews:
        ids = [f.id for f in r.findings]
        if finding in ids:
            parts.append(explain(r, finding, columns, color=tones))
        known.extend(ids)
    if not parts:
        raise InputError([not_known("command line", "--explain", finding, dict.fromkeys(known))])
    return "\n".join(parts)

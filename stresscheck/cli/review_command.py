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
) -> None:
    """Review design files: find and prove worst stresses, compare them with derated ratings, list cautions.

    Examples:

      stresscheck review tank.toml

      stresscheck review tank.toml --format json --output tank.json

      stresscheck review tank.toml --explain Ctank.voltage_peak@normal

    The exit code says what came out: 0 ready, 1 something is above its limit, 3 something is unanswered, 2 the input
    can't be used (then nothing is written). Ctrl-C ends the search; what isn't proved by then is "unproved".
    """
    from stresscheck.cli.output import check_target, style, write

    options = _options(form, gap, budget, today)
    check_target(output, files)
    designs = _load(files, derating)
    with Interrupt() as stop:
        reviews = [
            _one(design, derating, state, options, stop.asked, f"{design.file}: " if len(designs) > 1 else "")
            for design in designs
        ]
    columns, tones = style(output)
    text = _explained(reviews, explain, columns, tones) if explain else ""
    write(text or render_all(form, reviews, width=columns, color=tones), output)
    codes = {EXIT_OF[r.verdict] for r in reviews}
    raise typer.Exit(next(code for code in WORST_FIRST if code in codes))


def _options(form: str, gap: str, budget: str, today: str | None) -> dict[str, Any]:
    """Options as figures; every wrong one is a problem of the command line."""
    from stresscheck.errors import InputError, Problem
    from stresscheck.units import UnitError, Wanted, parse

    problems: list[Problem] = []
    found: dict[str, Any] = {}
    if form not in FORMATS:
        known = ", ".join(FORMATS)
        problems.append(
            Problem("bad-command", "command line", None, "--format", form, f"one of {known}", "name one of these")
        )
    for name, text, wanted in (
        ("gap", gap, Wanted("a gap", "%", 1e-6, 10.0, "5 %")),
        ("budget", budget, Wanted("a time", "s", 0.001, 1e6, "10 s")),
    ):
        try:
            found[name] = parse(text, wanted)
        except UnitError as error:
            problems.append(
                Problem("bad-command", "command line", None, f"--{name}", text, error.expected, error.repair)
            )
    try:
        found["today"] = None if today is None else datetime.date.fromisoformat(today)
    except ValueError:
        problems.append(
            Problem(
                "bad-command",
                "command line",
                None,
                "--today",
                str(today),
                "a date such as 2027-03-01",
                "write year-month-day",
            )
        )
    if problems:
        raise InputError(problems)
    return found


def _load(files: list[Path], derating: str | None) -> list[Design]:
    """All designs, or every problem of all files and of the policies that they name."""
    from stresscheck.design.load import load_design
    from stresscheck.errors import InputError
    from stresscheck.limits.policy import load_policy

    designs: list[Design] = []
    problems: list[Problem] = []
    for file in files:
        try:
            design = load_design(file)
            load_policy(derating or design.derating, design.folder)
            designs.append(design)
        except InputError as error:
            problems.extend(error.problems)
    if problems:
        raise InputError(problems)
    return designs


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
    from stresscheck.errors import InputError, Problem
    from stresscheck.report.explain_format import explain

    parts = []
    known: list[str] = []
    for r in reviews:
        try:
            parts.append(explain(r, finding, columns, color=tones))
        except KeyError as error:
            known.append(str(error.args[0]))
    if not parts:
        raise InputError(
            [
                Problem(
                    "unknown-name",
                    "command line",
                    None,
                    "--explain",
                    finding,
                    "one of " + "; ".join(known),
                    "name one of these",
                )
            ]
        )
    return "\n".join(parts)

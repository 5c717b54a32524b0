"""`stresscheck review`."""

from __future__ import annotations

import datetime
import signal
import sys
import time
from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING, Annotated, Any

import typer

if TYPE_CHECKING:
    from stresscheck.design.model import Design
    from stresscheck.errors import Problem
    from stresscheck.report.record import Review

EXIT_OF = {"ready": 0, "exceeded": 1, "unanswered": 3}
WORST_FIRST = (1, 3, 0)
"""Of several files the first of these that any gave is the exit code; files that can't be used end with 2 at once."""


def review(
    files: Annotated[list[Path], typer.Argument(metavar="FILE...", help="Design files (TOML).", show_default=False)],
    form: Annotated[str, typer.Option("--format", help="terminal, json or markdown.")] = "terminal",
    output: Annotated[Path | None, typer.Option(help="Write here instead of standard output.")] = None,
    derating: Annotated[str | None, typer.Option(help="Another derating policy: a name or a file.")] = None,
    state: Annotated[list[str] | None, typer.Option(help="Only this state; may be given several times.")] = None,
    gap: Annotated[str, typer.Option(help="How far a proved bound may stay above the worst found.")] = "5 %",
    budget: Annotated[str, typer.Option(help="Time for searching and proving, per file.")] = "10 s",
    explain: Annotated[str | None, typer.Option(metavar="ID", help="Show the working of one finding.")] = None,
    today: Annotated[str | None, typer.Option(help="Date against which accepted findings expire.")] = None,
) -> None:
    """Review design files: find and prove worst stresses, compare them with derated ratings, list cautions.

    Examples:

      stresscheck review tank.toml

      stresscheck review tank.toml --format json --output tank.json

      stresscheck review tank.toml --explain Ctank.voltage_peak@normal

    The exit code says what came out: 0 ready, 1 something is above its limit, 3 something is unanswered, 2 the input
    can't be used (then nothing is written). Ctrl-C ends the search; what isn't proved by then is "unproved".
    """
    from stresscheck.cli.output import write

    options = _options(form, gap, budget, today)
    designs = _load(files, derating)
    stop = _Interrupt()
    reviews = [
        _one(design, derating, state, options, stop.asked, f"{design.file}: " if len(designs) > 1 else "")
        for design in designs
    ]
    text = _explained(reviews, explain) if explain else _text(reviews, form, many=len(files) > 1)
    write(text, output)
    codes = {EXIT_OF[r.verdict] for r in reviews}
    raise typer.Exit(next(code for code in WORST_FIRST if code in codes))


def _options(form: str, gap: str, budget: str, today: str | None) -> dict[str, Any]:
    """Options as figures; every wrong one is a problem of the command line."""
    from stresscheck.errors import InputError, Problem
    from stresscheck.report.formats import FORMATS
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


class _Interrupt:
    """The first Ctrl-C ends the search and lets the report be written; the second ends the program."""

    def __init__(self) -> None:
        self.seen = False
        self.start = self.told = time.monotonic()
        signal.signal(signal.SIGINT, self._first)

    def _first(self, number: int, frame: object) -> None:
        self.seen = True
        signal.signal(signal.SIGINT, signal.default_int_handler)
        print("ending the search; once more to end without a report", file=sys.stderr)

    def asked(self) -> bool:
        """Whether to end; called all the time while searching, so it also tells a waiting person that work goes on."""
        now = time.monotonic()
        if now - self.told > 1.0 and sys.stderr.isatty():
            self.told = now
            print(f"searching and proving, {now - self.start:.0f} s", file=sys.stderr)
        return self.seen


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


def _text(reviews: list[Review], form: str, *, many: bool) -> str:
    from stresscheck.cli.output import color, width
    from stresscheck.report.formats import renderer

    if form == "json":
        from stresscheck.report.json_format import as_data, dump

        return dump([as_data(r) for r in reviews] if many else as_data(reviews[0]))
    if form != "terminal":
        return "\n".join(renderer(form)(r) for r in reviews)
    from stresscheck.report import terminal_format
    from stresscheck.report.summary import summary

    parts = [terminal_format.render(r, width(), color=color()) for r in reviews]
    if many:
        parts.append(summary(reviews, width(), color=color()))
    return "\n".join(parts)


def _explained(reviews: list[Review], finding: str) -> str:
    from stresscheck.cli.output import color, width
    from stresscheck.errors import InputError, Problem
    from stresscheck.report.explain_format import explain

    parts = []
    known: list[str] = []
    for r in reviews:
        try:
            parts.append(explain(r, finding, width(), color=color()))
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

"""The command and its sub-commands, by name. Imports nothing heavy: `--help` must answer at once."""

from __future__ import annotations

import sys
from collections.abc import Callable
from typing import TYPE_CHECKING

import typer

from stresscheck.cli.library_command import library
from stresscheck.cli.resonances_command import resonances
from stresscheck.cli.review_command import review
from stresscheck.cli.schema_command import schema
from stresscheck.cli.start_command import start

if TYPE_CHECKING:
    from stresscheck.errors import InputError

ABOUT = """Find and prove the worst voltage, current and heat of every part of a high-Q circuit.

A design file (TOML) says the circuit, the site, the ratings and the states. `stresscheck start tank.toml` writes one to
begin with; `stresscheck review tank.toml` reviews it.

Exit codes: 0 ready, 1 something is above its limit, 2 the input can't be used, 3 something is unanswered,
70 internal error, 130 interrupted, 141 broken pipe.
"""

COMMANDS: dict[str, tuple[Callable[..., None], str]] = {
    "review": (review, "Review design files: is it ready, what is worst, why, where."),
    "resonances": (resonances, "Show natural modes with Q, bandwidth and stored energy."),
    "library": (library, "Show what ships: policies, parts, thresholds, families."),
    "schema": (schema, "Print the JSON Schema of the design file, for editors."),
    "start": (start, "Write a commented design file to begin with."),
}
"""Name → (what it calls, one line for the list of commands; longer ones would be cut at 80 columns)."""


def main(
    version: bool = typer.Option(False, "--version", help="Show the version and exit.", is_eager=True),
) -> None:
    """Answer --version before any sub-command is looked at."""
    if version:
        from stresscheck import __version__

        print(f"stresscheck {__version__}")
        raise typer.Exit(0)


main.__doc__ = ABOUT


def program(*, bare: bool = False) -> typer.Typer:
    """The command with its sub-commands; `bare` leaves out its own --help and those that set up a shell's completion.

    A command line that begins with a sub-command can't reach them; typer would read them all the same and import
    pydantic for it, which doubles the time of a sub-command's --help.
    """
    made = typer.Typer(
        name="stresscheck",
        help=ABOUT,
        no_args_is_help=True,
        add_completion=not bare,
        rich_markup_mode=None,
        pretty_exceptions_enable=False,
    )
    made.callback(add_help_option=not bare)(main)
    for name, (command, line) in COMMANDS.items():
        made.command(name, short_help=line)(command)
    return made


app = program()


def call(arguments: list[str]) -> int:
    """Exit code of one call of the command."""
    from stresscheck.cli import EXIT_INTERRUPTED, EXIT_PIPE, EXIT_UNUSABLE
    from stresscheck.errors import InputError

    called = program(bare=True) if arguments and arguments[0] in COMMANDS else app
    try:
        code = called(arguments, standalone_mode=False, prog_name="stresscheck")
    except InputError as error:
        tell(error, "reviewed" if arguments[:1] == ["review"] else "written")
        return EXIT_UNUSABLE
    except typer.Abort:
        return EXIT_INTERRUPTED
    except SystemExit as end:
        # Completion ends that way with 0; a pipe closed by its reader with 1, which would read as a finding.
        return EXIT_PIPE if end.code == 1 else int(end.code or 0)
    except Exception as error:
        # A misspelt command line knows how to show itself; anything else is an internal error.
        show = getattr(error, "show", None)
        if show is None:
            raise
        show()
        return EXIT_UNUSABLE
    return int(code or 0)


def tell(error: InputError, undone: str) -> None:
    """Every problem of an input on standard error, one block each; what was read is shown without control characters.

    Free text of a file ends up here before anything has vouched for it. undone: what was not done because of them.
    """
    from stresscheck.report.plain_text import harmless

    count = len(error.problems)
    print(f"{count} problem{'s' if count != 1 else ''}; nothing was {undone}", file=sys.stderr)
    for problem in error.problems:
        place = problem.file if problem.line is None else f"{problem.file}:{problem.line}"
        print(harmless(f"\n{place}  {problem.key}".rstrip(), keep="\n"), file=sys.stderr)
        for name, text in (("found", problem.found), ("expected", problem.expected)):
            print(harmless(f"  {name:<9} {text}"), file=sys.stderr)
        print(harmless(f"  repair    {problem.repair}  [{problem.code}]"), file=sys.stderr)

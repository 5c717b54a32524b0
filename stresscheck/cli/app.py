"""The command and its sub-commands, by name. Imports nothing heavy: `--help` must answer at once."""

from __future__ import annotations

import sys

import typer

from stresscheck.cli.library_command import library
from stresscheck.cli.resonances_command import resonances
from stresscheck.cli.review_command import review
from stresscheck.cli.schema_command import schema
from stresscheck.cli.start_command import start

ABOUT = """Find and prove the worst voltage, current and heat of every part of a high-Q circuit.

A design file (TOML) says the circuit, the site, the ratings and the states. `stresscheck start tank.toml` writes one to
begin with; `stresscheck review tank.toml` reviews it.

Exit codes: 0 ready, 1 something is above its limit, 2 the input can't be used, 3 something is unanswered,
70 internal error, 130 interrupted, 141 broken pipe.
"""

app = typer.Typer(
    name="stresscheck", help=ABOUT, no_args_is_help=True, rich_markup_mode=None, pretty_exceptions_enable=False
)
for command in (review, resonances, library, schema, start):
    app.command()(command)


@app.callback()
def main(
    version: bool = typer.Option(False, "--version", help="Show the version and exit.", is_eager=True),
) -> None:
    """Answer --version wherever it stands."""
    if version:
        from stresscheck import __version__

        print(f"stresscheck {__version__}")
        raise typer.Exit(0)


main.__doc__ = ABOUT


def call(arguments: list[str]) -> int:
    """Exit code of one call of the command."""
    from stresscheck.errors import InputError

    try:
        code = app(arguments, standalone_mode=True, prog_name="stresscheck")
    except SystemExit as end:
        return int(end.code) if isinstance(end.code, int) else 0
    except InputError as error:
        tell(error)
        return 2
    return int(code or 0)


def tell(error: Exception) -> None:
    """Every problem of an input on standard error, one block each."""
    from stresscheck.errors import InputError

    assert isinstance(error, InputError)
    count = len(error.problems)
    print(f"{count} problem{'s' if count != 1 else ''}; nothing was reviewed", file=sys.stderr)
    for problem in error.problems:
        place = problem.file if problem.line is None else f"{problem.file}:{problem.line}"
        print(f"\n{place}  {problem.key}".rstrip(), file=sys.stderr)
        print(f"  found     {problem.found}", file=sys.stderr)
        print(f"  expected  {problem.expected}", file=sys.stderr)
        print(f"  repair    {problem.repair}  [{problem.code}]", file=sys.stderr)

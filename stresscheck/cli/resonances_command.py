"""`stresscheck resonances`."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer


def resonances(
    file: Annotated[Path, typer.Argument(metavar="FILE", help="A design file (TOML).", show_default=False)],
    state: Annotated[
        list[str] | None, typer.Option(metavar="STATE", help="Only this state; may be given several times.")
    ] = None,
) -> None:
    """Show the natural modes of a design: frequency, Q, bandwidth, ring time, and which part stores the energy.

    Every value is nominal. Example: stresscheck resonances tank.toml
    """
    from stresscheck.chain import resonances_of
    from stresscheck.cli.inputs import load_all
    from stresscheck.cli.output import color, width, write
    from stresscheck.errors import InputError
    from stresscheck.report.modes_table import modes_table

    designs, problems = load_all([file], None, state, policies=False)
    if problems:
        raise InputError(problems)
    write(modes_table(resonances_of(designs[0], state), width(), color=color()), None)

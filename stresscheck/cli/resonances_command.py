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
    from stresscheck.cli.output import color, width, write
    from stresscheck.design.load import load_design
    from stresscheck.report.modes_table import modes_table

    found = resonances_of(load_design(file), state)
    write(modes_table(found, width(), color=color()), None)

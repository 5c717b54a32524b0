"""`stresscheck library`."""

from __future__ import annotations

from typing import Annotated

import typer

SHELVES = ("policies", "parts", "thresholds", "families")


def complete_shelf(incomplete: str) -> list[str]:
    """Shelves that begin so, for the completion of a shell."""
    return [shelf for shelf in SHELVES if shelf.startswith(incomplete)]


def library(
    shelf: Annotated[
        str | None, typer.Argument(metavar="SHELF", help=f"One of {', '.join(SHELVES)}.", autocompletion=complete_shelf)
    ] = None,
    name: Annotated[str | None, typer.Argument(metavar="NAME", help="One entry, with all its figures.")] = None,
) -> None:
    """Show what ships with the program: derating policies, demonstration parts, thresholds of cautions, families.

    Every figure names its document, edition, clause and evidence. Examples:

      stresscheck library policies

      stresscheck library policies src-severe
    """
    from stresscheck.cli.inputs import not_known
    from stresscheck.cli.output import color, width, write
    from stresscheck.errors import InputError
    from stresscheck.report.library_table import library_text

    wanted = SHELVES if shelf is None else (shelf,)
    if shelf is not None and shelf not in SHELVES:
        raise InputError([not_known("command line", "SHELF", shelf, SHELVES, "bad-command")])
    try:
        text = library_text(wanted, name, width(), color=color())
    except KeyError as error:
        if name is None:
            raise
        known = str(error.args[0]).split(", ")
        raise InputError([not_known("command line", shelf or "", str(name), known)]) from None
    write(text, None)

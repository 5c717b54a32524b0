"""`stresscheck start`."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer


def start(
    file: Annotated[Path | None, typer.Argument(metavar="FILE", help="Where to write it; left out: print it.")] = None,
) -> None:
    """Write a commented design file to begin with. It never overwrites a file.

    Example: stresscheck start tank.toml
    """
    from stresscheck.cli.output import write
    from stresscheck.design.starter import starter_text
    from stresscheck.errors import InputError, Problem

    if file is not None and file.exists():
        found = "a folder" if file.is_dir() else "a file that exists"
        raise InputError([Problem("bad-command", str(file), None, "", found, "a new file", "choose another name")])
    write(starter_text(), file, key="")
    if file is not None:
        print(f"wrote {file}; next: stresscheck review {file}")

"""`stresscheck schema`."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer


def schema(
    output: Annotated[Path | None, typer.Option(metavar="FILE", help="Write here instead of standard output.")] = None,
) -> None:
    """Print the JSON Schema of the design file, for editors that check TOML as you type.

    Example: stresscheck schema --output stresscheck-design.json, and as the first line of a design file:
    #:schema stresscheck-design.json
    """
    from stresscheck.cli.output import write
    from stresscheck.design.schema import design_schema
    from stresscheck.report.json_format import dump

    write(dump(design_schema()), output)

"""Where text goes: a terminal with its width, a pipe, or a file written whole or not at all."""

from __future__ import annotations

import os
import shutil
import sys
from pathlib import Path

PIPE_WIDTH = 80


def width() -> int:
    """Columns to write for: the terminal's, or 80 in a pipe."""
    if not sys.stdout.isatty():
        return PIPE_WIDTH
    return max(40, min(160, shutil.get_terminal_size((PIPE_WIDTH, 24)).columns))


def color() -> bool:
    """True where the terminal shows tones and nobody asked for none (NO_COLOR)."""
    return sys.stdout.isatty() and not os.environ.get("NO_COLOR") and os.environ.get("TERM") != "dumb"


def _to_stdout(text: str) -> None:
    """Write and flush here: what the reader of a pipe no longer takes ends the run with its own exit code."""
    from stresscheck.cli import EXIT_PIPE

    try:
        sys.stdout.write(text)
        sys.stdout.flush()
    except BrokenPipeError:
        # What is still in the buffer can't go anywhere: keep the interpreter from complaining about it.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        raise SystemExit(EXIT_PIPE) from None


def write(text: str, target: Path | None) -> None:
    """To standard output, or to a file that appears only when it is complete."""
    if target is None:
        _to_stdout(text)
        return
    from stresscheck.errors import InputError, Problem

    draft = target.with_name(f".{target.name}.{os.getpid()}.part")
    try:
        draft.write_text(text, encoding="utf-8")
        draft.replace(target)
    except OSError as error:
        draft.unlink(missing_ok=True)
        reason = error.strerror or "an error of the file system"
        raise InputError(
            [
                Problem(
                    "bad-command", str(target), None, "--output", reason, "a file that can be written", "check the path"
                )
            ]
        ) from None

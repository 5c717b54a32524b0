"""Where text goes: a terminal with its width, a pipe, or a file written whole or not at all."""

from __future__ import annotations

import os
import shutil
import sys
from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from stresscheck.errors import InputError

PIPE_WIDTH = 80


def width() -> int:
    """Columns to write for: the terminal's, or 80 in a pipe."""
    if not sys.stdout.isatty():
        return PIPE_WIDTH
    return max(40, min(160, shutil.get_terminal_size((PIPE_WIDTH, 24)).columns))


def style(target: Path | None) -> tuple[int, bool]:
    """Columns and whether tones are shown; a file gets neither the terminal's width nor its codes."""
    return (width(), color()) if target is None else (PIPE_WIDTH, False)


def color() -> bool:
    """True where the terminal shows tones and nobody asked for none (NO_COLOR)."""
    return sys.stdout.isatty() and not os.environ.get("NO_COLOR") and os.environ.get("TERM") != "dumb"


def forget_stdout() -> None:
    """What is still in the buffer can't go anywhere: keep the interpreter from trying and complaining at its end."""
    nowhere = os.open(os.devnull, os.O_WRONLY)
    os.dup2(nowhere, 1)
    os.close(nowhere)


def check_target(target: Path | None, inputs: Sequence[Path] = (), key: str = "--output") -> None:
    """Refuse, before any work is done, a file that can't be written or that is one of the inputs.

    key: the option that named it, for the message.
    """
    if target is None:
        return
    if not target.name or target.is_dir():
        raise _refused(target, "a folder", "a file", "name a file in it", key)
    if not target.parent.is_dir():
        raise _refused(target, f"no folder {target.parent}", "a folder that exists", "make the folder first", key)
    if any(target.exists() and file.exists() and target.samefile(file) for file in inputs):
        raise _refused(target, "the design file itself", "another file than the input", "choose another name", key)


def write(text: str, target: Path | None, key: str = "--output") -> None:
    """To standard output, or to a file that appears only when it is complete."""
    if target is None:
        _to_stdout(text)
        return
    check_target(target, key=key)
    draft = target.with_name(f".{target.name}.{os.getpid()}.part")
    # A pipe or a device is written into; put in its place, a finished file would end it for everybody.
    into = target if target.exists() and not target.is_file() else draft
    try:
        into.write_text(text, encoding="utf-8", errors="backslashreplace", newline="\n")
        if into is draft:
            draft.replace(target.resolve())
    except OSError as error:
        if into is draft:
            draft.unlink(missing_ok=True)
        reason = error.strerror or "an error of the file system"
        raise _refused(target, reason, "a file that can be written", "check the path", key) from None


def _to_stdout(text: str) -> None:
    """Write and flush here, so that what goes wrong with it has its own exit code."""
    try:
        sys.stdout.write(text)
        sys.stdout.flush()
    except BrokenPipeError:
        raise
    except OSError as error:
        forget_stdout()
        reason = error.strerror or "an error of the file system"
        raise _refused(None, reason, "an output that takes what is written", "make room, or use --output") from None


def _refused(target: Path | None, found: str, expected: str, repair: str, key: str = "") -> InputError:
    from stresscheck.errors import InputError, Problem

    file = "standard output" if target is None else str(target)
    return InputError([Problem("bad-command", file, None, key, found, expected, repair)])

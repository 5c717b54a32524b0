"""The registry of formats: each is a module with `render(review) -> str`, imported when it is used."""

from __future__ import annotations

from collections.abc import Callable
from importlib import import_module

from stresscheck.report.record import Review

FORMATS: dict[str, tuple[str, str]] = {
    "terminal": ("stresscheck.report.terminal_format", "people at a terminal"),
    "json": ("stresscheck.report.json_format", "programs; a contract"),
    "markdown": ("stresscheck.report.markdown_format", "documents and merge requests"),
}
"""Name → (module, what it is for)."""


def renderer(name: str) -> Callable[[Review], str]:
    """The `render` function of a format; KeyError for an unknown one."""
    found: Callable[[Review], str] = import_module(FORMATS[name][0]).render
    return found

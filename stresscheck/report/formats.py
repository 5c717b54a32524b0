"""The registry of formats: each is a module with `render(review) -> str`, imported when it is used.

A module may also have `render_all(reviews, width, color) -> str` for several reviews in one call, or for what a
terminal makes possible; without it the texts stand one after the other. This module imports nothing: `--help` reads it.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from importlib import import_module
from typing import TYPE_CHECKING

if TYPE_CHECKING:
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


def render_all(name: str, reviews: Sequence[Review], *, width: int = 80, color: bool = False) -> str:
    """Reviews of one call in a format; KeyError for an unknown one."""
    module = import_module(FORMATS[name][0])
    if hasattr(module, "render_all"):
        return str(module.render_all(reviews, width, color=color))
    return "\n".join(module.render(review) for review in reviews)

"""Finds and proves the worst voltage, current and heat of every part of a high-Q circuit."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

__version__ = "0.1.0"
__all__ = ["InputError", "__version__", "load_design", "review"]

if TYPE_CHECKING:
    from stresscheck.chain import review
    from stresscheck.design.load import load_design
    from stresscheck.errors import InputError

_HOMES = {"load_design": "stresscheck.design.load", "review": "stresscheck.chain", "InputError": "stresscheck.errors"}


def __getattr__(name: str) -> Any:
    """The public calls, imported when they are first used: `--version` needs none of them."""
    if name not in _HOMES:
        raise AttributeError(f"module 'stresscheck' has no attribute {name!r}")
    from importlib import import_module

    return getattr(import_module(_HOMES[name]), name)

"""Where the data files that ship with the package are: inside the installed package, or beside it in a source tree."""

from __future__ import annotations

from pathlib import Path

_PACKAGE = Path(__file__).resolve().parent


def ratings_dir() -> Path:
    """Folder of policies, thresholds and parts."""
    return _find("ratings")


def examples_dir() -> Path:
    """Folder of the example designs."""
    return _find("examples")


def _find(name: str) -> Path:
    for folder in (_PACKAGE / name, _PACKAGE.parent / name):
        if folder.is_dir():
            return folder
    raise FileNotFoundError(f"the folder {name} of the installation is missing")

"""Parts by name: ratings and values of a part that stand in a parts file instead of the design."""

from __future__ import annotations

import tomllib
from collections.abc import Mapping
from functools import lru_cache
from pathlib import Path
from typing import Any

from stresscheck.errors import InputError, Problem
from stresscheck.shipped import ratings_dir

KINDS = ("capacitor", "inductor", "resistor")
LARGEST = 1 << 20


def with_part(kind: str, own: Mapping[str, Any], folder: Path | None) -> dict[str, Any]:
    """A part's table with what its `part` gives; what stands in the design wins, key by key, in `rating` too.

    `part = "NAME"` looks through the shipped parts files, `part = "FILE.toml#NAME"` into a file beside the design.
    KeyError where there is no such part, with the known names; OSError and InputError for files that can't be used.
    """
    wanted = own.get("part")
    if not isinstance(wanted, str) or kind not in KINDS:
        return dict(own)
    path, _, name = wanted.rpartition("#")
    tables = _read(str((folder or Path()) / path)) if path else shipped_parts()
    known = tables.get(kind, {})
    if name not in known:
        raise KeyError(", ".join(sorted(known)) or "none")
    given = known[name]
    merged = {**given, **own}
    if isinstance(given.get("rating"), Mapping) and isinstance(own.get("rating", {}), Mapping):
        merged["rating"] = {**given["rating"], **own.get("rating", {})}
    return merged


def shipped_parts() -> dict[str, dict[str, Any]]:
    """All parts of the shipped files by kind and name."""
    found: dict[str, dict[str, Any]] = {}
    for file in sorted((ratings_dir() / "parts").glob("*.toml")):
        for kind, parts in _read(str(file)).items():
            found.setdefault(kind, {}).update(parts)
    return found


@lru_cache(maxsize=32)
def _read(path: str) -> dict[str, dict[str, Any]]:
    """Tables of one parts file; each rating without a source gets the file's."""
    file = Path(path)
    try:
        data = file.read_bytes()
        if len(data) > LARGEST:
            raise ValueError("larger than 1 MiB")
        raw = tomllib.loads(data.decode("utf-8"))
    except (OSError, ValueError, RecursionError) as error:
        raise InputError([_problem(file.name, "", str(error), "a parts file in TOML", "correct the file")]) from None
    missing = [key for key in ("title", "source", "evidence") if not isinstance(raw.get(key), str)]
    if missing:
        raise InputError([_problem(file.name, key, "nothing", "a text", f"add {key} = …") for key in missing])
    mark = ", invented" if raw.get("invented") is True else ""
    source = f"{raw['source']} ({raw['evidence']}{mark})"
    found: dict[str, dict[str, Any]] = {}
    for kind in KINDS:
        for name, part in raw.get(kind, {}).items():
            table = dict(part)
            if isinstance(table.get("rating"), Mapping):
                table["rating"] = {"source": source, **table["rating"]}
            found.setdefault(kind, {})[name] = table
    return found


def _problem(file: str, key: str, found: str, expected: str, repair: str) -> Problem:
    return Problem("bad-rating-file", file, None, key, found, expected, repair)

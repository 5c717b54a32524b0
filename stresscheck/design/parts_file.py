"""Parts by name: ratings and values of a part that stand in a parts file instead of the design."""

from __future__ import annotations

import tomllib
from collections.abc import Mapping
from dataclasses import replace
from functools import lru_cache
from pathlib import Path
from typing import Any

from pydantic import ValidationError

from stresscheck.design.parts import Capacitor, Inductor, PartsFile, Resistor, Valued
from stresscheck.design.positions import Lines
from stresscheck.design.problems import as_problems, key_text
from stresscheck.errors import InputError, Problem
from stresscheck.shipped import ratings_dir

MODELS: dict[str, type[Valued]] = {"capacitor": Capacitor, "inductor": Inductor, "resistor": Resistor}
LARGEST = 1 << 20
LONGEST_SOURCE = 300
Parts = dict[str, dict[str, Any]]
"""Kind → name → table of a part."""


def with_part(kind: str, own: Mapping[str, Any], folder: Path | None) -> dict[str, Any]:
    """A part's table with what its `part` gives; what stands in the design wins, key by key, in `rating` too.

    `part = "NAME"` looks through the shipped parts files, `part = "FILE.toml#NAME"` into a file beside the design.
    KeyError where there is no such part, with the tuple of known names; InputError for files that can't be used.
    """
    wanted = own.get("part")
    if not isinstance(wanted, str) or kind not in MODELS:
        return dict(own)
    path, _, name = wanted.rpartition("#")
    known = (_fresh((folder or Path()) / path) if path else shipped_parts()).get(kind, {})
    if name not in known:
        raise KeyError(tuple(sorted(known)))
    given = known[name]
    merged = {**given, **own}
    rating = own.get("rating", {})
    if isinstance(given.get("rating"), Mapping) and isinstance(rating, Mapping):
        merged["rating"] = {**given["rating"], **rating, "source": _source(given["rating"], rating)}
    for mine, theirs in (("dissipation_factor", "q"), ("esr", "q"), ("resistance", "q"), ("q", "resistance")):
        if mine in own and theirs not in own:
            merged.pop(theirs, None)
            if theirs == "q":
                merged.pop("q_at", None)
    return merged


def _source(given: Mapping[str, Any], own: Mapping[str, Any]) -> Any:
    """Where the merged ratings stand: figures of the design don't borrow the source of the parts file."""
    if "source" in own or not own:
        return own.get("source", given["source"])
    mixed = f"{given['source']}; {', '.join(own)}: the design"
    return mixed if len(mixed) <= LONGEST_SOURCE else f"parts file; {', '.join(own)}: the design"[:LONGEST_SOURCE]


def shipped_parts() -> Parts:
    """All parts of the shipped files by kind and name."""
    found: Parts = {}
    for file in sorted((ratings_dir() / "parts").glob("*.toml")):
        for kind, parts in _fresh(file).items():
            found.setdefault(kind, {}).update(parts)
    return found


def _fresh(file: Path) -> Parts:
    """Tables of one parts file, read again when the file has changed."""
    try:
        status = file.stat()
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or "a name that no file can have"
        name = key_text((file.name,))
        raise InputError([_problem(name, None, "", reason, "a parts file", "check name and rights")]) from None
    return _read(str(file), status.st_mtime_ns, status.st_size)


@lru_cache(maxsize=32)
def _read(path: str, changed: int, size: int) -> Parts:
    """Tables of one parts file; each rating without a source gets the file's."""
    file = Path(path)
    try:
        with file.open("rb") as stream:
            data = stream.read(LARGEST + 1)  # bounded: the size of a device says nothing
        if len(data) > LARGEST:
            raise ValueError("larger than 1 MiB")
        text = data.decode("utf-8")
        raw = tomllib.loads(text)
    except (OSError, ValueError, RecursionError) as error:
        reason = getattr(error, "strerror", None) or str(error)[:200].encode("unicode_escape").decode("ascii")
        name = key_text((file.name,))
        raise InputError([_problem(name, None, "", reason, "a parts file in TOML", "correct the file")]) from None
    _check(raw, key_text((file.name,)), Lines(text))
    mark = ", invented" if raw.get("invented") is True and raw["evidence"] != "invented" else ""
    source = f"{raw['source']} ({raw['evidence']}{mark})"
    found: Parts = {}
    for kind in MODELS:
        for name, part in raw.get(kind, {}).items():
            table = dict(part)
            if isinstance(table.get("rating"), Mapping):
                table["rating"] = {"source": source, **table["rating"]}
            found.setdefault(kind, {})[name] = table
    return found


def _check(raw: Mapping[str, Any], file: str, lines: Lines) -> None:
    """Raise InputError with everything that a design would refuse in these parts."""
    problems: list[Problem] = []
    whole: dict[str, Any] = dict(raw)
    for kind in MODELS:
        if not isinstance(raw.get(kind), Mapping):
            continue
        whole[kind] = {}
        for name, part in raw[kind].items():
            wired = [key for key in ("between", "part") if isinstance(part, Mapping) and key in part]
            for key in wired:
                line = lines.of((kind, name, key))
                where = f"{kind}.{name}.{key}"
                problems.append(_problem(file, line, where, f"the key {key}", "a part without wiring", "remove it"))
            whole[kind][name] = {**part, "between": ["a", "b"], "part": "x"} if isinstance(part, Mapping) else part
    try:
        PartsFile.model_validate(whole)
    except ValidationError as error:
        found = as_problems(error.errors(), raw, PartsFile, file, lines.of)
        problems += [replace(problem, code="bad-rating-file") for problem in found]
    if problems:
        raise InputError(problems)


def _problem(file: str, line: int | None, key: str, found: str, expected: str, repair: str) -> Problem:
    return Problem("bad-rating-file", file, line, key, found, expected, repair)

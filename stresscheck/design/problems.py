"""What pydantic found wrong, in the words of this package: code, found, expected, repair."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from difflib import get_close_matches
from typing import Any

from pydantic import BaseModel

from stresscheck.errors import Problem

Place = Callable[[tuple[str, ...]], int | None]
"""Key path → line, None where none can be named."""

_EXPECTED = {
    "missing": "this key",
    "model_type": "a table",
    "dict_type": "a table",
    "mapping_type": "a table",
    "model_attributes_type": "a table",
    "date_type": "a date such as 2027-03-01",
    "date_parsing": "a date such as 2027-03-01",
    "date_from_datetime_parsing": "a date such as 2027-03-01",
    "date_from_datetime_inexact": "a date such as 2027-03-01",
}


def as_problems(
    errors: list[Any], raw: Mapping[str, Any], model: type[BaseModel], file: str, line: Place
) -> list[Problem]:
    """Problems in reading order of the file."""
    found = [_problem(error, raw, model, file, line) for error in errors]
    return sorted(found, key=lambda problem: (problem.line or 0, problem.key))


def _problem(error: Any, raw: Mapping[str, Any], model: type[BaseModel], file: str, line: Place) -> Problem:
    path = tuple(str(part) for part in error["loc"])
    kind = error["type"]
    if kind == "extra_forbidden":
        return _unknown_key(path, model, file, line)
    if kind == "missing":
        table = ".".join(path[:-1]) or "the file"
        return Problem(
            "missing-key", file, line(path[:-1]), ".".join(path), "nothing", f"the key {path[-1]}",
            f"add {path[-1]} = … to {table}",
        )  # fmt: skip
    if kind == "stresscheck":
        told = error["ctx"]
        return Problem(
            told["code"], file, line(path), ".".join(path), show(value_at(raw, path)), told["expected"], told["repair"]
        )
    expected = _EXPECTED.get(kind, "another kind of value")
    return Problem(
        "wrong-type",
        file,
        line(path),
        ".".join(path),
        show(value_at(raw, path)),
        expected,
        "see the design file's format",
    )


def _unknown_key(path: tuple[str, ...], model: type[BaseModel], file: str, line: Place) -> Problem:
    known = known_keys(model, path[:-1])
    near = nearest(path[-1], known)
    repair = f"did you mean {near}?" if near else "remove it"
    return Problem(
        "unknown-key",
        file,
        line(path),
        ".".join(path),
        f"the key {show(path[-1])}",
        "one of " + ", ".join(known),
        repair,
    )


def nearest(word: str, known: list[str]) -> str:
    """The known word that looks most like this one, empty where none does."""
    close = get_close_matches(word.lower(), [k.lower() for k in known], n=1, cutoff=0.6)
    return next((k for k in known if close and k.lower() == close[0]), "")


def known_keys(model: type[BaseModel], path: tuple[str, ...]) -> list[str]:
    """Keys of the table at a path: follows models and tables of models."""
    current: Any = model
    for part in path:
        if isinstance(current, type) and issubclass(current, BaseModel):
            field = current.model_fields.get(part)
            current = None if field is None else field.annotation
        else:
            current = _inner(current)
        current = _unwrapped(current)
    if isinstance(current, type) and issubclass(current, BaseModel):
        return list(current.model_fields)
    return []


def _unwrapped(annotation: Any) -> Any:
    """The model among the members of an optional annotation."""
    for member in getattr(annotation, "__args__", ()):
        if isinstance(member, type) and issubclass(member, BaseModel) and type(None) in annotation.__args__:
            return member
    return annotation


def _inner(annotation: Any) -> Any:
    """Value type of a mapping annotation."""
    arguments = getattr(annotation, "__args__", ())
    return arguments[-1] if arguments else None


def value_at(raw: Any, path: tuple[str, ...]) -> Any:
    """What the file has at a path, as far as that exists."""
    current = raw
    for part in path:
        if isinstance(current, Mapping) and part in current:
            current = current[part]
        else:
            break
    return current


def show(value: Any) -> str:
    """A found value for an error: one line, printable, at most 60 characters."""
    if isinstance(value, Mapping):
        keys = ", ".join(show(key).strip('"') for key in list(value)[:6])
        return f"a table with {keys or 'no keys'}"
    text = f'"{value}"' if isinstance(value, str) else repr(value)
    text = text if len(text) <= 60 else text[:57] + "…"
    return text.encode("unicode_escape").decode("ascii") if not text.isprintable() else text

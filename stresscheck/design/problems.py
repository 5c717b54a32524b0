"""What pydantic found wrong, in the words of this package: code, found, expected, repair."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping
from difflib import get_close_matches
from typing import Any

from pydantic import BaseModel

from stresscheck.errors import Problem

Place = Callable[[tuple[str, ...]], int | None]
"""Key path → line, None where none can be named."""

_TABLES = ("model_type", "dict_type", "mapping_type", "model_attributes_type")


def as_problems(
    errors: list[Any], raw: Mapping[str, Any], model: type[BaseModel], file: str, line: Place
) -> list[Problem]:
    """Problems in reading order of the file."""
    found = [_problem(error, raw, model, file, line) for error in errors]
    return sorted(found, key=lambda problem: (problem.line or 0, problem.key))


def _problem(error: Any, raw: Mapping[str, Any], model: type[BaseModel], file: str, line: Place) -> Problem:
    path = tuple(str(part) for part in error["loc"])
    key, kind, found = key_text(path), error["type"], show(value_at(raw, path))
    if kind == "extra_forbidden":
        return _unknown_key(path, model, file, line)
    if kind == "missing":
        table = key_text(path[:-1]) or "the top of the file"
        repair = f"add {path[-1]} = … to {table}"
        return Problem("missing-key", file, line(path[:-1]), key, "nothing", f"the key {path[-1]}", repair)
    if kind == "stresscheck":
        told = error["ctx"]
        return Problem(told["code"], file, line(path), key, found, told["expected"], told["repair"])
    if kind in _TABLES:
        keys = known_keys(model, path)
        example = f"[{key}]" if keys else f"[{key}.NAME]"
        return Problem("wrong-type", file, line(path), key, found, f"a table such as {example}", "write it as a table")
    return Problem("wrong-type", file, line(path), key, found, "another kind of value", "see the schema command")


def _unknown_key(path: tuple[str, ...], model: type[BaseModel], file: str, line: Place) -> Problem:
    known = known_keys(model, path[:-1])
    near = nearest(path[-1], known)
    found, expected = f"the key {show(path[-1])}", "one of " + ", ".join(known)
    repair = f"did you mean {near}?" if near else "remove it"
    return Problem("unknown-key", file, line(path), key_text(path), found, expected, repair)


def key_text(path: tuple[str, ...]) -> str:
    """A key path for an error: printable whatever the file calls its keys, each part at most 60 characters."""
    return ".".join(_plain(part if len(part) <= 60 else part[:57] + "…") for part in path)


def _plain(text: str) -> str:
    return text if text.isprintable() else text.encode("unicode_escape").decode("ascii")


def nearest(word: str, known: Iterable[str]) -> str:
    """The known word that looks most like this one, empty where none does."""
    folded = {k.lower(): k for k in known}
    close = get_close_matches(word[:60].lower(), list(folded), n=1, cutoff=0.6)
    return folded[close[0]] if close else ""


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
    """A found value for an error, as TOML would write it: one line, printable, at most 60 characters."""
    if isinstance(value, Mapping):
        keys = ", ".join(show(key).strip('"') for key in list(value)[:6])
        return f"a table with {keys or 'no keys'}"
    text = _toml(value)
    return _plain(text if len(text) <= 60 else text[:57] + "…")


def _toml(value: Any) -> str:
    """A value of a file about as the file wrote it; long lists are cut early."""
    if isinstance(value, str):
        return f'"{value[:80]}"' if len(value) <= 80 else f'"{value[:80]}'
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, list):
        return "[" + ", ".join(_toml(item) for item in value[:20]) + ("]" if len(value) <= 20 else "")
    if isinstance(value, Mapping):
        return "{ " + ", ".join(f"{key} = {_toml(item)}" for key, item in list(value.items())[:20]) + " }"
    return str(value)

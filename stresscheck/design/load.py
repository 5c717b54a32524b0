"""Design file → Design. Every problem of the file is collected; any problem means no design."""

from __future__ import annotations

import hashlib
import tomllib
from collections.abc import Mapping
from pathlib import Path
from types import MappingProxyType
from typing import Any

from pydantic import ValidationError

from stresscheck.design.fields import is_name
from stresscheck.design.model import PART_KINDS, Design
from stresscheck.design.parts_file import with_part
from stresscheck.design.positions import key_lines
from stresscheck.design.problems import as_problems, show
from stresscheck.design.states import changed
from stresscheck.design.topology import coupling_problems, topology_problems
from stresscheck.errors import InputError, Problem

LARGEST = 1 << 20
DEEPEST = 40
"""Brackets that may be open at once: more is no design, and slows every reader of TOML."""


def load_design(path: str | Path) -> Design:
    """Read a design file. Raises InputError with every problem found in it."""
    file = Path(path)
    try:
        size = file.stat().st_size
        data = file.read_bytes() if size <= LARGEST else b"\0" * (LARGEST + 1)
    except OSError as error:
        reason = error.strerror or "an error of the file system"
        raise InputError([_unreadable(file.name, reason, "a file that can be read", "check name and rights")]) from None
    return read_design(data, file.name, file.parent)


def read_design(text: str | bytes, file: str = "design.toml", folder: Path | None = None) -> Design:
    """Read a design from text or bytes; `file` names it in messages, `folder` is where its paths start.

    Raises InputError with every problem found.
    """
    data = text.encode("utf-8", "surrogatepass") if isinstance(text, str) else text
    decoded = _decoded(data, file)
    raw = _toml(decoded, file)
    return _Loader(decoded, raw, file, folder).design(hashlib.sha256(data).hexdigest())


def _decoded(data: bytes, file: str) -> str:
    if len(data) > LARGEST:
        raise InputError([_unreadable(file, "more than 1 MiB", "a text of at most 1 MiB", "is it a design file?")])
    if data.startswith(b"\xef\xbb\xbf"):
        raise InputError([_unreadable(file, "a byte order mark", "UTF-8 without one", "save it as plain UTF-8")])
    try:
        return data.decode("utf-8")
    except UnicodeDecodeError as error:
        place = f"a byte that isn't UTF-8 at position {error.start}"
        raise InputError([_unreadable(file, place, "UTF-8 text", "save it as UTF-8")]) from None


def _toml(text: str, file: str) -> dict[str, Any]:
    depth = 0
    for c in text:
        depth = max(0, depth + (c in "[{") - (c in "]}"))
        if depth > DEEPEST:
            raise InputError([_unreadable(file, "brackets nested too deep", "a design file", "remove them")])
    longest = max((line.split("=")[0].count(".") for line in text.splitlines()), default=0)
    if longest > DEEPEST:
        raise InputError([_unreadable(file, f"a key of {longest} parts", "a design file", "shorten the key")])
    try:
        return tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        words = str(error)
        line = _line_of(words)
        raise InputError(
            [Problem("not-toml", file, line, "", words.split(" (at")[0], "valid TOML 1.0", "correct the line")]
        ) from None
    except (RecursionError, ValueError):
        raise InputError(
            [_unreadable(file, "numbers or nesting beyond reason", "a design file", "shorten it")]
        ) from None


def _line_of(words: str) -> int | None:
    """Line number in a message of tomllib, which ends with (at line N, column M)."""
    _, _, tail = words.partition("(at line ")
    digits = tail.split(",")[0]
    return int(digits) if digits.isdigit() else None


def _unreadable(file: str, found: str, expected: str, repair: str) -> Problem:
    return Problem("file-unreadable", file, None, "", found, expected, repair)


class _Loader:
    """Reads one file; lives only inside `read_design`."""

    def __init__(self, text: str, raw: dict[str, Any], file: str, folder: Path | None) -> None:
        self.text, self.raw, self.file, self.folder = text, raw, file, folder
        self.lines: dict[tuple[str, ...], int] | None = None
        self.problems: list[Problem] = []

    def line(self, path: tuple[str, ...]) -> int | None:
        """Line of a key, or of the nearest table around it."""
        if self.lines is None:
            self.lines = key_lines(self.text)
        while path and path not in self.lines:
            path = path[:-1]
        return self.lines.get(path)

    def say(self, code: str, path: tuple[str, ...], found: str, expected: str, repair: str) -> None:
        self.problems.append(Problem(code, self.file, self.line(path), ".".join(path), found, expected, repair))

    def design(self, sha256: str) -> Design:
        self._names()
        raw = self._with_parts(self.raw)
        design = self._validated(raw)
        if design is not None:
            design._file, design._folder, design._sha256 = self.file, self.folder, sha256
            self._circuit(design)
            if not self.problems:
                design._in_state = MappingProxyType(self._states(design, raw))
        if self.problems or design is None:
            unique = dict.fromkeys(self.problems)
            raise InputError(sorted(unique, key=lambda p: (p.line or 0, p.key)))
        return design

    def _names(self) -> None:
        """Names that can be printed, unique across kinds; no empty tables."""
        seen: dict[str, str] = {}
        for kind in (*PART_KINDS, "state", "accept"):
            table = self.raw.get(kind)
            if not isinstance(table, Mapping):
                continue
            if not table:
                self.say("missing-key", (kind,), "an empty table", f"[{kind}.NAME] tables", "fill it or remove it")
            for name in table:
                if not is_name(name):
                    self.say("bad-text", (kind, name), show(name), "a name of letters, digits, - and _", "rename it")
                if kind in PART_KINDS and name in seen:
                    self.say(
                        "duplicate-name", (kind, name), f"{name}, which is a {seen[name]} already",
                        "names unique across kinds", "rename one of the two",
                    )  # fmt: skip
                if kind in PART_KINDS:
                    seen.setdefault(name, kind)
            if kind == "state" and "normal" in table:
                self.say("duplicate-name", ("state", "normal"), "a state called normal", "another name", "rename it")

    def _with_parts(self, raw: dict[str, Any]) -> dict[str, Any]:
        out = dict(raw)
        for kind in ("capacitor", "inductor", "resistor"):
            if isinstance(raw.get(kind), Mapping):
                out[kind] = {name: self._one_part(kind, name, part) for name, part in raw[kind].items()}
        return out

    def _one_part(self, kind: str, name: str, part: Any) -> Any:
        if not isinstance(part, Mapping):
            return part
        try:
            return with_part(kind, part, self.folder)
        except KeyError as error:
            known = str(error.args[0])
            self.say(
                "unknown-name",
                (kind, name, "part"),
                show(part["part"]),
                f"a {kind}: {known}",
                "see the library command",
            )
        except InputError as error:
            self.problems.extend(error.problems)
        return {key: value for key, value in part.items() if key != "part"}

    def _validated(self, raw: Mapping[str, Any]) -> Design | None:
        try:
            return Design.model_validate(raw)
        except ValidationError as error:
            self.problems.extend(as_problems(error.errors(), raw, Design, self.file, self.line))
            return None

    def _circuit(self, design: Design) -> None:
        for code, path, found, expected, repair in (*topology_problems(design), *coupling_problems(design)):
            self.say(code, path, found, expected, repair)

    def _states(self, design: Design, raw: Mapping[str, Any]) -> dict[str, Design]:
        found: dict[str, Design] = {}
        for name, state in design.state.items():
            before = len(self.problems)
            result = changed(design, raw, name, state)
            for code, key, what, expected, repair in result.problems:
                self.say(code, ("state", name, *key), what, expected, repair)
            if len(self.problems) > before:
                continue
            there = self._state_design(name, result.raw)
            if there is not None:
                there._file, there._folder, there._sha256 = design.file, design.folder, design.sha256
                there._opened, there._shorted = result.opened, result.shorted
                found[name] = there
        return found

    def _state_design(self, name: str, raw: Mapping[str, Any]) -> Design | None:
        """The changed file read again; what is wrong with it is wrong with the state's changes."""
        try:
            there = Design.model_validate(raw)
        except ValidationError as error:
            for problem in as_problems(error.errors(), raw, Design, self.file, lambda path: None):
                self.say(
                    problem.code,
                    ("state", name, "change", problem.key),
                    problem.found,
                    problem.expected,
                    problem.repair,
                )
            return None
        for code, path, found, expected, repair in coupling_problems(there):
            self.say(code, ("state", name, "change", ".".join(path)), found, expected, repair)
        return there

"""Reads the data files (policies, families, thresholds); every problem of a file is raised at once."""

from __future__ import annotations

import difflib
import math
import tomllib
from collections.abc import Iterable, Mapping, Sequence
from pathlib import Path
from types import MappingProxyType
from typing import Any

from stresscheck.design.positions import key_lines
from stresscheck.errors import InputError, Problem
from stresscheck.units import UnitError, Wanted, parse

EVIDENCE = MappingProxyType(
    {
        "text": "read in the document itself, or in an official copy",
        "transcription": "in somebody's table that names document and table",
        "two": "two independent secondary texts agree",
        "one": "one secondary text",
        "secondary": "in a text that names the document only",
        "common practice": "no source: what practitioners do",
        "derived": "follows from circuit theory or arithmetic",
        "own decision": "decided by this project",
        "invented": "made up for a demonstration",
    }
)
"""The words for how a figure was read, from the strongest to the weakest."""

_EXAMPLE = MappingProxyType({"K": "20 K", "V": "50 V", "m/V": "2 mm/kV"})

LARGEST_FILE = 1 << 20
"""Bytes; a data file above this size is refused unread."""


class DataFile:
    """One TOML data file while it is read: typed access by path, and the list of what is wrong with it.

    The one place where problems gather; whoever reads a file calls `finish` at the end, which raises them.
    """

    def __init__(self, name: str, data: Mapping[str, Any], text: str) -> None:
        self.name = name
        self.problems: list[Problem] = []
        self._data = data
        self._text = text

    def value(self, *path: str) -> Any:
        """The value at a path, or None."""
        here: Any = self._data
        for key in path:
            if not isinstance(here, dict) or key not in here:
                return None
            here = here[key]
        return here

    def has(self, *path: str) -> bool:
        """True where the path exists."""
        return self.value(*path) is not None

    def text(self, *path: str, required: bool = False) -> str:
        """A text that isn't blank; "" where it is missing (a problem if required) or wrong."""
        value = self.value(*path)
        if value is None:
            if required:
                self.problem("missing-key", path, "nothing", f"text: {path[-1]}", f"add {path[-1]}")
            return ""
        if not isinstance(value, str) or not value.strip():
            self.problem("wrong-type", path, repr(value), "text that isn't blank", f"write {path[-1]} as text")
            return ""
        if not value.isprintable():
            self.problem("bad-text", path, repr(value), "printable characters", "take the others out")
            return ""
        return value

    def one_of(self, *path: str, among: Iterable[str]) -> str:
        """A required text out of a list; "" where it is missing or wrong."""
        value = self.text(*path, required=True)
        words = tuple(among)
        if value and value not in words:
            repair = nearest(value, words) or "use one of them"
            self.problem("wrong-type", path, repr(value), f"one of: {', '.join(words)}", repair)
            return ""
        return value

    def texts(self, *path: str) -> tuple[str, ...]:
        """A list of texts; empty where it is missing or wrong."""
        value = self.value(*path)
        if value is None:
            return ()
        if not isinstance(value, list) or not all(isinstance(item, str) and item.isprintable() for item in value):
            self.problem("wrong-type", path, repr(value), "a list of texts", 'write ["...", "..."]')
            return ()
        return tuple(value)

    def flag(self, *path: str) -> bool:
        """true or false; false where it is missing or wrong."""
        value = self.value(*path)
        if value is not None and not isinstance(value, bool):
            self.problem("wrong-type", path, repr(value), "true or false", "write one of them without quotes")
        return value is True

    def table(self, *path: str) -> Mapping[str, Any]:
        """A table; empty where it is missing or wrong."""
        value = self.value(*path)
        if value is not None and not isinstance(value, dict):
            self.problem("wrong-type", path, repr(value), "a table", f"write [{'.'.join(path)}...]")
        return value if isinstance(value, dict) else {}

    def subtables(self, *path: str) -> Mapping[str, Mapping[str, Any]]:
        """A table of named tables, such as [row.NAME]; other entries are problems and left out."""
        found = {}
        for name, value in self.table(*path).items():
            if isinstance(value, dict):
                found[name] = value
            else:
                where = ".".join((*path, "NAME"))
                self.problem("wrong-type", (*path, name), repr(value), f"a table [{where}]", "write it as a table")
        return found

    def tables(self, *path: str) -> Sequence[Mapping[str, Any]]:
        """A list of tables; empty where it is missing or wrong."""
        value = self.value(*path)
        if value is not None and not (isinstance(value, list) and all(isinstance(item, dict) for item in value)):
            self.problem("wrong-type", path, repr(value), "a list of tables", "write [{ ... }]")
            return ()
        return value or ()

    def fraction(self, *path: str) -> float | None:
        """A plain number from 0 to 1; None where it is missing or wrong."""
        value = self.value(*path)
        if isinstance(value, bool) or not isinstance(value, int | float) or not 0.0 <= value <= 1.0:
            self.problem("out-of-range", path, repr(value), "a number from 0 to 1", "0.6 stands for 60 % of it")
            return None
        return float(value)

    def quantity(self, *path: str, unit: str, least: float = -math.inf, absolute: bool = False) -> float | None:
        """A quantity in SI `unit` ("" for a plain number), at least `least`; None where it can't be read.

        `absolute`: a temperature, which may also be written in degC; otherwise "K" is a difference.
        """
        return self._quantity(path, self.value(*path), unit, least, absolute)

    def pairs(self, *path: str, units: tuple[str, str]) -> tuple[tuple[float, float], ...]:
        """A list of pairs in the units of its columns, "K" for temperatures; empty where one is wrong."""
        value = self.value(*path)
        if not isinstance(value, list) or not all(isinstance(item, list) and len(item) == 2 for item in value):
            self.problem("wrong-type", path, repr(value), "a list of pairs", "write [[..., ...], [..., ...]]")
            return ()
        found = []
        for first, second in value:
            left = self._quantity(path, first, units[0], absolute=units[0] == "K")
            right = self._quantity(path, second, units[1], absolute=units[1] == "K")
            if left is not None and right is not None:
                found.append((left, right))
        return tuple(found) if len(found) == len(value) else ()

    def _quantity(
        self, path: tuple[str, ...], value: Any, unit: str, least: float = -math.inf, absolute: bool = False
    ) -> float | None:
        if unit == "":
            return self._plain(path, value)
        wanted = Wanted(f"a quantity in {unit}", unit, least, math.inf, _EXAMPLE.get(unit, f"1 {unit}"), absolute)
        if not isinstance(value, str):
            expected = f'text with a unit, such as "{wanted.example}"'
            self.problem("wrong-type", path, repr(value), expected, "write number and unit in quotes")
            return None
        try:
            return parse(value, wanted)
        except UnitError as fault:
            self.problem(fault.code, path, repr(value), fault.expected, fault.repair)
            return None

    def _plain(self, path: tuple[str, ...], value: Any) -> float | None:
        if isinstance(value, bool) or not isinstance(value, int | float) or not math.isfinite(value):
            self.problem("wrong-type", path, repr(value), "a plain number", "write it without quotes and unit")
            return None
        return float(value)

    def known_keys(self, path: tuple[str, ...], known: Iterable[str]) -> None:
        """Note every key of a table that isn't known, with the nearest known one."""
        words = sorted(known)
        for key in self.table(*path):
            if key not in words:
                repair = nearest(key, words) or "take it out"
                self.problem("unknown-key", (*path, key), repr(key), f"one of: {', '.join(words)}", repair)

    def problem(self, code: str, path: tuple[str, ...], found: str, expected: str, repair: str) -> None:
        """Note one problem, at the line of its key where that can be found."""
        shown = found if len(found) <= 80 else found[:77] + "..."
        line = line_of(self._text, path)
        self.problems.append(Problem(code, self.name, line, ".".join(path), shown, expected, repair))

    def finish(self, known: Iterable[str]) -> None:
        """Check the keys of the top level and raise InputError if anything is wrong."""
        self.known_keys((), known)
        if self.problems:
            raise InputError(self.problems)


def nearest(word: str, known: Iterable[str]) -> str:
    """ "did you mean ...?" for the known word most like this one, or an empty text."""
    close = difflib.get_close_matches(word, list(known), n=1)
    return f"did you mean {close[0]}?" if close else ""


def read_data_file(path: Path) -> DataFile:
    """The TOML file at `path`, at most 1 MiB of UTF-8; InputError where it can't be read or isn't TOML."""
    name = path.name
    try:
        with path.open("rb") as stream:
            raw = stream.read(LARGEST_FILE + 1)
        if len(raw) > LARGEST_FILE:
            raise InputError([_unreadable(name, f"more than {LARGEST_FILE} bytes")])
        text = raw.decode("utf-8")
    except (OSError, UnicodeDecodeError) as fault:
        raise InputError([_unreadable(name, _in_words(fault))]) from None
    try:
        return DataFile(name, tomllib.loads(text), text)
    except (tomllib.TOMLDecodeError, RecursionError, ValueError) as fault:
        found = str(fault).splitlines()[0][:80] if str(fault) else type(fault).__name__
        problem = Problem("not-toml", name, None, "", found, "a TOML file", "mend the line named")
        raise InputError([problem]) from None


def _unreadable(name: str, found: str) -> Problem:
    expected = "a readable file, UTF-8 text of at most 1 MiB"
    return Problem("file-unreadable", name, None, "", found, expected, "check the path and the file")


def line_of(text: str, path: Sequence[str]) -> int | None:
    """Line of a key, or of the nearest table above it that the text has; None where it has none."""
    lines = key_lines(text)
    for count in range(len(path), 0, -1):
        found = lines.get(tuple(path[:count]))
        if found is not None:
            return found
    return None


def _in_words(fault: OSError | UnicodeDecodeError) -> str:
    """Why a file can't be read, without its path."""
    if isinstance(fault, UnicodeDecodeError):
        return "bytes that aren't UTF-8 text"
    return (fault.strerror or type(fault).__name__).lower()

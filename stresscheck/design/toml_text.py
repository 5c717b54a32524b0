"""Bytes of a design file → the tables that TOML reads from them; whatever would take long is refused before."""

from __future__ import annotations

import re
import tomllib
from typing import Any

from stresscheck.errors import InputError, Problem

LARGEST = 1 << 20
"""Bytes of a file."""
DEEPEST = 40
"""Brackets that may be open at once, and parts of a dotted key: more is no design, and slows every reader of TOML."""
MOST_KEYS = 10_000
"""Keys and tables of a file: a circuit of forty parts has about five hundred."""

# Strings and comments whole, so that what they say counts for nothing; then the marks that do count. Every
# alternative that begins matches to its end without going back (possessive), so the scan takes linear time.
_TOKEN = re.compile(
    r'"""(?:[^"\\]|\\.|"(?!""))*+(?:""""{0,2})?'
    r"|'''(?:[^']|'(?!''))*+(?:''''{0,2})?"
    r'|"(?:[^"\\\n]|\\.)*+"?'
    r"|'[^'\n]*+'?"
    r"|\#[^\n]*+"
    r"|[\[\]{}=\n,.]",
    re.DOTALL,
)


def tables_of(data: bytes, file: str) -> tuple[str, dict[str, Any]]:
    """Text and tables of a TOML file. Raises InputError for what is no TOML, or beyond the bounds of a design."""
    text = _decoded(data, file)
    _refuse_excess(text, file)
    return text, _read(text, file)


def unreadable(file: str, found: str, expected: str, repair: str, line: int | None = None) -> Problem:
    """A problem of the file as a whole."""
    return Problem("file-unreadable", file, line, "", found, expected, repair)


def too_large(file: str) -> Problem:
    """The problem of a file over the bound."""
    return unreadable(file, "more than 1 MiB", "a text of at most 1 MiB", "name a design file")


def _decoded(data: bytes, file: str) -> str:
    if len(data) > LARGEST:
        raise InputError([too_large(file)])
    if data.startswith(b"\xef\xbb\xbf"):
        raise InputError([unreadable(file, "a byte order mark", "UTF-8 without one", "save it as plain UTF-8")])
    if data.startswith((b"\xff\xfe", b"\xfe\xff")):
        raise InputError([unreadable(file, "UTF-16 text", "UTF-8 text", "save it as plain UTF-8")])
    try:
        return data.decode("utf-8")
    except UnicodeDecodeError as error:
        line = data.count(b"\n", 0, error.start) + 1
        found = f"the byte 0x{data[error.start]:02x}, which isn't UTF-8 here"
        raise InputError([unreadable(file, found, "UTF-8 text", "save it as UTF-8", line)]) from None


def _refuse_excess(text: str, file: str) -> None:
    """Depth of brackets, parts of a key, and number of keys, counted without reading any value."""
    depth = dots = keys = 0
    for match in _TOKEN.finditer(text):
        mark = match.group()
        if mark in ("[", "{"):
            depth += 1
        elif mark in ("]", "}"):
            depth = max(0, depth - 1)
        elif mark == ".":
            dots += 1
        elif mark == "=":
            keys += 1
        if mark in ("=", "\n", ",", "[", "{"):
            dots = 0
        if depth > DEEPEST or dots > DEEPEST or keys > MOST_KEYS:
            break
    else:
        keys += text.count("\n[")
        if keys <= MOST_KEYS:
            return
    found = "brackets nested too deep" if depth > DEEPEST else f"a key of more than {DEEPEST} parts"
    if keys > MOST_KEYS:
        found = f"more than {MOST_KEYS} keys"
    raise InputError([unreadable(file, found, "a design file", "name a design file, or shorten it")])


def _read(text: str, file: str) -> dict[str, Any]:
    try:
        return tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        what, _, place = str(error).partition(" (at ")
        line = re.match(r"line ([0-9]+)", place)
        at = int(line.group(1)) if line else text.count("\n") + 1
        found = what.encode("unicode_escape").decode("ascii")[:200]
        raise InputError([Problem("not-toml", file, at, "", found, "valid TOML 1.0", "correct the line")]) from None
    except (RecursionError, ValueError, OverflowError):
        found = "numbers or nesting beyond reason"
        raise InputError([unreadable(file, found, "a design file", "shorten them")]) from None

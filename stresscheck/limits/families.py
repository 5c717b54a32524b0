"""Families of parts: one name for what people call by many, and the wider families it belongs to."""

from __future__ import annotations

import difflib
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from types import MappingProxyType

from stresscheck.limits.data_file import DataFile, read_data_file
from stresscheck.shipped import ratings_dir

KINDS_WITH_FAMILIES = ("capacitor", "inductor", "resistor")


@dataclass(frozen=True, slots=True)
class Family:
    """A family of one kind of part; `wider` are the families it belongs to besides itself."""

    kind: str
    name: str
    wider: tuple[str, ...]

    def belongs_to(self, names: tuple[str, ...]) -> bool:
        """True where a row for any of these families speaks of this one; a row for none speaks of all."""
        return not names or any(name in names for name in (self.name, *self.wider))


@dataclass(frozen=True, slots=True)
class Families:
    """All families by (kind, plain word), aliases included."""

    by_word: Mapping[tuple[str, str], Family]

    def find(self, kind: str, text: str | None) -> Family | None:
        """The family a design's text names, or None: not given, or not known."""
        if not text:
            return None
        return self.by_word.get((kind, plain(text)))

    def names(self, kind: str) -> tuple[str, ...]:
        """Names of the families of a kind, without their aliases."""
        return tuple(dict.fromkeys(f.name for (k, _), f in self.by_word.items() if k == kind))

    def nearest(self, kind: str, text: str) -> str:
        """The known word most like `text`, or an empty text."""
        words = [word for (k, word) in self.by_word if k == kind]
        close = difflib.get_close_matches(plain(text), words, n=1)
        return close[0] if close else ""


def plain(text: str) -> str:
    """Lower case, hyphens and underscores as spaces, single spaces."""
    return " ".join(text.lower().replace("-", " ").replace("_", " ").split())


@cache
def load_families(path: Path | None = None) -> Families:
    """The shipped families, or those of a file; InputError with every problem."""
    file = read_data_file(path or ratings_dir() / "families.toml")
    for head in ("title", "document", "edition", "evidence"):
        file.text(head, required=True)
    words: dict[tuple[str, str], Family] = {}
    for kind in KINDS_WITH_FAMILIES:
        for name in file.subtables(kind):
            _add(file, words, kind, name)
    file.finish({"title", "document", "edition", "evidence", *KINDS_WITH_FAMILIES})
    return Families(MappingProxyType(words))


def _add(file: DataFile, words: dict[tuple[str, str], Family], kind: str, name: str) -> None:
    at = (kind, name)
    wider = file.texts(*at, "within")
    for other in wider:
        if other not in file.table(kind):
            file.problem("unknown-name", (*at, "within"), repr(other), "a family of this file", "name one")
    file.known_keys(at, {"aliases", "within"})
    family = Family(kind, name, wider)
    for word in (name, *file.texts(*at, "aliases")):
        key = (kind, plain(word))
        if key in words:
            owner = words[key].name
            file.problem("duplicate-name", at, repr(word), "a word of one family", f"{owner} has it already")
        words[key] = family

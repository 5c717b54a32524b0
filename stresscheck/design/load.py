"""Design file → Design. Every problem of the file is collected; any problem means no design."""

from __future__ import annotations

import hashlib
from collections.abc import Mapping
from pathlib import Path
from types import MappingProxyType
from typing import Any

from pydantic import ValidationError

from stresscheck.design.accepts import accept_problems
from stresscheck.design.couplings import coupling_problems, impossible_couplings
from stresscheck.design.fields import is_name
from stresscheck.design.model import PART_KINDS, Design
from stresscheck.design.parts_file import with_part
from stresscheck.design.positions import Lines
from stresscheck.design.problems import as_problems, key_text, nearest, show
from stresscheck.design.solvable import solvable_problems
from stresscheck.design.states import Changed, changed_states
from stresscheck.design.toml_text import LARGEST, tables_of, too_large, unreadable
from stresscheck.design.topology import topology_problems
from stresscheck.errors import InputError, Problem

EMPTY_IS_WRONG = ("rating", "winding", "core", "gating")
"""Tables inside a part that say nothing when they are empty."""


def load_design(path: str | Path) -> Design:
    """Read a design file. Raises InputError with every problem found in it."""
    file = Path(path)
    name = key_text((file.name,))
    try:
        with file.open("rb") as stream:
            data = stream.read(LARGEST + 1)  # bounded: the size of a device or a pipe says nothing
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or "a name that no file can have"
        raise InputError([unreadable(name, reason, "a file that can be read", "check name and rights")]) from None
    if len(data) > LARGEST:
        raise InputError([too_large(name)])
    return read_design(data, name, file.parent)


def read_design(text: str | bytes, file: str = "design.toml", folder: Path | None = None) -> Design:
    """Read a design from text or bytes; `file` names it in messages, `folder` is where its paths start.

    Raises InputError with every problem found.
    """
    data = text.encode("utf-8", "surrogatepass") if isinstance(text, str) else text
    decoded, raw = tables_of(data, file)
    return _Loader(decoded, raw, file, folder).design(hashlib.sha256(data).hexdigest())


class _Loader:
    """Reads one file; lives only inside `read_design`."""

    def __init__(self, text: str, raw: dict[str, Any], file: str, folder: Path | None) -> None:
        self.raw, self.file, self.folder = raw, file, folder
        self.lines = Lines(text)
        self.problems: list[Problem] = []

    def say(self, code: str, path: tuple[str, ...], found: str, expected: str, repair: str) -> None:
        self.problems.append(Problem(code, self.file, self.lines.of(path), key_text(path), found, expected, repair))

    def design(self, sha256: str) -> Design:
        """The design with its states. Raises InputError with every problem."""
        self._names()
        raw = self._with_parts(self.raw)
        for problem in (*topology_problems(raw), *coupling_problems(raw), *accept_problems(raw)):
            self.say(*problem)
        states = changed_states(raw)
        for name, state in states.items():
            for code, key, found, expected, repair in state.problems:
                self.say(code, ("state", name, *key), found, expected, repair)
        design = self._validated(raw)
        if design is not None and not self.problems:
            for problem in (*solvable_problems(design), *impossible_couplings(design)):
                self.say(*problem)
            self._mark(design, sha256)
            design._in_state = MappingProxyType(self._in_states(states, sha256))
        if self.problems or design is None:
            unique = dict.fromkeys(self.problems)
            raise InputError(sorted(unique, key=lambda p: (p.line or 0, p.key)))
        return design

    def _mark(self, design: Design, sha256: str) -> None:
        design._file, design._folder, design._sha256 = self.file, self.folder, sha256
        design._lines = self.lines

    def _names(self) -> None:
        """Names that can be printed, unique across kinds; no empty tables."""
        seen: dict[str, str] = {}
        for kind in (*PART_KINDS, "state", "accept"):
            table = self.raw.get(kind)
            if not isinstance(table, Mapping):
                continue
            if not table:
                self.say("missing-key", (kind,), "an empty table", f"[{kind}.NAME] tables", "fill it or remove it")
            for name, part in table.items():
                if not is_name(name):
                    expected = "a name of letters, digits, - and _, at most 40 characters"
                    self.say("bad-text", (kind, name), show(name), expected, "rename it")
                if kind in PART_KINDS:
                    self._unique(kind, name, seen)
                for key in EMPTY_IS_WRONG:
                    if isinstance(part, Mapping) and part.get(key) == {}:
                        self.say("missing-key", (kind, name, key), "an empty table", "keys", "fill it or remove it")
        if self.raw.get("site") == {}:
            self.say("missing-key", ("site",), "an empty table", "keys of the site", "fill it or remove it")
        if isinstance(self.raw.get("state"), Mapping) and "normal" in self.raw["state"]:
            expected = "another name: normal is the file as written"
            self.say("duplicate-name", ("state", "normal"), "a state called normal", expected, "rename it")

    def _unique(self, kind: str, name: str, seen: dict[str, str]) -> None:
        if name in seen:
            both = sorted((seen[name], kind), key=lambda k: self.lines.of((k, name)) or 0)
            found = f"{show(name)}, which is in the table {both[0]} already"
            self.say("duplicate-name", (both[1], name), found, "names unique across kinds", "rename one of the two")
        seen.setdefault(name, kind)

    def _with_parts(self, raw: dict[str, Any]) -> dict[str, Any]:
        out = dict(raw)
        for kind in ("capacitor", "inductor", "resistor"):
            if isinstance(raw.get(kind), Mapping):
                out[kind] = {name: self._one_part(kind, name, part) for name, part in raw[kind].items()}
        return out

    def _one_part(self, kind: str, name: str, part: Any) -> Any:
        if not isinstance(part, Mapping):
            return part
        path = (kind, name, "part")
        try:
            return with_part(kind, part, self.folder)
        except KeyError as error:
            known: tuple[str, ...] = error.args[0]
            near = nearest(str(part["part"]).rpartition("#")[2], known)
            repair = f"did you mean {near}?" if near else "see the library command, or FILE.toml#NAME"
            names = ", ".join(known) or "none"
            self.say("unknown-name", path, show(part["part"]), f"a part of kind {kind}: {names}", repair)
        except InputError as error:
            found, expected = show(part["part"]), "a parts file that can be used"
            self.say("bad-rating-file", path, found, expected, "mend the problems of that file")
            self.problems.extend(error.problems)
        return None

    def _validated(self, raw: Mapping[str, Any]) -> Design | None:
        """The model; a part whose parts file failed is left out, since all that it lacks would be blamed on it."""
        kept = dict(raw)
        for kind in ("capacitor", "inductor", "resistor"):
            if isinstance(raw.get(kind), Mapping):
                kept[kind] = {name: part for name, part in raw[kind].items() if part is not None}
        try:
            return Design.model_validate(kept)
        except ValidationError as error:
            self.problems.extend(as_problems(error.errors(), raw, Design, self.file, self.lines.of))
            return None

    def _in_states(self, states: Mapping[str, Changed], sha256: str) -> dict[str, Design]:
        found: dict[str, Design] = {}
        for name, state in states.items():
            there = self._state_design(name, state.raw)
            if there is not None:
                self._mark(there, sha256)
                there._opened, there._shorted = state.opened, state.shorted
                found[name] = there
        return found

    def _state_design(self, name: str, raw: Mapping[str, Any]) -> Design | None:
        """The changed file read again; what is wrong with it is wrong with the state's changes."""
        try:
            there = Design.model_validate(raw)
        except ValidationError as error:
            for p in as_problems(error.errors(), raw, Design, self.file, lambda path: None):
                self.say(p.code, ("state", name, "change", p.key), p.found, p.expected, p.repair)
            return None
        for code, path, found, expected, repair in impossible_couplings(there):
            self.say(code, ("state", name, "change", ".".join(path)), found, expected, repair)
        return there

"""A state's changes, made on the file's own tables so that the changed circuit is read like any other."""

from __future__ import annotations

import copy
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from stresscheck.design.model import Design, State
from stresscheck.design.problems import known_keys, nearest, show

PROBLEM = tuple[str, tuple[str, ...], str, str, str]
"""(code, key path below the state, found, expected, repair)."""
JOINABLE = ("capacitor", "inductor", "resistor")
LEVELS = ("peak", "rms", "peak_to_peak", "available_power", "delivered_power")


@dataclass(frozen=True, slots=True)
class Changed:
    """Tables after a state's changes, which parts are open or shorted, and what is wrong with the changes."""

    raw: Mapping[str, Any]
    opened: frozenset[str]
    shorted: frozenset[str]
    problems: tuple[PROBLEM, ...]


def changed(design: Design, raw: Mapping[str, Any], name: str, state: State) -> Changed:
    """Apply the changes of one state.

    A path `kind.NAME` takes "open" or "short"; `kind.NAME.key` (or `kind.NAME.rating.key`) takes a new value. A new
    level of a drive replaces the level in any basis. The state's own `frequency` applies to every drive.
    """
    out = copy.deepcopy(dict(raw))
    out.pop("state", None)
    out.pop("accept", None)
    opened: set[str] = set()
    shorted: set[str] = set()
    problems: list[PROBLEM] = []
    if state.frequency is not None:
        for drive in out.get("drive", {}).values():
            drive["frequency"] = raw["state"][name]["frequency"]
    for path, value in state.change.items():
        parts = path.split(".")
        trouble = _unknown(design, parts, path)
        if trouble is not None:
            problems.append(trouble)
        elif len(parts) == 2:
            problems.extend(_open_or_short(parts, path, value, opened, shorted))
        else:
            _set(out, parts, value)
    return Changed(out, frozenset(opened), frozenset(shorted), tuple(problems))


def _unknown(design: Design, parts: list[str], path: str) -> PROBLEM | None:
    """What is wrong with a path: an unknown kind, part or key."""
    key = ("change", path)
    known: list[str] = ["drive", *JOINABLE, "transformer", "coupling"]
    if len(parts) < 2 or parts[0] not in known:
        shape = "a path such as capacitor.C1.value"
        return "unknown-name", key, show(path), shape, "begin with one of " + ", ".join(known)
    table = list(getattr(design, parts[0]))
    if parts[1] not in table:
        near = nearest(parts[1], table)
        repair = f"did you mean {parts[0]}.{near}?" if near else "name an existing part"
        return "unknown-name", key, show(path), f"a {parts[0]} of this design", repair
    if len(parts) > 2:
        keys = known_keys(Design, (parts[0], parts[1], *parts[2:-1]))
        if parts[-1] not in keys:
            near = nearest(parts[-1], keys)
            repair = f"did you mean {near}?" if near else "name an existing key"
            return "unknown-key", key, show(path), "one of " + ", ".join(keys), repair
        if parts[2] in ("between", "part"):
            return "unknown-key", key, show(path), "a value, not the wiring", "write another design file"
    return None


def _open_or_short(parts: list[str], path: str, value: Any, opened: set[str], shorted: set[str]) -> list[PROBLEM]:
    allowed = ("open", "short") if parts[0] in JOINABLE else ("open",)
    if value not in allowed:
        words = " or ".join(f'"{word}"' for word in allowed)
        return [("wrong-type", ("change", path), show(value), words, "or name a key of the part in the path")]
    (opened if value == "open" else shorted).add(parts[1])
    return []


def _set(out: dict[str, Any], parts: list[str], value: Any) -> None:
    table = out[parts[0]][parts[1]]
    for part in parts[2:-1]:
        table = table.setdefault(part, {})
    if parts[0] == "drive" and parts[-1] in LEVELS:
        for level in LEVELS:
            table.pop(level, None)
    table[parts[-1]] = value

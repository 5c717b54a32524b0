"""A state's changes, made on the file's own tables so that the changed circuit is read like any other."""

from __future__ import annotations

import copy
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from stresscheck.design.model import LEVELS, Design
from stresscheck.design.problems import known_keys, nearest, show
from stresscheck.design.topology import PROBLEM

JOINABLE = ("capacitor", "inductor", "resistor")
CHANGEABLE = ("drive", *JOINABLE, "transformer", "coupling")
FIXED = ("between", "primary", "secondary", "of", "part")
"""Keys that are the wiring, not a value."""
REPLACES = {
    **dict.fromkeys(LEVELS, LEVELS),
    "value": ("nominal",),
    "q": ("resistance", "winding", "dissipation_factor", "esr"),
    "resistance": ("q", "q_at", "winding"),
    "winding": ("q", "q_at", "resistance"),
    "dissipation_factor": ("q", "q_at"),
    "esr": ("q", "q_at"),
    "series_inductance": ("self_resonance",),
    "parallel_capacitance": ("self_resonance",),
    "self_resonance": ("series_inductance", "parallel_capacitance"),
    "waveform": ("harmonics",),
    "harmonics": ("waveform", "duty"),
}
"""A changed key → keys that say the same thing in another way, and give way to it."""


@dataclass(frozen=True, slots=True)
class Changed:
    """Tables after a state's changes, which parts are open or shorted, and what is wrong with the changes."""

    raw: Mapping[str, Any]
    opened: frozenset[str]
    shorted: frozenset[str]
    problems: tuple[PROBLEM, ...]


def changed_states(raw: Mapping[str, Any]) -> dict[str, Changed]:
    """Every state of the file with its changes applied; states that aren't tables are left to the model."""
    states = raw.get("state")
    if not isinstance(states, Mapping):
        return {}
    base = {key: table for key, table in raw.items() if key not in ("state", "accept")}
    return {name: changed(base, state) for name, state in states.items() if isinstance(state, Mapping)}


def changed(base: Mapping[str, Any], state: Mapping[str, Any]) -> Changed:
    """Apply the changes of one state to the tables of the circuit. Problem keys are paths below the state.

    A path `kind.NAME` takes "open" or "short"; `kind.NAME.key` (or `kind.NAME.rating.key`) takes a new value. A key
    that says the same as the changed one in another way gives way: a level replaces the level in any basis. The
    state's own `frequency` applies to every drive.
    """
    out = copy.deepcopy(dict(base))
    opened: set[str] = set()
    shorted: set[str] = set()
    problems: list[PROBLEM] = []
    if "frequency" in state and isinstance(out.get("drive"), Mapping):
        for drive in out["drive"].values():
            if isinstance(drive, dict):
                drive["frequency"] = state["frequency"]
    changes = state.get("change")
    for path, value in changes.items() if isinstance(changes, Mapping) else ():
        parts = path.split(".")
        trouble = _unknown(base, parts, path)
        if trouble is not None:
            problems.append(trouble)
        elif len(parts) == 2:
            problems.extend(_open_or_short(parts, path, value, opened, shorted))
        else:
            _set(out, parts, value)
    return Changed(out, frozenset(opened), frozenset(shorted), tuple(problems))


def _unknown(base: Mapping[str, Any], parts: list[str], path: str) -> PROBLEM | None:
    """What is wrong with a path: an unknown kind, part or key."""
    key = ("change", path)
    if len(parts) < 2 or parts[0] not in CHANGEABLE:
        near = nearest(parts[0], CHANGEABLE)
        repair = f"did you mean {near}?" if near else "begin with one of " + ", ".join(CHANGEABLE)
        return "unknown-name", key, show(path), "a path such as capacitor.C1.value", repair
    tables = base.get(parts[0])
    names = list(tables) if isinstance(tables, Mapping) else []
    if parts[1] not in names:
        near = nearest(parts[1], names)
        repair = f"did you mean {parts[0]}.{near}?" if near else "name an existing part"
        return "unknown-name", key, show(path), f"a part of kind {parts[0]} of this design", repair
    if len(parts) > 2:
        keys = [k for k in known_keys(Design, (parts[0], parts[1], *parts[2:-1])) if k not in FIXED]
        if parts[2] in FIXED:
            return "unknown-key", key, show(path), "a value, not the wiring", "write another design file"
        if parts[-1] not in keys:
            near = nearest(parts[-1], keys)
            repair = f"did you mean {near}?" if near else "name one key and its new value"
            return "unknown-key", key, show(path), "one of " + (", ".join(keys) or "the keys of the part"), repair
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
        table = table.setdefault(part, {}) if isinstance(table, dict) else {}
    if not isinstance(table, dict):
        return  # the file itself is wrong there, and says so
    if len(parts) == 3:
        for other in REPLACES.get(parts[-1], ()):
            table.pop(other, None)
    table[parts[-1]] = value

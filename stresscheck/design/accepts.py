"""Accepted findings that name no part or state of the design."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from stresscheck.design.problems import nearest, show
from stresscheck.design.shapes import part_and_state
from stresscheck.design.topology import PROBLEM

CHECKED = ("drive", "capacitor", "inductor", "resistor", "spacing", "probe")
"""Kinds of part that have findings."""


def accept_problems(raw: Mapping[str, Any]) -> list[PROBLEM]:
    """Ids of findings whose part or state doesn't exist: such an entry would accept nothing, unnoticed."""
    parts = [name for kind in CHECKED for name in _names(raw.get(kind))]
    states = ["normal", *_names(raw.get("state"))]
    tables = raw.get("accept")
    problems: list[PROBLEM] = []
    for name, entry in tables.items() if isinstance(tables, Mapping) else ():
        finding = entry.get("finding") if isinstance(entry, Mapping) else None
        try:
            part, state = part_and_state(finding if isinstance(finding, str) else "")
        except ValueError:
            continue  # its form is told when the model is read
        for word, known, what in ((part, parts, "part"), (state, states, "state")):
            if word not in known:
                near = nearest(word, known)
                repair = f"did you mean {near}?" if near else "copy the id from the review"
                path = ("accept", name, "finding")
                problems.append(("unknown-name", path, show(finding), f"a {what} of this design", repair))
    return problems


def _names(tables: Any) -> list[str]:
    return list(tables) if isinstance(tables, Mapping) else []

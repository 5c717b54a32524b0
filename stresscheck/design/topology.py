"""Wiring that can't be meant as drawn, told by the names of nodes and parts; read from the tables as they stand.

It needs the nodes alone, so that it is told together with whatever is wrong with the values.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from typing import Any

from stresscheck.design.fields import is_name
from stresscheck.design.problems import nearest, show

PROBLEM = tuple[str, tuple[str, ...], str, str, str]
"""(code, key path, found, expected, repair)."""
REFERENCE = "ground"
ENDS = {
    "drive": ("between",), "capacitor": ("between",), "inductor": ("between",), "resistor": ("between",),
    "transformer": ("primary", "secondary"),
}  # fmt: skip
"""Kind of part → its keys that name two nodes each."""


@dataclass(frozen=True, slots=True)
class Joint:
    """Two nodes that a part joins, and the key that says so."""

    kind: str
    name: str
    key: str
    first: str
    second: str

    @property
    def path(self) -> tuple[str, ...]:
        return self.kind, self.name, self.key


def joints_of(raw: Mapping[str, Any]) -> list[Joint] | None:
    """Everything that joins nodes; None where some part doesn't say which two, which makes all others guesses."""
    found: list[Joint] = []
    for kind, keys in ENDS.items():
        parts = raw.get(kind, {})
        if not isinstance(parts, Mapping):
            return None
        for name, part in parts.items():
            for key in keys:
                nodes = part.get(key) if isinstance(part, Mapping) else None
                if not isinstance(nodes, list) or not _two_names(nodes):
                    return None
                found.append(Joint(kind, name, key, nodes[0], nodes[1]))
    return found


def _two_names(nodes: list[Any]) -> bool:
    return len(nodes) == 2 and all(isinstance(n, str) and is_name(n) for n in nodes) and nodes[0] != nodes[1]


def topology_problems(raw: Mapping[str, Any]) -> list[PROBLEM]:
    """Everything wrong with the wiring of the file as written, its states left aside."""
    problems: list[PROBLEM] = []
    if not raw.get("drive"):
        problems.append(("bad-topology", (), "no drive", "at least one [drive.NAME]", "add the drive"))
    if not any(raw.get(kind) for kind in ("capacitor", "inductor", "resistor")):
        repair = "add the parts of the circuit"
        problems.append(("bad-topology", (), "no part", "at least one capacitor, inductor or resistor", repair))
    joints = joints_of(raw)
    if problems or joints is None:
        return problems
    uses: dict[str, list[Joint]] = {}
    for joint in joints:
        uses.setdefault(joint.first, []).append(joint)
        uses.setdefault(joint.second, []).append(joint)
    return [*_reference(uses), *_lonely_nodes(uses), *_islands(joints, uses), *_unknown_nodes(raw, uses)]


def _reference(uses: Mapping[str, list[Joint]]) -> list[PROBLEM]:
    if REFERENCE in uses:
        return []
    near = nearest(REFERENCE, uses)
    repair = f"did you mean ground by {near}?" if near else 'call the reference node "ground"'
    return [("bad-topology", (), "no part at the node ground", "a reference node called ground", repair)]


def _lonely_nodes(uses: Mapping[str, list[Joint]]) -> list[PROBLEM]:
    """A node with a single part carries no current: nearly always a misspelt name."""
    problems: list[PROBLEM] = []
    for node, joints in uses.items():
        if len(joints) != 1 or node == REFERENCE:
            continue
        near = nearest(node, [other for other in uses if other != node])
        repair = f"did you mean {near}?" if near else "connect a second part, or remove this one"
        found = f"the node {node} used once"
        problems.append(("bad-topology", joints[0].path, found, "at least two parts at every node", repair))
    return problems


def _islands(joints: Iterable[Joint], uses: Mapping[str, list[Joint]]) -> list[PROBLEM]:
    """Parts that nothing joins to ground: their voltages to the rest aren't defined.

    The windings of a transformer join nothing to each other, and coupled coils don't either.
    """
    group = groups((joint.first, joint.second) for joint in joints)
    home = group.get(REFERENCE)
    if home is None:
        return []
    islands: dict[str, list[str]] = {}
    for node in uses:
        if group[node] != home:
            islands.setdefault(group[node], []).append(node)
    return [
        (
            "bad-topology", uses[nodes[0]][0].path, f"the nodes {_some(nodes)} with no connection to ground",
            "every node joined to ground through parts", "join one of them to ground",
        )
        for nodes in islands.values()
    ]  # fmt: skip


def _some(nodes: list[str]) -> str:
    return ", ".join(sorted(nodes)[:6]) + (f" and {len(nodes) - 6} more" if len(nodes) > 6 else "")


def groups(pairs: Iterable[tuple[str, str]]) -> dict[str, str]:
    """Node → a node that stands for all nodes joined with it."""
    leader: dict[str, str] = {}

    def find(node: str) -> str:
        leader.setdefault(node, node)
        while leader[node] != node:
            leader[node] = leader[leader[node]]
            node = leader[node]
        return node

    for first, second in pairs:
        leader[find(first)] = find(second)
    return {node: find(node) for node in list(leader)}


def _unknown_nodes(raw: Mapping[str, Any], uses: Mapping[str, list[Joint]]) -> list[PROBLEM]:
    """Nodes named by site, spacings and probes that no part has."""
    site = raw.get("site")
    reachable = site.get("reachable") if isinstance(site, Mapping) else None
    named: list[tuple[tuple[str, ...], Any]] = []
    named += [(("site", "reachable"), node) for node in reachable] if isinstance(reachable, list) else []
    for kind in ("spacing", "probe"):
        tables = raw.get(kind)
        for name, part in tables.items() if isinstance(tables, Mapping) else ():
            nodes = part.get("between") if isinstance(part, Mapping) else None
            named += [((kind, name, "between"), node) for node in nodes] if isinstance(nodes, list) else []
    problems: list[PROBLEM] = []
    for path, node in named:
        if isinstance(node, str) and is_name(node) and node not in uses:
            near = nearest(node, uses)
            repair = f"did you mean {near}?" if near else "name a node of the circuit"
            problems.append(("unknown-name", path, show(node), "a node that parts use", repair))
    return problems

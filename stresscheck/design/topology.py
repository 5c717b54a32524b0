"""Circuits that can't be solved as drawn, found before solving and told by the names of nodes and parts."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from stresscheck.design.model import Design
from stresscheck.design.problems import nearest, show

PROBLEM = tuple[str, tuple[str, ...], str, str, str]
"""(code, key path, found, expected, repair)."""
REFERENCE = "ground"
TWO_NODE = ("drive", "capacitor", "inductor", "resistor")


def topology_problems(design: Design) -> list[PROBLEM]:
    """Everything wrong with the wiring of the file as written."""
    problems: list[PROBLEM] = []
    if not design.drive:
        problems.append(("bad-topology", (), "no drive", "at least one [drive.NAME]", "add the drive"))
    if not (design.capacitor or design.inductor or design.resistor):
        problems.append(
            ("bad-topology", (), "no part", "at least one capacitor, inductor or resistor", "add the parts")
        )
    if problems:
        return problems
    uses = _uses(design)
    problems += _reference(uses)
    problems += _lonely_nodes(uses)
    problems += _islands(design, uses)
    problems += _ideal_drive_loops(design)
    problems += _blocked_current_drives(design)
    problems += _unknown_nodes(design, uses)
    return problems


def _pairs(design: Design) -> Iterator[tuple[str, str, str, str]]:
    """(kind, name, first node, second node) of everything that joins nodes; a transformer's windings apart."""
    for kind in TWO_NODE:
        for name, part in getattr(design, kind).items():
            yield kind, name, part.between[0], part.between[1]
    for name, part in design.transformer.items():
        yield "transformer", name, part.primary[0], part.primary[1]
        yield "transformer", name, part.secondary[0], part.secondary[1]


def _uses(design: Design) -> dict[str, list[tuple[str, str]]]:
    """Node → the parts that it is used by."""
    found: dict[str, list[tuple[str, str]]] = {}
    for kind, name, first, second in _pairs(design):
        found.setdefault(first, []).append((kind, name))
        found.setdefault(second, []).append((kind, name))
    return found


def _reference(uses: dict[str, list[tuple[str, str]]]) -> list[PROBLEM]:
    if REFERENCE in uses:
        return []
    near = nearest(REFERENCE, list(uses))
    repair = f"did you mean ground by {near}?" if near else 'call the reference node "ground"'
    return [("bad-topology", (), "no part at the node ground", "a reference node called ground", repair)]


def _lonely_nodes(uses: dict[str, list[tuple[str, str]]]) -> list[PROBLEM]:
    """A node with a single part carries no current: nearly always a misspelt name."""
    problems: list[PROBLEM] = []
    for node, parts in uses.items():
        if len(parts) != 1 or node == REFERENCE:
            continue
        near = nearest(node, [other for other in uses if other != node])
        repair = f"did you mean {near}?" if near else "connect a second part, or remove this one"
        problems.append(
            ("bad-topology", (*parts[0], "between"), f"the node {node} used once", "two parts at every node", repair)
        )
    return problems


def _islands(design: Design, uses: dict[str, list[tuple[str, str]]]) -> list[PROBLEM]:
    """Parts that nothing joins to ground: their voltages to the rest aren't defined."""
    group = _groups([(first, second) for _, _, first, second in _pairs(design)])
    home = group.get(REFERENCE)
    problems: list[PROBLEM] = []
    seen = {home}
    for node, parts in uses.items():
        if group[node] in seen or home is None:
            continue
        seen.add(group[node])
        island = sorted(n for n in uses if group[n] == group[node])
        problems.append((
            "bad-topology", (*parts[0], "between"), f"nodes {', '.join(island)} with no connection to ground",
            "every node joined to ground through parts", "join one node of it to ground",
        ))  # fmt: skip
    return problems


def _groups(pairs: list[tuple[str, str]]) -> dict[str, str]:
    """Node → a node that stands for its connected group."""
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


def _ideal_drive_loops(design: Design) -> list[PROBLEM]:
    """Voltage drives without resistance in a loop of their own: their currents aren't defined, or are infinite."""
    problems: list[PROBLEM] = []
    joined: list[tuple[str, str]] = []
    for name, drive in design.drive.items():
        if drive.source != "voltage" or drive.source_resistance is not None:
            continue
        group = _groups(joined)
        first, second = drive.between
        if group.get(first, first) == group.get(second, second):
            problems.append((
                "bad-topology", ("drive", name, "between"), f"{name} in a loop of drives without resistance",
                "at most one such drive between two nodes", "give source_resistance",
            ))  # fmt: skip
        joined.append((first, second))
    return problems


def _blocked_current_drives(design: Design) -> list[PROBLEM]:
    """A current drive whose nodes nothing else joins has nowhere to send its current."""
    current = {n for n, d in design.drive.items() if d.source == "current" and d.source_resistance is None}
    pairs = [(a, b) for kind, name, a, b in _pairs(design) if not (kind == "drive" and name in current)]
    group = _groups(pairs)
    problems: list[PROBLEM] = []
    for name in current:
        first, second = design.drive[name].between
        if group.get(first, first) != group.get(second, second):
            problems.append((
                "bad-topology", ("drive", name, "between"), f"no path for the current of {name}",
                "parts that carry it from one node to the other", "join the nodes, or give source_resistance",
            ))  # fmt: skip
    return problems


def _unknown_nodes(design: Design, uses: dict[str, list[tuple[str, str]]]) -> list[PROBLEM]:
    """Nodes named by site, spacings and probes that no part has."""
    named: list[tuple[tuple[str, ...], str]] = [(("site", "reachable"), n) for n in design.site.reachable or ()]
    for kind in ("spacing", "probe"):
        for name, part in getattr(design, kind).items():
            named += [((kind, name, "between"), node) for node in part.between]
    problems: list[PROBLEM] = []
    for path, node in named:
        if node not in uses:
            near = nearest(node, list(uses))
            repair = f"did you mean {near}?" if near else "name a node of the circuit"
            problems.append(("unknown-name", path, show(node), "a node that parts use", repair))
    return problems

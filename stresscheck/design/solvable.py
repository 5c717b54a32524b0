"""Circuits without a solution, found before solving: drives against each other, and drives with nowhere to go.

Ideal voltage drives and ideal transformers each prescribe one relation between node voltages,

    voltage drive:  v_a - v_b = level          transformer:  n2 (v_p - v_q) - n1 (v_s - v_t) = 0.

1. Relations that follow from each other leave the currents in these parts open, or contradict each other: drives in
   parallel or in a loop, a drive at each winding of one transformer.
2. Everything else (capacitor, inductor, resistor, a drive with source resistance) carries some current at some
   voltage. Take nodes joined by such parts as one: if the relations then leave a difference between two of them open,
   only ideal current drives join them, and their current has no way back.

A capacitor straight across a voltage drive is no fault: its voltage is given and its current follows. At a natural
frequency without any loss a solution may still be missing; that is a matter of values and of the solver.
"""

from __future__ import annotations

from collections.abc import Iterable
from fractions import Fraction

from stresscheck.design.model import Design
from stresscheck.design.topology import PROBLEM, REFERENCE, groups

Row = dict[str, Fraction]
"""Factors of node voltages that add to a prescribed value; the reference node is left out."""


def solvable_problems(design: Design) -> list[PROBLEM]:
    """Circuits without a solution, by the names of drives and transformers; assumes every node joined to ground."""
    contradictions = _dependent(design)
    return contradictions or [*_no_way_back(design), *_direct_current(design)]


def _relations(design: Design) -> list[tuple[str, str, Row]]:
    """(kind, name, relation) of everything that prescribes voltages."""
    found: list[tuple[str, str, Row]] = []
    for name, drive in design.drive.items():
        if drive.source == "voltage" and drive.source_resistance is None:
            found.append(("drive", name, _row([(drive.between, 1.0)])))
    for name, part in design.transformer.items():
        n1, n2 = part.turns
        found.append(("transformer", name, _row([(part.primary, n2), (part.secondary, -n1)])))
    return found


def _row(terms: Iterable[tuple[tuple[str, str], float]]) -> Row:
    row: Row = {}
    for (first, second), factor in terms:
        for node, sign in ((first, 1), (second, -1)):
            row[node] = row.get(node, Fraction(0)) + sign * Fraction(factor)
    row.pop(REFERENCE, None)
    return {node: factor for node, factor in row.items() if factor}


class _Basis:
    """Relations in echelon form; exact, since a small pivot and none at all are different faults."""

    def __init__(self) -> None:
        self.rows: dict[str, Row] = {}

    def rest(self, row: Row) -> Row:
        """What the relations taken so far leave of a row; empty where it follows from them."""
        row = dict(row)
        while True:
            pivot = next((node for node in row if node in self.rows), None)
            if pivot is None:
                return row
            known = self.rows[pivot]
            share = row[pivot] / known[pivot]
            for node, factor in known.items():
                row[node] = row.get(node, Fraction(0)) - share * factor
                if not row[node]:
                    del row[node]

    def take(self, row: Row) -> bool:
        """Add a row; False where it follows from the others."""
        rest = self.rest(row)
        if not rest:
            return False
        pivot = next(iter(rest))
        for known, old in self.rows.items():
            if pivot in old:
                share = old[pivot] / rest[pivot]
                merged = {n: old.get(n, Fraction(0)) - share * rest.get(n, Fraction(0)) for n in {**old, **rest}}
                self.rows[known] = {n: factor for n, factor in merged.items() if factor}
        self.rows[pivot] = rest
        return True


def _dependent(design: Design) -> list[PROBLEM]:
    """Rule 1: relations that follow from those before them."""
    basis = _Basis()
    before: list[str] = []
    problems: list[PROBLEM] = []
    for kind, name, row in _relations(design):
        if not basis.take(row):
            others = ", ".join(before[-6:]) or "itself"
            path = (kind, name, "between" if kind == "drive" else "primary")
            found = f"{name} whose voltage is already fixed by {others}"
            expected = "no loop of voltage drives without resistance and of transformers alone"
            problems.append(("bad-topology", path, found, expected, "give source_resistance, or remove one of them"))
        before.append(name)
    return problems


def _passive(design: Design) -> list[tuple[str, str]]:
    """Node pairs joined by something that carries some current at some voltage."""
    pairs = [p.between for kind in ("capacitor", "inductor", "resistor") for p in getattr(design, kind).values()]
    return pairs + [d.between for d in design.drive.values() if d.source_resistance is not None]


def _ideal_current(design: Design) -> list[str]:
    return [n for n, d in design.drive.items() if d.source == "current" and d.source_resistance is None]


def _no_way_back(design: Design) -> list[PROBLEM]:
    """Rule 2: ideal current drives between nodes that nothing else holds together."""
    held = _Held(design, _passive(design))
    problems: list[PROBLEM] = []
    for name in _ideal_current(design):
        if held.fixes(design.drive[name].between):
            continue
        problems.append((
            "bad-topology", ("drive", name, "between"), f"no path for the current of {name}",
            "parts that carry it from one node to the other", "join the nodes, or give source_resistance",
        ))  # fmt: skip
    return problems


class _Held:
    """Is the voltage between two nodes fixed once the voltages across `pairs` and all relations are?"""

    def __init__(self, design: Design, pairs: list[tuple[str, str]]) -> None:
        self.group = groups(pairs)
        self.home = self.group.get(REFERENCE, REFERENCE)
        self.basis = _Basis()
        for _, _, row in _relations(design):
            self.basis.take(self._merged(row))

    def _merged(self, row: Row) -> Row:
        merged: Row = {}
        for node, factor in row.items():
            place = self.group.get(node, node)
            if place != self.home:
                merged[place] = merged.get(place, Fraction(0)) + factor
        return {node: factor for node, factor in merged.items() if factor}

    def fixes(self, nodes: tuple[str, str]) -> bool:
        return not self.basis.rest(self._merged(_row([(nodes, 1.0)])))


def _direct_current(design: Design) -> list[PROBLEM]:
    """At f = 0 an ideal coil is a short and a capacitor without leakage is open, which an offset can't bear.

    A voltage offset across coils without resistance drives a current without end; a current offset into capacitors
    alone charges them without end.
    """
    offsets = {name: d for name, d in design.drive.items() if d.offset is not None and float(d.offset) != 0.0}
    shorts = [p.between for p in design.inductor.values() if p.resistance is None and p.q is None and p.winding is None]
    ideal = [d.between for d in design.drive.values() if d.source == "voltage" and d.source_resistance is None]
    leaky = [c.between for c in design.capacitor.values() if c.leakage_resistance is not None]
    paths = [p.between for kind in ("inductor", "resistor") for p in getattr(design, kind).values()]
    paths += [d.between for d in design.drive.values() if d.source_resistance is not None]
    held = _Held(design, [*leaky, *paths])
    problems: list[PROBLEM] = []
    for name, drive in offsets.items():
        path, (first, second) = ("drive", name, "offset"), drive.between
        if drive.source_resistance is not None:
            continue
        if drive.source == "voltage":
            group = groups([*shorts, *(pair for pair in ideal if pair != drive.between)])
            if group.get(first, first) == group.get(second, second):
                found, repair = f"an offset of {name} across coils without resistance", "give the coils resistance or q"
                problems.append(("bad-topology", path, found, "a resistance in the loop", repair))
        elif not held.fixes(drive.between):
            found = f"an offset of {name} that flows through capacitors alone"
            repair = "give leakage_resistance, or a path for direct current"
            problems.append(("bad-topology", path, found, "a path for direct current", repair))
    return problems

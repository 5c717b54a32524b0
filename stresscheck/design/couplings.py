"""Couplings that no set of coils can have, told by their names."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from itertools import product
from typing import Any

from stresscheck.design.model import Design
from stresscheck.design.problems import nearest, show
from stresscheck.design.topology import PROBLEM

MOST_RANGES = 8
"""Ranges of coupling factors whose ends are all combined: 256 matrices."""
Factors = dict[frozenset[str], float]


def coupling_problems(raw: Mapping[str, Any]) -> list[PROBLEM]:
    """Couplings of coils that don't exist, and two couplings of one pair, by the tables as they stand."""
    problems: list[PROBLEM] = []
    pairs: dict[frozenset[str], str] = {}
    coils, tables = raw.get("inductor", {}), raw.get("coupling", {})
    for name, part in tables.items() if isinstance(tables, Mapping) else ():
        path = ("coupling", name, "of")
        of = part.get("of") if isinstance(part, Mapping) else None
        if not isinstance(of, list) or len(of) != 2 or not all(isinstance(coil, str) for coil in of):
            continue
        for coil in of:
            if coil not in coils:
                near = nearest(coil, coils)
                repair = f"did you mean {near}?" if near else "name two inductors"
                problems.append(("unknown-name", path, show(coil), "an inductor of this design", repair))
        pair = frozenset(of)
        if pair in pairs:
            found = f"the coils of {pairs[pair]} again"
            problems.append(("bad-coupling", path, found, "one coupling for each pair of coils", "remove one"))
        pairs.setdefault(pair, name)
    return problems


def impossible_couplings(design: Design) -> list[PROBLEM]:
    """The energy of coils is positive whatever their currents: the matrix of factors is positive definite.

    Positive definite matrices are a convex set, so a box of factors lies in it as soon as its corners do. Scaling
    rows and columns by the roots of the inductances changes nothing, so the values of the coils don't matter.
    """
    for corner in _corners(design):
        if not positive_definite(corner):
            sizes_of = {n: max(abs(p.span().low), abs(p.span().high)) for n, p in design.coupling.items()}
            worst = max(sizes_of, key=lambda name: sizes_of[name])
            sizes = ", ".join(f"{'-'.join(sorted(pair))} {factor:g}" for pair, factor in list(corner.items())[:6])
            return [(
                "bad-coupling", ("coupling", worst, "factor"), f"factors that no coils can have together ({sizes})",
                "factors of a positive definite inductance matrix", "reduce the factors or their ranges",
            )]  # fmt: skip
    return []


def _corners(design: Design) -> Iterator[Factors]:
    """Nominal factors, then the corners of their ranges; with many ranges the corner of largest sizes alone."""
    spans = {frozenset(part.of): part.span() for part in design.coupling.values()}
    if not spans:
        return
    yield {pair: span.nominal for pair, span in spans.items()}
    ranged = [pair for pair, span in spans.items() if span.low < span.high]
    largest = {pair: max(span.low, span.high, key=abs) for pair, span in spans.items()}
    yield largest
    if len(ranged) <= MOST_RANGES:
        for ends in product((False, True), repeat=len(ranged)):
            chosen = {p: spans[p].high if end else spans[p].low for p, end in zip(ranged, ends, strict=True)}
            yield {**largest, **chosen}


def positive_definite(factors: Mapping[frozenset[str], float]) -> bool:
    """Is the matrix with ones on its diagonal and these factors beside it positive definite?

    By elimination (Cholesky's, without roots) on rows kept sparse, coils with few couplings first.
    """
    rows: dict[str, dict[str, float]] = {}
    for pair, factor in factors.items():
        one, two = sorted(pair)
        rows.setdefault(one, {one: 1.0})[two] = factor
        rows.setdefault(two, {two: 1.0})[one] = factor
    for coil in sorted(rows, key=lambda name: len(rows[name])):
        row = rows.pop(coil)
        pivot = row.pop(coil)
        if not pivot > 1e-12:
            return False
        for other, factor in row.items():
            target = rows[other]
            del target[coil]
            for third, size in row.items():
                target[third] = target.get(third, 0.0) - factor * size / pivot
    return True

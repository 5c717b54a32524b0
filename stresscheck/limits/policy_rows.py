"""Rows of a policy file: one rule for one quantity of some families, with its clause and evidence."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

from stresscheck.limits.data_file import EVIDENCE, DataFile
from stresscheck.limits.families import load_families
from stresscheck.limits.quantities import KINDS, NAMES, quantities_of
from stresscheck.limits.rules import (
    ClassTable,
    Fraction,
    FractionOfCelsius,
    FractionOverTemperature,
    KelvinBelow,
    ParallelLine,
    Rule,
)

RULE_KEYS = (
    "allowed_fraction",
    "parallel_line_fraction",
    "kelvin_below_maximum",
    "fraction_of_celsius",
    "class_table",
)
_KNOWN = {
    "kind",
    "families",
    "quantity",
    "document",
    "edition",
    "clause",
    "evidence",
    "notes",
    "up_to",
    "hot_spot_allowance",
    "root_of_power",
    *RULE_KEYS,
}


@dataclass(frozen=True, slots=True)
class Row:
    """One row: what may be used of a rating, for whom, and where that stands.

    `families` empty: any family. `kind` or `quantity` "any": every one that has no row of its own (for
    quantities: all but temperature). `up_to` [K]: the row says nothing above. `root_of_power`: the root of
    derated power times resistance bounds an RMS voltage as well.
    """

    name: str
    kind: str
    families: tuple[str, ...]
    quantity: str
    rule: Rule
    document: str
    edition: str
    clause: str
    evidence: str
    notes: str = ""
    up_to: float | None = None
    root_of_power: bool = False

    @property
    def general(self) -> bool:
        """True for a row that stands in where no exact row does."""
        return "any" in (self.kind, self.quantity)

    def speaks_of(self, kind: str, quantity: str) -> bool:
        """True where the row's kind and quantity cover these, families aside."""
        if self.kind not in (kind, "any"):
            return False
        return self.quantity == quantity or (self.quantity == "any" and quantity != "temperature")


@dataclass(frozen=True, slots=True)
class Reference:
    """A figure of the document for a part that has no check: shown with its source, not applied."""

    name: str
    part: str
    quantity: str
    figure: str
    clause: str
    evidence: str
    notes: str = ""


def read_references(file: DataFile) -> tuple[Reference, ...]:
    """All tables [reference.NAME] of a policy file; problems go to the file's list."""
    found = []
    for name in file.subtables("reference"):
        at = ("reference", name)
        keys = ("part", "quantity", "figure", "clause")
        texts = {key: file.text(*at, key, required=True) for key in keys}
        evidence = file.one_of(*at, "evidence", among=EVIDENCE)
        file.known_keys(at, {*keys, "evidence", "notes"})
        found.append(Reference(name, **texts, evidence=evidence, notes=file.text(*at, "notes")))
    return tuple(found)


def read_rows(file: DataFile, document: str, edition: str) -> tuple[Row, ...]:
    """All tables [row.NAME] of a policy file; rows that can't be used are left out, their problems listed."""
    rows = [_read_row(file, name, document, edition) for name in file.subtables("row")]
    return tuple(row for row in rows if row is not None)


def _read_row(file: DataFile, name: str, document: str, edition: str) -> Row | None:
    at = ("row", name)
    before = len(file.problems)
    kind = file.one_of(*at, "kind", among=(*KINDS, "any"))
    quantity = file.one_of(*at, "quantity", among=(*NAMES, "any"))
    _check_pair(file, at, kind, quantity)
    rule = _read_rule(file, at, quantity)
    clause = file.text(*at, "clause", required=True)
    evidence = file.one_of(*at, "evidence", among=EVIDENCE)
    families = _read_families(file, at, kind)
    up_to = file.quantity(*at, "up_to", unit="K", absolute=True) if file.has(*at, "up_to") else None
    root = file.flag(*at, "root_of_power")
    file.known_keys(at, _KNOWN)
    if rule is None or len(file.problems) > before:
        return None
    return Row(
        name,
        kind,
        families,
        quantity,
        rule,
        file.text(*at, "document") or document,
        file.text(*at, "edition") or edition,
        clause,
        evidence,
        file.text(*at, "notes"),
        up_to,
        root,
    )


def _check_pair(file: DataFile, at: tuple[str, str], kind: str, quantity: str) -> None:
    if not kind or not quantity or "any" in (kind, quantity):
        return
    names = [record.name for record in quantities_of(kind)]
    if quantity not in names:
        expected = f"a quantity that a {kind} is checked for: {', '.join(names)}"
        file.problem("bad-rating-file", (*at, "quantity"), repr(quantity), expected, "name one of them")


def _read_families(file: DataFile, at: tuple[str, str], kind: str) -> tuple[str, ...]:
    if not file.has(*at, "families"):
        expected = "a list of families, empty for all of them"
        file.problem("missing-key", (*at, "families"), "nothing", expected, "add families = [...]")
    names = file.texts(*at, "families")
    known = load_families()
    found = []
    for name in names:
        family = known.find(kind, name)
        if family is None:
            expected = f"a family of {kind}s: {', '.join(known.names(kind))}"
            file.problem("unknown-name", (*at, "families"), repr(name), expected, "name one of them")
        else:
            found.append(family.name)
    return tuple(found)


def _read_rule(file: DataFile, at: tuple[str, str], quantity: str) -> Rule | None:
    given = [key for key in RULE_KEYS if file.has(*at, key)]
    if len(given) != 1:
        found = " and ".join(given) or "no rule"
        file.problem("conflicting-keys", at, found, f"exactly one of {', '.join(RULE_KEYS)}", "keep one rule a row")
        return None
    rule = _rule(file, at, given[0])
    if rule is not None and quantity and rule.for_temperature != (quantity == "temperature"):
        wanted = "a rule for temperatures" if quantity == "temperature" else "a fraction"
        file.problem("conflicting-keys", (*at, given[0]), given[0], f"{wanted} for {quantity}", "change one of them")
        return None
    return rule


def _rule(file: DataFile, at: tuple[str, str], key: str) -> Rule | None:
    if key == "allowed_fraction":
        return _fraction_rule(file, at)
    if key == "kelvin_below_maximum":
        below = file.quantity(*at, key, unit="K", least=0.0)
        return None if below is None else KelvinBelow(below)
    allowance = 0.0
    if file.has(*at, "hot_spot_allowance"):
        allowance = file.quantity(*at, "hot_spot_allowance", unit="K", least=0.0) or 0.0
    if key == "class_table":
        pairs = file.pairs(*at, key, units=("K", "K"))
        return ClassTable(pairs, allowance) if pairs else None
    fraction = file.fraction(*at, key)
    if fraction is None:
        return None
    return FractionOfCelsius(fraction, allowance) if key == "fraction_of_celsius" else ParallelLine(fraction)


def _fraction_rule(file: DataFile, at: tuple[str, str]) -> Rule | None:
    path = (*at, "allowed_fraction")
    if not isinstance(file.value(*path), dict):
        value = file.fraction(*path)
        return None if value is None else Fraction(value)
    file.known_keys(path, {"by", "points", "below_first"})
    file.one_of(*path, "by", among=("temperature",))
    points = file.pairs(*path, "points", units=("K", ""))
    below = file.one_of(*path, "below_first", among=("holds", "silent")) if file.has(*path, "below_first") else ""
    ordered = all(a[0] < b[0] for a, b in pairwise(points))
    if len(points) < 2 or not ordered or not all(0.0 <= value <= 1.0 for _, value in points):
        expected = "two or more points [temperature, fraction], rising temperatures, fractions from 0 to 1"
        file.problem("out-of-range", (*path, "points"), f"{len(points)} points", expected, "mend the points")
        return None
    return FractionOverTemperature(points, below == "holds")

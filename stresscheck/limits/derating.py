"""Which rows of a policy apply to one quantity of one part, and what to say where none does."""

from __future__ import annotations

from dataclasses import dataclass

from stresscheck.limits.families import Family, load_families
from stresscheck.limits.policy import Policy
from stresscheck.limits.policy_rows import Row
from stresscheck.limits.readings import UNKNOWN_TEMPERATURE
from stresscheck.limits.rules import Fraction, FractionOverTemperature, celsius


@dataclass(frozen=True, slots=True)
class Derating:
    """Rows that apply, each with where it stands in words; `why`: what keeps others from applying."""

    rows: tuple[tuple[Row, str], ...]
    why: str = ""


def derating_of(
    policy: Policy, kind: str, name: str, family: str | None, quantity: str, kelvin: float | None
) -> Derating:
    """Rows for a part; from the policy that fills this one where it has none, and then every text says so.

    `kelvin`: the part's own upper temperature, None where it isn't known. A part whose family isn't known
    gets no rows where they go by family: guessing a family would guess a limit.
    """
    known = load_families().find(kind, family)
    if known is None and family_matters(policy, kind, quantity):
        return Derating((), _unknown_family(policy, kind, name, family, quantity))
    rows = policy.rows_for(kind, known, quantity)
    if rows:
        return _usable(policy, rows, kelvin, f"{kind} {name}")
    lacks = f"{policy.name} has no row for {quantity} of {_called(kind, known)}"
    if policy.fill is None:
        return Derating((), lacks)
    filled = derating_of(policy.fill, kind, name, family, quantity, kelvin)
    return Derating(tuple((row, f"{lacks}; filled from {text}") for row, text in filled.rows), filled.why)


def family_matters(policy: Policy, kind: str, quantity: str) -> bool:
    """True where some family's row could change the answer; False if the rows for all are as strict."""
    rows = policy.candidates(kind, quantity)
    shared = [row.rule.value for row in rows if not row.families and isinstance(row.rule, Fraction)]
    strictest = min(shared, default=None)
    return any(
        strictest is None or row.up_to is not None or not isinstance(row.rule, Fraction) or row.rule.value < strictest
        for row in rows
        if row.families
    )


def _usable(policy: Policy, rows: tuple[Row, ...], kelvin: float | None, owner: str) -> Derating:
    found, silent = [], []
    for row in rows:
        why = _silent(policy, row, kelvin, owner)
        if why:
            silent.append(why)
        else:
            found.append((row, stands(policy, row)))
    return Derating(tuple(found), "; ".join(silent))


def _silent(policy: Policy, row: Row, kelvin: float | None, owner: str) -> str:
    """Why a row says nothing at this temperature; empty where it does."""
    if row.up_to is None and not row.rule.needs_kelvin:
        return ""
    place = f"row {row.name} of {policy.name}"
    if kelvin is None:
        return f"{place} goes by the temperature of {owner}, and {UNKNOWN_TEMPERATURE}"
    if row.up_to is not None and kelvin > row.up_to:
        return f"{place} ends at {celsius(row.up_to)}, and {owner} reaches {celsius(kelvin)}"
    if isinstance(row.rule, FractionOverTemperature) and row.rule.fraction(kelvin) is None:
        first, last = row.rule.points[0][0], row.rule.points[-1][0]
        span = f"from {celsius(first)} to {celsius(last)}"
        return f"{place} is stated {span} only, and {owner} reaches {celsius(kelvin)}"
    return ""


def stands(policy: Policy, row: Row) -> str:
    """Where a row stands: policy, rule, document, clause, edition, evidence."""
    place = f"{row.document}, {row.clause} (edition: {row.edition}; evidence: {row.evidence})"
    return f"{policy.name}: {row.rule.describe()}; {place}"


def _called(kind: str, family: Family | None) -> str:
    return f"{kind}s of family {family.name}" if family is not None else f"{kind}s"


def _unknown_family(policy: Policy, kind: str, name: str, family: str | None, quantity: str) -> str:
    families = load_families()
    known = ", ".join(families.names(kind))
    if not family:
        found = f"{kind}.{name}.family isn't given"
    else:
        close = families.nearest(kind, family)
        found = f"{kind}.{name}.family = {family!r} isn't known" + (f" (did you mean {close}?)" if close else "")
    return f"{found}, and {policy.name} goes by family for {quantity}; known: {known}"

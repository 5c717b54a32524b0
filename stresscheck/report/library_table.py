"""What ships with the program, as text: policies, parts, thresholds, families, each with its sources."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import Any

from stresscheck.cautions.thresholds import load_thresholds
from stresscheck.design.parts_file import shipped_parts
from stresscheck.limits.families import load_families
from stresscheck.limits.policy import list_policies
from stresscheck.report.lines import Lines


def library_text(shelves: Sequence[str], name: str | None, width: int = 80, *, color: bool = False) -> str:
    """Text of whole shelves, or of one entry with all its figures; KeyError with the known names."""
    out = Lines(width)
    for shelf in shelves:
        SHELVES[shelf](out, name)
    return out.text(color=color)


def _policies(out: Lines, name: str | None) -> None:
    policies = {policy.name: policy for policy in list_policies()}
    if name is not None and name not in policies:
        raise KeyError(", ".join(policies))
    out.add("derating policies", tone="open")
    for policy in policies.values():
        if name not in (None, policy.name):
            continue
        out.add(policy.name, indent=2, tone="head")
        out.add(f"{policy.title}. {policy.source}; {policy.edition} (evidence: {policy.evidence})", indent=4, hang=0)
        if name is None:
            continue
        for row in policy.rows:
            families = ", ".join(row.families) or "any family"
            out.add(
                f"{row.kind}, {families}, {row.quantity}: {row.rule.describe()}; "
                f"{row.document}, {row.edition}, {row.clause} (evidence: {row.evidence})",
                indent=4,
            )
    out.add()


def _parts(out: Lines, name: str | None) -> None:
    parts = {part: (kind, table) for kind, tables in shipped_parts().items() for part, table in tables.items()}
    if name is not None and name not in parts:
        raise KeyError(", ".join(parts))
    out.add("demonstration parts, all invented", tone="open")
    for part, (kind, table) in parts.items():
        if name not in (None, part):
            continue
        out.add(f"{part} ({kind})", indent=2, tone="head")
        rating = table.get("rating", {})
        for key, value in {**{k: v for k, v in table.items() if k != "rating"}, **rating}.items():
            if name is not None or key in ("value", "family"):
                out.add(f"{key}: {_shown(value)}", indent=4)
    out.add()


def _shown(value: Any) -> str:
    if isinstance(value, dict):
        return f"by {value.get('by')}: " + ", ".join(f"{x} {y}" for x, y in value.get("points", ()))
    return str(value)


def _thresholds(out: Lines, name: str | None) -> None:
    thresholds = load_thresholds()
    names = list(thresholds)
    if name is not None and name not in names:
        raise KeyError(", ".join(names))
    out.add("thresholds of the cautions", tone="open")
    for key in names:
        if name in (None, key):
            threshold = thresholds[key]
            out.add(key, indent=2, tone="head")
            shown = ", ".join(f"{figure.name} {figure.text}" for figure in threshold.figures.values())
            out.add(f"{threshold.hazard}: {threshold.comparison}, {threshold.basis}; {shown}", indent=4)
            out.add(f"source: {threshold.sources()}", indent=4)
            if name is not None and threshold.not_covered:
                out.add(f"not covered: {threshold.not_covered}", indent=4)
    out.add()


def _families(out: Lines, name: str | None) -> None:
    spellings: dict[tuple[str, str], list[str]] = {}
    for (kind, word), family in load_families().by_word.items():
        spellings.setdefault((kind, family.name), []).append(word)
    if name is not None and name not in {family for _, family in spellings}:
        raise KeyError(", ".join(dict.fromkeys(family for _, family in spellings)))
    out.add("families of parts, with other spellings", tone="open")
    for (kind, family_name), words in spellings.items():
        if name in (None, family_name):
            others = ", ".join(word for word in words if word != family_name)
            out.add(f"{family_name} ({kind}){': ' + others if others else ''}", indent=2)
    out.add()


SHELVES: dict[str, Callable[[Lines, str | None], None]] = {
    "policies": _policies,
    "parts": _parts,
    "thresholds": _thresholds,
    "families": _families,
}
"""Shelf → what prints it."""

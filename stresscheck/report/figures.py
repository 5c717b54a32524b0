"""How figures are shown: with a prefix, four digits, and rounded toward danger."""

from __future__ import annotations

import math
from collections.abc import Iterable

from stresscheck.findings.finding import Finding
from stresscheck.units import render

NOTHING = "-"
"""Shown where there is no figure."""


def stress(value: float | None, unit: str) -> str:
    """A stress or bound, rounded up: 1.0001 never reads as 1.000."""
    return NOTHING if value is None else render(value, unit, 4, "up")


def limit(value: float | None, unit: str) -> str:
    """A rating or allowed value, rounded down."""
    return NOTHING if value is None else render(value, unit, 4, "down")


def plain(value: float | None, unit: str) -> str:
    """A figure that is neither, rounded to nearest."""
    return NOTHING if value is None else render(value, unit, 4)


def percent(ratio: float | None) -> str:
    """A ratio to a limit in percent, rounded up."""
    if ratio is None:
        return NOTHING
    tenths = math.ceil(round(ratio * 1000.0, 9))
    return f"{tenths / 10:.1f} %"


ZERO_CELSIUS = 273.15


def share(finding: Finding) -> float | None:
    """How much of its limit a finding uses, for ranking and bars; temperatures on the scale in degC.

    In kelvin every temperature would seem close to its limit.
    """
    if finding.unit != "K" or finding.worst is None or finding.allowed is None:
        return finding.ratio
    span = finding.allowed - ZERO_CELSIUS
    return (finding.worst - ZERO_CELSIUS) / span if span > 0.0 else finding.ratio


def closest(findings: Iterable[Finding]) -> Finding | None:
    """The finding that uses most of its limit, accepted ones left out; None where no finding has a limit.

    An event that only comes up to the steady state stands behind it.
    """
    ranked = [f for f in findings if f.ratio is not None and not f.accepted]
    return max(ranked, key=lambda f: (share(f) or 0.0) * (1.0 if f.event == "steady" else 1.0 - NO_MORE), default=None)


NO_MORE = 1e-3
"""An event that exceeds the steady figure by less than this, relative, isn't told in full beside it."""


def adds_nothing(event: Finding, steady: Finding) -> bool:
    """Does an event only come up to a steady figure of the same part, quantity and state, with the same verdict?"""
    same = (event.part, event.quantity, event.state, event.verdict) == (
        steady.part, steady.quantity, steady.state, steady.verdict,
    )  # fmt: skip
    if not same or event.event == "steady" or steady.event != "steady":
        return False
    return event.worst is not None and steady.worst is not None and event.worst <= steady.worst * (1.0 + NO_MORE)


def share_of_bound(finding: Finding) -> float | None:
    """The same for the proved bound."""
    if finding.unit != "K" or finding.bound is None or finding.allowed is None:
        return finding.ratio_bound
    span = finding.allowed - ZERO_CELSIUS
    return (finding.bound - ZERO_CELSIUS) / span if span > 0.0 else finding.ratio_bound


def room(finding: Finding) -> str:
    """How close to the limit: in percent of it, or for temperatures in kelvin below or above it."""
    if finding.unit != "K" or finding.worst is None or finding.allowed is None:
        return percent(finding.ratio)
    left = math.floor(10.0 * (finding.allowed - finding.worst)) / 10.0
    return f"{left:.1f} K left" if left >= 0.0 else f"{-left:.1f} K over"


def limit_in_words(finding: Finding) -> str:
    """The limit and where it comes from: "600.0 V (0.6 of 1.000 kV)"."""
    if finding.allowed is None:
        return "no limit"
    allowed = limit(finding.allowed, finding.unit)
    if finding.allowed_fraction is None or finding.rated is None:
        return f"{allowed} (rated {limit(finding.rated, finding.unit)})" if finding.rated is not None else allowed
    if finding.allowed_fraction == 1.0:
        return f"{allowed} (the full rating)"
    return f"{allowed} ({finding.allowed_fraction:g} of {limit(finding.rated, finding.unit)})"


def corners_fall_short(finding: Finding) -> str:
    """What the corners of the box alone would have said, where that is lower by more than 10 %; else empty."""
    proof = finding.proof
    if proof is None or proof.corners is None or not finding.worst or finding.unit == "K":
        return ""
    if not proof.corners < 0.9 * finding.worst:
        return ""
    missed = finding.worst / proof.corners if proof.corners > 0.0 else math.inf
    times = f", {missed:.3g} times too low" if math.isfinite(missed) else ""
    return f"corners alone would have said {plain(proof.corners, finding.unit)}{times}"


UNITS = {"capacitor": "F", "inductor": "H", "resistor": "ohm"}


def place_value(path: str, value: float) -> str:
    """One value of the worst point: "Ctank 142.5 nF" for an element's value, the whole path for others."""
    kind, name, key = path.split(".", 2)
    if key == "value" and kind in UNITS:
        return f"{name} {plain(value, UNITS[kind])}"
    if key == "frequency":
        return f"{name} {plain(value, 'Hz')}"
    if key == "factor":
        return f"{name} {value:.4g}"
    return f"{name} {key} {value:.4g}"

"""Stress against limit → verdict. Nothing passes but by its bound."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from stresscheck.limits.limit import Limit
from stresscheck.limits.part_limits import PartLimits

EQUAL = 1e-9
"""Figures that agree to this, relative, are equal: rounding must not decide between within and above."""


@dataclass(frozen=True, slots=True)
class Judgement:
    """The verdict of one finding and the limit that binds at the worst point; figures None where there are none."""

    verdict: str
    limit: Limit | None
    rated: float | None
    allowed: float | None
    ratio: float | None
    why: str


def binding_limit(limits: tuple[Limit, ...], hertz: float) -> tuple[Limit, float, float] | None:
    """The limit with the smallest allowed value at a frequency, with its rated and allowed values."""
    at = np.array([hertz])
    best = None
    for limit in limits:
        rated, allowed = float(limit.rated(at)[0]), float(limit.allowed(at)[0])
        if math.isfinite(allowed) and (best is None or allowed < best[2]):
            best = (limit, rated, allowed)
    return best


def judge(
    limits: PartLimits, silent: str, worst: float | None, bound_use: float | None, hertz: float, obstacle: str
) -> Judgement:
    """Verdict of a stress `worst` that occurs at `hertz`.

    bound_use: proved upper bound of stress over allowed value, anywhere in the box; None where none was proved.
    silent: where a rating says nothing within the band, empty where it speaks all over; obstacle: why the stress
    couldn't be computed.
    """
    found = binding_limit(limits.limits, hertz)
    limit, rated, allowed = found if found is not None else (None, None, None)
    why = "; ".join(text for text in (limits.why, silent) if text)
    if obstacle or worst is None or not math.isfinite(worst):
        reason = obstacle or "the circuit has no solution that can be vouched for"
        return Judgement("not-checked", limit, rated, allowed, None, "; ".join(t for t in (reason, why) if t))
    ratio = worst / allowed if allowed else None
    if rated is not None and not worst <= _lowest_rated(limits, hertz) * (1.0 + EQUAL):
        return Judgement("above-rating", limit, rated, allowed, ratio, why)
    if allowed is not None and not worst <= allowed * (1.0 + EQUAL):
        return Judgement("above-derated", limit, rated, allowed, ratio, why)
    if limits.outcome != "limits" or silent or limit is None:
        verdict = "not-checked" if limits.outcome == "not-checked" else "no-rating"
        return Judgement(verdict, limit, rated, allowed, ratio, why or "no limit could be formed")
    if bound_use is not None and bound_use <= 1.0 + EQUAL:
        return Judgement("within", limit, rated, allowed, ratio, "")
    gap = "no bound was proved" if bound_use is None else f"the proved bound is {bound_use:.4g} of the limit"
    return Judgement("unproved", limit, rated, allowed, ratio, f"{gap}; allow the search more time (--budget)")


def _lowest_rated(limits: PartLimits, hertz: float) -> float:
    at = np.array([hertz])
    values = [float(limit.rated(at)[0]) for limit in limits.limits]
    return min(value for value in values if math.isfinite(value))

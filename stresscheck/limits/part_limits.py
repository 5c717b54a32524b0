"""The limits of one quantity of one part under a policy, or why there are none."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

from stresscheck.limits.derating import Derating, derating_of
from stresscheck.limits.families import load_families
from stresscheck.limits.limit import Limit
from stresscheck.limits.policy import Policy
from stresscheck.limits.policy_rows import Row
from stresscheck.limits.quantities import Quantity, quantity_of
from stresscheck.limits.rated import Rated, number
from stresscheck.limits.readings import Reading, lowest, read_rating

OUTCOMES = ("limits", "no-rating", "not-checked", "not-asked")


@dataclass(frozen=True, slots=True)
class PartLimits:
    """What a stress of one quantity is compared with. All limits apply: the smallest allowed value counts.

    `required`: sign-off needs this quantity. `outcome`: "limits"; "no-rating" (a rating that sign-off needs
    is missing, or one that is given says nothing at this temperature); "not-checked" (the policy gives no
    figure); "not-asked" (no rating, and none needed: no finding). `why` is empty for "limits" only, or
    "not-asked". With "no-rating" and "not-checked" `limits` may still hold those that are known: a stress
    above one of them is above it, whatever else is missing.
    """

    limits: tuple[Limit, ...]
    required: bool
    why: str
    outcome: str


def limits_for(
    policy: Policy,
    kind: str,
    name: str,
    part: Any,
    quantity: str,
    *,
    kelvin: float | None,
    full: bool,
) -> PartLimits:
    """Limits of `quantity` for the part `name` of a design, under `policy`.

    `part`: a part of the design (`rating`, `family`); `kelvin`: its own upper temperature, None where it
    isn't known; `full`: a fault state, compared with full ratings. ValueError for a quantity the kind isn't
    checked for.
    """
    record = quantity_of(kind, quantity)
    own = kelvin if kelvin is not None and math.isfinite(kelvin) else None
    rating = getattr(part, "rating", None)
    missing = missing_rating(record, kind, name, part)
    readings = [
        read_rating(f"{kind} {name}", key, getattr(rating, key), record.unit, own)
        for key in record.rating_keys
        if getattr(rating, key, None) is not None
    ]
    required = bool(missing) or _answers_need(record, readings)
    if not readings:
        return PartLimits((), required, missing, "no-rating" if missing else "not-asked")
    source = _rating_source(kind, name, rating)
    silent = [reading.why for reading in readings if reading.why]
    spoken = [reading for reading in readings if not reading.why]
    if full:
        limits = [_full(record, reading, source) for reading in spoken]
        return _result(limits, required, missing, silent, "")
    derating = derating_of(policy, kind, name, getattr(part, "family", None), quantity, own)
    limits = [limit for reading in spoken for limit in _derated(record, reading, source, derating, own)]
    if limits and any(row.root_of_power for row, _ in derating.rows):
        limits += _by_power(policy, kind, name, part, record, derating, own)
    why = derating.why or ("" if limits else f"no row of {policy.name} gives a figure for this rating")
    return _result(limits, required, missing, silent, why)


def missing_rating(record: Quantity, kind: str, name: str, part: Any) -> str:
    """Which rating sign-off misses; empty where it is given, or where another quantity reports it."""
    need = record.need
    if need is None or need.speaker != record.name:
        return ""
    rating = getattr(part, "rating", None)
    if any(getattr(rating, key, None) is not None for key in need.rating_keys):
        return ""
    family = load_families().find(kind, getattr(part, "family", None))
    if family is not None and family.name in need.families:
        return ""
    return f"{kind}.{name}.rating has no figure that sign-off needs here: {need.title}"


def _answers_need(record: Quantity, readings: list[Reading]) -> bool:
    return record.need is not None and any(reading.key in record.need.rating_keys for reading in readings)


def _result(limits: list[Limit], required: bool, missing: str, silent: list[str], unruled: str) -> PartLimits:
    no_rating = "; ".join([text for text in (missing, *silent) if text])
    if no_rating:
        return PartLimits(tuple(limits), required, no_rating, "no-rating")
    if unruled or not limits:
        return PartLimits(tuple(limits), required, unruled or "no limit could be formed", "not-checked")
    return PartLimits(tuple(limits), required, "", "limits")


def _rating_source(kind: str, name: str, rating: Any) -> str:
    source = getattr(rating, "source", None)
    return str(source) if source else f"{kind}.{name}.rating of the design, which names no document"


def _full(record: Quantity, reading: Reading, source: str) -> Limit:
    assert reading.curve is not None
    return Limit(
        record.name,
        record.unit,
        reading.key,
        1.0,
        source,
        "full rating: a fault state is compared without derating",
        reading.text,
        reading.curve,
        reading.curve,
        "the full rating",
    )


def _derated(record: Quantity, reading: Reading, source: str, derating: Derating, kelvin: float | None) -> list[Limit]:
    """One limit for each row that speaks; a row that is silent for this rating gives none."""
    assert reading.curve is not None
    found = []
    for row, stands in derating.rows:
        allowed = _allowed_curve(row, reading, kelvin)
        if allowed is not None:
            found.append(
                Limit(
                    record.name,
                    record.unit,
                    reading.key,
                    _share(row, reading.curve, allowed, kelvin),
                    source,
                    stands,
                    reading.text,
                    reading.curve,
                    allowed,
                    row.rule.describe(),
                    _numbers(row, reading, kelvin, record.unit),
                )
            )
    return found


def _numbers(row: Row, reading: Reading, kelvin: float | None, unit: str) -> str:
    curve = reading.curve
    assert curve is not None
    if not curve.constant:
        return ""
    return row.rule.numbers(float(curve.value[0]), reading.largest, kelvin, unit)


def _share(row: Row, rated: Rated, allowed: Rated, kelvin: float | None) -> float | None:
    """allowed / rated, the same at every frequency; None for temperatures, where it has no meaning."""
    fraction = row.rule.fraction(kelvin)
    if fraction is not None or row.rule.for_temperature:
        return fraction
    if allowed.constant:
        return float(allowed.scale * allowed.value[0] / rated.value[0]) if rated.value[0] > 0.0 else None
    return allowed.scale


def _allowed_curve(row: Row, reading: Reading, kelvin: float | None) -> Rated | None:
    """What the row leaves of a rating, None where it says nothing about it."""
    curve = reading.curve
    assert curve is not None
    fraction = row.rule.fraction(kelvin)
    if fraction is not None:
        return curve.times(fraction)
    if not curve.constant:
        return None if row.rule.for_temperature else curve.times(row.rule.allowed(1.0, 1.0, kelvin))
    allowed = row.rule.allowed(float(curve.value[0]), reading.largest, kelvin)
    return None if math.isnan(allowed) else number(allowed)


def _by_power(
    policy: Policy,
    kind: str,
    name: str,
    part: Any,
    record: Quantity,
    derating: Derating,
    kelvin: float | None,
) -> list[Limit]:
    """RMS voltage from power, V = sqrt(P_allowed R), with the smallest resistance of a fixed resistor.

    A resistor that can be set has no single such voltage; its dissipation is checked at every setting
    instead.
    """
    ohm = lowest(part)
    if ohm is None or record.name != "voltage_rms":
        return []
    power = limits_for(policy, kind, name, part, "dissipation", kelvin=kelvin, full=False)
    sources = "; ".join(text for row, text in derating.rows if row.root_of_power)
    return [
        Limit(
            record.name,
            record.unit,
            limit.rating_key,
            None,
            limit.rating_source,
            f"{sources}; its power by {limit.derating_source}",
            f"sqrt({limit.rated_text} x {ohm:.6g} ohm)",
            limit.rated_curve.root_times(ohm),
            limit.allowed_curve.root_times(ohm),
            "root of allowed dissipation times the smallest resistance within tolerance",
            f"sqrt(allowed dissipation x {ohm:.6g} ohm)",
        )
        for limit in power.limits
    ]

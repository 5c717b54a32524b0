"""Words and figures that all cautions share. Figures are rounded up: never below the value they stand for."""

from __future__ import annotations

from decimal import ROUND_CEILING, ROUND_FLOOR, Context, Decimal

from stresscheck.cautions.facts import CapacitorFact, NodeFact
from stresscheck.cautions.thresholds import Thresholds

DEFER = "Guards, interlocks, wait times and labels: local codes and a licensed or qualified person decide."
_PREFIXES = (
    (1e9, "G"),
    (1e6, "M"),
    (1e3, "k"),
    (1.0, ""),
    (1e-3, "m"),
    (1e-6, "u"),
    (1e-9, "n"),
    (1e-12, "p"),
)


def shown(value: float, unit: str, digits: int = 3, *, down: bool = False) -> str:
    """A figure with a prefix, rounded up in size to `digits`: 42.41 V → "42.5 V", 873.2 V → "874 V".

    down: rounded down instead, for figures of which less is asked for.
    """
    if value == 0.0:
        return f"0 {unit}"
    rounded = Context(prec=digits, rounding=ROUND_FLOOR if down else ROUND_CEILING).create_decimal(f"{abs(value):.12g}")
    for factor, prefix in _PREFIXES:
        if rounded >= Decimal(repr(factor)) or factor == 1e-12:
            return f"{float(rounded / Decimal(repr(factor))):.{digits + 3}g} {prefix}{unit}"
    raise AssertionError("the smallest prefix takes every value")


def plain_seconds(value: float) -> str:
    """A time for people: seconds, minutes or hours, rounded up."""
    for size, word in ((3600.0, "h"), (60.0, "min")):
        if value >= 2.0 * size:
            return shown_number(value / size) + f" {word}"
    return shown(value, "s")


def shown_number(value: float, digits: int = 3) -> str:
    """A bare number rounded up to `digits`."""
    rounded = Context(prec=digits, rounding=ROUND_CEILING).create_decimal(f"{value:.12g}")
    return f"{float(rounded):.{digits + 3}g}"


def levels(fact: NodeFact) -> str:
    """Peak, RMS and DC of a node, each named."""
    peak, rms, dc = (shown(volt, "V") for volt in (fact.volt_peak, fact.volt_rms, fact.volt_dc))
    return f"{peak} peak, {rms} RMS of AC, {dc} DC"


def reason(fact: NodeFact | CapacitorFact) -> str:
    """Why the voltage is there: gain times drive, and the resonance; empty where nothing is known of it."""
    if not fact.drive:
        return ""
    where = f" at the resonance at {shown(fact.resonance_hertz, 'Hz', 4)}" if fact.resonance_hertz else ""
    if fact.gain is None or fact.drive_volt_peak is None:
        return f" Reason: drive {fact.drive}{where}."
    drive = f"drive {fact.drive} {shown(fact.drive_volt_peak, 'V')} peak"
    return f" Reason: gain {shown_number(fact.gain)} x {drive}{where}."


def before_work(thresholds: Thresholds) -> str:
    """What to do before hands go near, with its sources."""
    rule = thresholds["before-work"]
    sources = ", ".join(f"{source.document} {source.clause}" for source in (rule.source, *rule.also))
    return f"Before work: {rule.basis} ({sources})."


def not_covered(text: str) -> str:
    """What a caution says nothing about."""
    return f" Not covered: {text}."

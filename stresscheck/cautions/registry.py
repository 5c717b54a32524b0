"""The registry of hazards: their order of severity, their thresholds, and the one call that runs them all."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from stresscheck.cautions import discharge, rf_burn, stored_charge, stored_energy, touch, unknown
from stresscheck.cautions.caution import Caution
from stresscheck.cautions.facts import Facts
from stresscheck.cautions.thresholds import Thresholds, load_thresholds
from stresscheck.errors import InputError, Problem


@dataclass(frozen=True, slots=True)
class Hazard:
    """One hazard: what it is called, the thresholds it reads, and the function that looks for it."""

    name: str
    title: str
    thresholds: tuple[str, ...]
    find: Callable[[Facts, Thresholds], list[Caution]]


HAZARDS: tuple[Hazard, ...] = (
    Hazard("touch-voltage", "touch voltage", touch.FULL, touch.touch_full),
    Hazard("unknown-voltage", "voltage that couldn't be computed", unknown.IDS, unknown.unknown_voltage),
    Hazard("stored-energy", "stored energy", stored_energy.IDS, stored_energy.stored_energy),
    Hazard("stays-charged", "trapped DC, no discharge path", discharge.IDS, discharge.stays_charged),
    Hazard("rf-burn", "burn by radio frequency", rf_burn.IDS, rf_burn.rf_burn),
    Hazard("stored-charge", "stored charge", stored_charge.IDS, stored_charge.stored_charge),
    Hazard("slow-discharge", "slow discharge", discharge.IDS, discharge.slow_discharge),
    Hazard("touch-notice", "touch voltage, notice", touch.NOTICE, touch.touch_notice),
)
"""Most severe first: the order of a report."""


def cautions_for(facts: Facts, thresholds: Thresholds | None = None) -> tuple[Caution, ...]:
    """All cautions that the facts trigger, most severe first, then by subject. None clears anything.

    `thresholds`: those of another folder; left out, the shipped ones. InputError where one that a hazard
    reads is missing from them.
    """
    data = load_thresholds() if thresholds is None else thresholds
    missing = sorted({name for hazard in HAZARDS for name in hazard.thresholds if name not in data})
    if missing:
        raise InputError(
            Problem("bad-rating-file", "thresholds", None, f"threshold.{name}", "nothing", "a threshold", "add it")
            for name in missing
        )
    return tuple(caution for hazard in HAZARDS for caution in hazard.find(facts, data))

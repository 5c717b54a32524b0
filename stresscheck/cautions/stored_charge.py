"""Charge that a capacitor keeps and that a hand can meet, in three tiers by voltage."""

from __future__ import annotations

from dataclasses import dataclass

from stresscheck.cautions.caution import Caution
from stresscheck.cautions.facts import CapacitorFact, Facts
from stresscheck.cautions.select import worst_capacitors
from stresscheck.cautions.thresholds import Threshold, Thresholds
from stresscheck.cautions.wording import DEFER, before_work, not_covered, reason, shown

IDS = ("stored-charge-low", "stored-charge-middle", "stored-charge-high", "before-work")


def stored_charge(facts: Facts, thresholds: Thresholds) -> list[Caution]:
    """Capacitors above the tier of their voltage; the state with the largest charge is named.

    Capacitance counts at low voltage, charge in the middle, energy above. The tiers meet: 0.1 uF x 450 V = 45
    uC.
    """
    found = []
    for fact in worst_capacitors(
        facts, lambda fact: _fires(fact, thresholds) is not None, lambda fact: fact.volt * fact.farad
    ):
        chosen = _fires(fact, thresholds)
        assert chosen is not None
        found.append(_caution(fact, chosen, thresholds))
    return found


@dataclass(frozen=True, slots=True)
class _Fired:
    """The tier that fired, the figure it fired on, the value there, and the tier's range in words."""

    tier: Threshold
    figure: str
    value: float
    unit: str
    where: str


def _fires(fact: CapacitorFact, thresholds: Thresholds) -> _Fired | None:
    """The first tier that fires, from the highest voltage down; a border belongs to both sides."""
    low, middle, high = (thresholds[name] for name in IDS[:3])
    charge, energy = fact.farad * fact.volt, fact.joule
    if fact.volt > high.figure("voltage_above") and energy > high.figure("energy"):
        return _Fired(high, "energy", energy, "J", f"above {high.shown('voltage_above')}")
    in_middle = middle.figure("voltage_from") <= fact.volt <= middle.figure("voltage_to")
    if in_middle and charge > middle.figure("charge"):
        words = f"from {middle.shown('voltage_from')} to {middle.shown('voltage_to')}"
        return _Fired(middle, "charge", charge, "C", words)
    in_low = low.figure("voltage_above") < fact.volt <= low.figure("voltage_to")
    if in_low and fact.farad > low.figure("capacitance"):
        words = f"above {low.shown('voltage_above')} peak, up to {low.shown('voltage_to')}"
        return _Fired(low, "capacitance", fact.farad, "F", words)
    return None


def _caution(fact: CapacitorFact, fired: _Fired, thresholds: Thresholds) -> Caution:
    tier = fired.tier
    text = (
        f"{shown(fact.farad * fact.volt, 'C')} on {fact.part} ({shown(fact.farad, 'F')} at "
        f"{shown(fact.volt, 'V')} peak, DC included) in state {fact.state}: stored charge.{reason(fact)} "
        f"Fires above {tier.shown(fired.figure)}, {fired.where}. "
        f"{before_work(thresholds)}{not_covered(tier.not_covered)} {DEFER}"
    )
    return Caution(
        f"stored-charge.{fact.part}",
        fact.part,
        text,
        fired.value,
        fired.unit,
        tier.figure(fired.figure),
        tier.sources(),
        tier.source.evidence,
    )

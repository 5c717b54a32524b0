"""Energy that a capacitor keeps, in three tiers by voltage."""

from __future__ import annotations

from stresscheck.cautions.caution import Caution
from stresscheck.cautions.facts import CapacitorFact, Facts
from stresscheck.cautions.select import worst_capacitors
from stresscheck.cautions.thresholds import Threshold, Thresholds
from stresscheck.cautions.wording import DEFER, before_work, not_covered, reason, shown, shown_number
from stresscheck.limits.families import load_families

IDS = (
    "stored-energy-high",
    "stored-energy-middle",
    "stored-energy-low",
    "stored-energy-older-tier",
    "recharge",
    "before-work",
)


def stored_energy(facts: Facts, thresholds: Thresholds) -> list[Caution]:
    """Capacitors whose energy is above the tier of their voltage; names the state of largest energy."""

    def fires(fact: CapacitorFact) -> bool:
        return fact.joule > _tier(fact.volt, thresholds).figure("energy")

    worst = worst_capacitors(facts, fires, lambda fact: fact.joule)
    return [_caution(fact, _tier(fact.volt, thresholds), thresholds) for fact in worst]


def _tier(volt: float, thresholds: Thresholds) -> Threshold:
    """The tier that speaks of this voltage; a border belongs to the tier above it, which is the stricter."""
    for name in ("stored-energy-high", "stored-energy-middle"):
        if volt >= thresholds[name].figure("voltage_from"):
            return thresholds[name]
    return thresholds["stored-energy-low"]


def _caution(fact: CapacitorFact, tier: Threshold, thresholds: Thresholds) -> Caution:
    older = thresholds["stored-energy-older-tier"]
    shock = fact.joule >= older.figure("energy") and fact.volt >= older.figure("voltage_from")
    also = f" {older.shown('energy')} at {older.shown('voltage_from')} and more: risk of shock." if shock else ""
    text = (
        f"{shown(fact.joule, 'J')} in {fact.part} ({shown(fact.farad, 'F')} at {shown(fact.volt, 'V')} "
        f"peak, DC included) in state {fact.state}: stored energy.{reason(fact)} "
        f"Fires above {tier.shown('energy')} {_range(tier)}.{also} "
        f"{before_work(thresholds)}{_recovery(fact, thresholds)}{not_covered(tier.not_covered)} {DEFER}"
    )
    source = f"{tier.sources()}; {older.sources()}" if shock else tier.sources()
    threshold = tier.figure("energy")
    return Caution(
        f"stored-energy.{fact.part}",
        fact.part,
        text,
        fact.joule,
        "J",
        threshold,
        source,
        tier.source.evidence,
    )


def _range(tier: Threshold) -> str:
    start, end = tier.figures.get("voltage_from"), tier.figures.get("voltage_below")
    if start and end:
        return f"from {start.text} to below {end.text}"
    return f"from {start.text} up" if start else f"below {end.text}" if end else "at any voltage"


def _recovery(fact: CapacitorFact, thresholds: Thresholds) -> str:
    """Electrolytics charge themselves again after a short; other families get no such line."""
    family = load_families().find("capacitor", fact.kind_family)
    if family is None or family.name != "aluminium electrolytic":
        return ""
    recharge = thresholds["recharge"]
    low, high = (100.0 * recharge.figure(name) for name in ("fraction_low", "fraction_high"))
    return (
        f" After a short, an electrolytic recovers {shown_number(low)} to {shown_number(high)} % of its "
        f"former voltage ({recharge.source.document}, evidence: {recharge.source.evidence})."
    )

"""Voltage that stays after switch-off: trapped DC, no discharge path, or a path that is slow or unknown."""

from __future__ import annotations

import math

from stresscheck.cautions.caution import Caution
from stresscheck.cautions.facts import CapacitorFact, Facts
from stresscheck.cautions.select import worst_capacitors
from stresscheck.cautions.thresholds import Threshold, Thresholds
from stresscheck.cautions.wording import DEFER, before_work, not_covered, plain_seconds, reason, shown

IDS = (
    "discharge",
    "discharge-plug",
    "discharge-nec",
    "discharge-california",
    "discharge-shunt-capacitors",
    "dc-trapped",
    "touch-notice-dc",
    "before-work",
)


def seconds_to(farad: float, ohm: float, start: float, end: float) -> float:
    """Time for a capacitor to fall from `start` to `end` volts through `ohm`: t = R C ln(start/end) [s].

    0 where it starts at or below `end`. Exact for a single capacitor and one resistance; other parts that
    feed it make it longer. Check: 400 V to 60 V in 5 s takes R C = 2.64 s. Source: circuit theory.
    """
    return farad * ohm * math.log(start / end) if start > end else 0.0


def stays_charged(facts: Facts, thresholds: Thresholds) -> list[Caution]:
    """Capacitors that keep DC or have no permanent discharge path, from the touch notice up."""
    floor = thresholds["touch-notice-dc"].figure("voltage")
    return [_stays(fact, thresholds, floor) for fact in _staying(facts, floor)]


def slow_discharge(facts: Facts, thresholds: Thresholds) -> list[Caution]:
    """Capacitors whose path is slow or of unknown resistance; not those that stay charged."""
    floor = thresholds["touch-notice-dc"].figure("voltage")
    staying = {fact.part for fact in _staying(facts, floor)}
    end = thresholds["discharge"].figure("voltage")
    shortest = thresholds["discharge-plug"].figure("time")

    def fires(fact: CapacitorFact) -> bool:
        return fact.part not in staying and _time(fact, end) > shortest

    worst = worst_capacitors(facts, fires, lambda fact: _time(fact, end))
    return [_slow(fact, _time(fact, end), thresholds) for fact in worst]


def _staying(facts: Facts, floor: float) -> list[CapacitorFact]:
    """The capacitors that stay charged, each in its worst state."""
    return list(worst_capacitors(facts, lambda fact: _kept(fact, floor) > 0.0, lambda fact: _kept(fact, floor)))


def _kept(fact: CapacitorFact, floor: float) -> float:
    """Voltage that stays on the capacitor [V], 0 where it is below the floor or a path takes it away."""
    trapped = abs(fact.volt_dc_trapped or 0.0)
    kept = trapped if fact.has_discharge_path else fact.volt
    return kept if kept >= floor else 0.0


def _time(fact: CapacitorFact, end: float) -> float:
    """Time to `end` volts [s]; infinite where it starts above and the path's resistance isn't known."""
    if fact.volt <= end:
        return 0.0
    computed = fact.seconds_to(end)
    if computed is not None:
        return computed
    if fact.discharge_ohm is None or not math.isfinite(fact.discharge_ohm):
        return math.inf
    return seconds_to(fact.farad, fact.discharge_ohm, fact.volt, end)


def _stays(fact: CapacitorFact, thresholds: Thresholds, floor: float) -> Caution:
    rule, trap = thresholds["discharge"], thresholds["dc-trapped"]
    trapped, kept = abs(fact.volt_dc_trapped or 0.0), _kept(fact, floor)
    if trapped >= floor:
        hazard, cause = "trapped-dc", "no path for direct current takes it away after switch-off"
        numbers = f"{shown(kept, 'V')} peak can stay on {fact.part}, {shown(trapped, 'V')} of it trapped DC,"
        fired = (trap, rule)
    else:
        hazard, cause = "no-discharge-path", "no permanent discharge path with the drives open"
        numbers = f"{shown(kept, 'V')} peak can stay on {fact.part}"
        fired = (rule, rule)
    text = (
        f"{numbers} in state {fact.state}: {cause}.{reason(fact)} Fires from {shown(floor, 'V')} up. "
        f"{_bleeder(fact, thresholds)}{_rest(fired[0], thresholds)}"
    )
    source = "; ".join(dict.fromkeys(threshold.sources() for threshold in fired))
    evidence = fired[0].source.evidence
    return Caution(f"{hazard}.{fact.part}", fact.part, text, kept, "V", floor, source, evidence)


def _slow(fact: CapacitorFact, seconds: float, thresholds: Thresholds) -> Caution:
    rule, plug = thresholds["discharge"], thresholds["discharge-plug"]
    if math.isinf(seconds):
        return _unknown_time(fact, rule, thresholds)
    tier = rule if seconds > rule.figure("time") else plug
    where = "" if tier is rule else " where pulling a plug bares its contacts"
    text = (
        f"{plain_seconds(seconds)} until {fact.part} falls from {shown(fact.volt, 'V')} peak to "
        f"{rule.shown('voltage')} in state {fact.state}, drives stopped.{reason(fact)} Fires above "
        f"{tier.shown('time')}{where}. {_bleeder(fact, thresholds)}{_rest(tier, thresholds)}"
    )
    threshold, evidence = tier.figure("time"), tier.source.evidence
    name = f"slow-discharge.{fact.part}"
    return Caution(name, fact.part, text, seconds, "s", threshold, tier.sources(), evidence)


def _unknown_time(fact: CapacitorFact, rule: Threshold, thresholds: Thresholds) -> Caution:
    text = (
        f"{shown(fact.volt, 'V')} peak on {fact.part} in state {fact.state}: a discharge path is there, "
        f"but its resistance isn't known, so the time to {rule.shown('voltage')} couldn't be computed."
        f"{reason(fact)} {_rest(rule, thresholds)}"
    )
    threshold, evidence = rule.figure("voltage"), rule.source.evidence
    name = f"discharge-time-unknown.{fact.part}"
    return Caution(name, fact.part, text, fact.volt, "V", threshold, rule.sources(), evidence)


def _rest(fired: Threshold, thresholds: Thresholds) -> str:
    """What every caution of this file ends with."""
    return f"{_wanted(thresholds)} {before_work(thresholds)}{not_covered(fired.not_covered)} {DEFER}"


def _bleeder(fact: CapacitorFact, thresholds: Thresholds) -> str:
    """Resistance, voltage and power of a bleeder for the time that is asked for; empty where none is needed."""
    rule = thresholds["discharge"]
    level, seconds = rule.figure("voltage"), rule.figure("time")
    if not math.isfinite(fact.volt) or fact.volt <= level:
        return ""
    ohm = seconds / (fact.farad * math.log(fact.volt / level))
    return (
        f"As advice: a bleeder of at most {shown(ohm, 'ohm', down=True)} for {shown(fact.volt, 'V')} takes {fact.part} alone to "
        f"{rule.shown('voltage')} in {rule.shown('time')}, and up to {shown(fact.volt**2 / ohm, 'W')} while it is on. "
    )


def _wanted(thresholds: Thresholds) -> str:
    """What documents ask of a discharge path, each named."""
    rule, nec = thresholds["discharge"], thresholds["discharge-nec"]
    shunt, state = thresholds["discharge-shunt-capacitors"], thresholds["discharge-california"]
    power = f"{nec.source.document} {nec.source.clause}, {state.source.document} {state.source.clause}"
    return (
        f"Asked for: {rule.shown('voltage')} in {rule.shown('time')} ({rule.source.document}); "
        f"{nec.shown('voltage')} in {nec.shown('time_low_voltage')}, at higher voltage in "
        f"{nec.shown('time_higher_voltage')} ({power}); {shunt.shown('voltage')} in {shunt.shown('time')} "
        f"({shunt.source.document})."
    )

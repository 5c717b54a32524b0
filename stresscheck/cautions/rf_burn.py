"""Burn by radio frequency: a touch caution fired, and the frequency is high."""

from __future__ import annotations

from stresscheck.cautions.caution import Caution
from stresscheck.cautions.facts import Facts, NodeFact
from stresscheck.cautions.select import worst_nodes
from stresscheck.cautions.thresholds import Thresholds
from stresscheck.cautions.touch import is_full, is_notice
from stresscheck.cautions.wording import DEFER, levels, not_covered, reason, shown

IDS = ("rf-burn", "rf-burn-no-tingling")


def rf_burn(facts: Facts, thresholds: Thresholds) -> list[Caution]:
    """Nodes within reach whose touch caution fired, at or above 30 kHz; the upper end of the band counts."""
    lowest = thresholds["rf-burn"].figure("frequency")

    def fires(fact: NodeFact) -> bool:
        touched = is_notice(fact, thresholds) or is_full(fact, thresholds)
        return touched and fact.volt_rms > 0.0 and max(fact.hertz, facts.hertz_highest) >= lowest

    worst = worst_nodes(facts, fires, lambda fact: max(fact.volt_peak, fact.total_rms))
    return [_caution(fact, max(fact.hertz, facts.hertz_highest), thresholds) for fact in worst]


def _caution(fact: NodeFact, hertz: float, thresholds: Thresholds) -> Caution:
    low, high = (thresholds[name] for name in IDS)
    silent = hertz >= high.figure("frequency")
    feel = (
        f" From {high.shown('frequency')} burns come without prior tingling; "
        "a brushing contact is worse than a firm one."
        if silent
        else ""
    )
    text = (
        f"{levels(fact)} at up to {shown(hertz, 'Hz', 4)} on node {fact.node}, which can be reached, "
        f"in state {fact.state}: burn by radio frequency.{feel}{reason(fact)} "
        f"Fires from {low.shown('frequency')} where the touch caution fired."
        f"{not_covered(low.not_covered)} {DEFER}"
    )
    source = f"{low.sources()}; {high.sources()}" if silent else low.sources()
    threshold = low.figure("frequency")
    evidence = low.source.evidence
    return Caution(f"rf-burn.{fact.node}", fact.node, text, hertz, "Hz", threshold, source, evidence)

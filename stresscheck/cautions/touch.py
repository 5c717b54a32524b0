"""Touch voltage, in two tiers: the notice, and the full caution above it."""

from __future__ import annotations

from stresscheck.cautions.caution import Caution
from stresscheck.cautions.facts import Facts, NodeFact
from stresscheck.cautions.select import worst_nodes
from stresscheck.cautions.thresholds import Threshold, Thresholds
from stresscheck.cautions.wording import DEFER, levels, not_covered, reason, shown

FULL = ("touch-full-rms", "touch-full-dc")
NOTICE = ("touch-notice-ac", "touch-notice-dc")


def is_full(fact: NodeFact, thresholds: Thresholds) -> bool:
    """At least the full figure, as RMS of AC and DC together or as DC. The RMS holds at any frequency."""
    return fact.total_rms >= thresholds["touch-full-rms"].figure("voltage") or fact.volt_dc >= thresholds[
        "touch-full-dc"
    ].figure("voltage")


def is_notice(fact: NodeFact, thresholds: Thresholds) -> bool:
    """At least the notice figure, as peak (DC included) or as DC."""
    return fact.volt_peak >= thresholds["touch-notice-ac"].figure("voltage") or fact.volt_dc >= thresholds[
        "touch-notice-dc"
    ].figure("voltage")


def touch_full(facts: Facts, thresholds: Thresholds) -> list[Caution]:
    """Nodes within reach at or above the full figure; the state with the largest RMS is named."""
    found = []
    for fact in worst_nodes(facts, lambda fact: is_full(fact, thresholds), lambda fact: fact.total_rms):
        dc_alone = fact.volt_dc >= fact.total_rms
        fired = thresholds["touch-full-dc" if dc_alone else "touch-full-rms"]
        extra = "" if dc_alone else ", at any frequency, radio frequency included"
        fires = f"{fired.shown('voltage')} RMS (AC and DC together) or DC{extra}"
        found.append(_caution("touch-voltage", fact, fact.total_rms, fires, fired))
    return found


def touch_notice(facts: Facts, thresholds: Thresholds) -> list[Caution]:
    """Nodes within reach at or above the notice figure whose full caution doesn't fire in any state."""
    full = {fact.node for fact in facts.nodes if fact.reachable and fact.known and is_full(fact, thresholds)}
    found = []
    for fact in worst_nodes(
        facts,
        lambda fact: fact.node not in full and is_notice(fact, thresholds),
        lambda fact: max(fact.volt_peak, fact.volt_dc),
    ):
        fired = thresholds["touch-notice-dc" if fact.volt_dc >= fact.volt_peak else "touch-notice-ac"]
        fires = f"{fired.shown('voltage')} peak (DC included) or DC"
        found.append(_caution("touch-notice", fact, max(fact.volt_peak, fact.volt_dc), fires, fired))
    return found


def _caution(hazard: str, fact: NodeFact, value: float, fires: str, fired: Threshold) -> Caution:
    at = f" at {shown(fact.hertz, 'Hz', 4)}" if fact.hertz > 0.0 else ""
    text = (
        f"{levels(fact)} on node {fact.node}, which can be reached, in state {fact.state}{at}.{reason(fact)} "
        f"Fires from {fires}.{not_covered(fired.not_covered)} {DEFER}"
    )
    threshold = fired.figure("voltage")
    return Caution(
        f"{hazard}.{fact.node}",
        fact.node,
        text,
        value,
        "V",
        threshold,
        fired.sources(),
        fired.source.evidence,
    )

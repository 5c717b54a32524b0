"""Nodes within reach and capacitors whose figures couldn't be computed: no figure is no answer."""

from __future__ import annotations

from stresscheck.cautions.caution import Caution
from stresscheck.cautions.facts import Facts
from stresscheck.cautions.thresholds import Thresholds
from stresscheck.cautions.wording import DEFER, not_covered

IDS = ("touch-notice-ac",)


def unknown_voltage(facts: Facts, thresholds: Thresholds) -> list[Caution]:
    """One caution for each subject without figure; its value is the notice figure, taken as reached."""
    subjects: dict[tuple[str, str], str] = {}
    for node in facts.nodes:
        if node.reachable and not node.known:
            subjects.setdefault(("node", node.node), node.state)
    for capacitor in facts.capacitors:
        if not capacitor.known:
            subjects.setdefault(("capacitor", capacitor.part), capacitor.state)
    notice = thresholds["touch-notice-ac"]
    volt = notice.figure("voltage")
    found = []
    for (kind, name), state in sorted(subjects.items()):
        text = (
            f"No figure for the voltage of {kind} {name} in state {state}: it couldn't be computed. "
            f"Treat it as at least {notice.shown('voltage')} peak, and as live."
            f"{not_covered(notice.not_covered)} {DEFER}"
        )
        # a node and a part may bear the same name: their ids must differ
        hazard = "unknown-voltage" if kind == "node" else "unknown-charge"
        source = notice.sources()
        found.append(Caution(f"{hazard}.{name}", name, text, volt, "V", volt, source, "own decision"))
    return sorted(found, key=lambda caution: (caution.subject, caution.id))

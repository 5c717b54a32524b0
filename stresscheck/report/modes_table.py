"""Natural modes as a table."""

from __future__ import annotations

from collections.abc import Sequence

from stresscheck.findings.outlook import Resonance
from stresscheck.report import figures
from stresscheck.report.lines import Lines


def modes_table(found: Sequence[Resonance], width: int = 80, *, color: bool = False) -> str:
    """One block a mode: frequency, Q, bandwidth, ring time, stored energy."""
    out = Lines(width)
    if not found:
        out.add("no oscillating mode in any state that could be solved")
    for state in dict.fromkeys(r.state for r in found):
        out.add(f"state {state}", tone="open")
        for r in (r for r in found if r.state == state):
            q = "no loss" if r.q is None else f"Q {r.q:.4g}"
            out.add(
                f"{figures.plain(r.hertz, 'Hz'):>10}   {q}   bandwidth {figures.plain(r.bandwidth_hertz, 'Hz')}   "
                f"rings for {figures.plain(r.ring_time_s, 's')}",
                indent=2,
            )
            energy = ", ".join(f"{part} {100 * share:.1f} %" for part, share in r.energy if share >= 5e-4)
            out.add(f"energy in {energy}", indent=15)
    return out.text(color=color)

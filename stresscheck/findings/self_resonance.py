"""How near a part is driven to its own resonance: up to where a single capacitance or inductance stands for it.

Figures 0.3 and 0.7: own decision of this project; a coil or capacitor near its self-resonance has more than one mode.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from stresscheck.design.model import Design

WARNED, REFUSED = 0.3, 0.7
"""Parts of the self-resonance from which a finding carries a remark, and from which it isn't checked."""


def share_of_self_resonance(design: Design, kind: str, part: Any) -> float:
    """Highest drive frequency over the lowest self-resonance in the box; 0 where none is declared.

    f_s = 1/(2 pi sqrt(L C)) with the largest value of the part. Source: circuit theory.
    """
    span = part.span() if kind in ("capacitor", "inductor") else None
    if span is None:
        return 0.0
    own = part.series_inductance if kind == "capacitor" else part.parallel_capacitance
    if own is not None:
        lowest = 1.0 / (2.0 * math.pi * math.sqrt(float(own) * span.high))
    elif part.self_resonance is not None:
        lowest = float(part.self_resonance) * math.sqrt(span.nominal / span.high)
    else:
        return 0.0
    highest = max((float(drive.band().high) for drive in design.drive.values()), default=0.0)
    return highest / lowest


def refusal(design: Design, kind: str, name: str, part: Any) -> str:
    """Why a part is driven too near its self-resonance to be checked; empty where it isn't."""
    share = share_of_self_resonance(design, kind, part)
    if share < REFUSED:
        return ""
    return f"{name} is driven at {share:.2g} of its self-resonance; from {REFUSED} on the model doesn't hold"


def remark(design: Design, kind: str, name: str, part: Any) -> str:
    """A word on parts driven noticeably near their self-resonance; empty below that."""
    share = share_of_self_resonance(design, kind, part)
    if share < WARNED:
        return ""
    return f"{name} is driven at {share:.2g} of its self-resonance: inside it carries more than at its terminals"

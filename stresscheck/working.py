"""One line of working: what a reviewer needs to redo a figure with a calculator."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Step:
    """A formula, the numbers put into it, and what came out.

    `value` is in the SI unit named by `unit`; `source` says where the formula or the figure stands
    (document, edition, clause), or "circuit theory", or "common practice, no source".
    """

    symbol: str
    formula: str
    numbers: str
    value: float
    unit: str
    source: str

"""A finding: one stress of one part in one state, set against its limit."""

from __future__ import annotations

from dataclasses import dataclass, field

from stresscheck.working import Step

VERDICTS = ("within", "unproved", "above-derated", "above-rating", "no-rating", "not-checked")
"""Verdict words of a finding, the order of review-json's counts (schema 1)."""

EVENTS = ("steady", "switch-on", "switch-off", "change", "any-waveform")


@dataclass(frozen=True, slots=True)
class Place:
    """The point of the box where the worst stress occurs: enough to compute it again.

    `hertz` is the drive frequency (of the first drive where there are several); `values` maps paths such as
    `capacitor.Ctank.value` to SI values, every element of the circuit included.
    """

    hertz: float | None
    values: tuple[tuple[str, float], ...]


@dataclass(frozen=True, slots=True)
class Proof:
    """How the bound was reached: boxes examined, gap left ((bound - worst)/worst), method and a remark."""

    boxes: int
    gap: float | None
    method: str
    corners: float | None = None
    """Largest value at the corners of the box, in the unit of the finding: what a corner check alone would say."""


@dataclass(frozen=True, slots=True)
class Finding:
    """One stress against one limit. All figures in the SI unit `unit`; None where there is no figure.

    `nominal`: every value nominal and the drive at the middle of its band; `worst`: largest stress found;
    `bound`: no point of the box exceeds it, None where none was proved; `ratio` = worst / allowed.
    """

    id: str
    state: str
    state_kind: str
    event: str
    part: str
    kind: str
    quantity: str
    unit: str
    verdict: str
    nominal: float | None = None
    worst: float | None = None
    bound: float | None = None
    rated: float | None = None
    allowed_fraction: float | None = None
    allowed: float | None = None
    ratio: float | None = None
    at: Place | None = None
    working: tuple[Step, ...] = ()
    rating_source: str = ""
    derating_source: str = ""
    why: str = ""
    proof: Proof | None = None
    reason: str = ""
    """What carries the stress, in words: "gain 18.2 x drive 12 V at resonance 85.1 kHz"; empty where it is plain."""
    accepted: bool = False
    remarks: tuple[str, ...] = field(default=())
    ratio_bound: float | None = None
    """Proved bound of stress over allowed value, where one was proved: what `within` rests on."""

    def __post_init__(self) -> None:
        if self.verdict not in VERDICTS:
            raise ValueError(f"no such verdict: {self.verdict}")

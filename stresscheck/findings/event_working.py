"""Working of a finding on an event, and its instant in words."""

from __future__ import annotations

from typing import TYPE_CHECKING

from stresscheck.arrays import Floats
from stresscheck.circuit.network import Network
from stresscheck.findings.checks import Check
from stresscheck.working import Step

if TYPE_CHECKING:
    from stresscheck.findings.assemble import Steady

THEORY = "circuit theory"
WORDS = {
    "switch-on": "after the drives come on, at the worst phase",
    "switch-off": "after the drives go to zero, at the worst phase",
    "change": "after the change, at the worst instant of it",
}


FIRST = {
    "switch-on": "the drives come on, at the worst phase",
    "switch-off": "the drives go to zero, at the worst phase",
    "change": "of the change, at the worst phase",
}
NO_MORE = 1e-4
"""An event that goes above the steady state by less than this, relative, only approaches it."""
BOUND = {
    "switch-on": "smaller of: steady bound + reach x sqrt(2 W); response of the drives from rest",
    "switch-off": "reach x sqrt(2 W)",
    "change": "smaller of: steady bound + reach x sqrt(2 W), response from rest; + reach x sqrt(2 W) of the old state",
}


def when(seconds: float, event: str, before: str, stress: float, steady: float) -> str:
    """When the largest value comes: "35 us after the drives come on, at the worst phase"."""
    start = f" from state {before}" if before else ""
    if event != "switch-off" and stress <= steady * (1.0 + NO_MORE):
        return f"no more than in the steady state that follows{start and ', coming' + start}"
    if seconds <= 0.0:
        return f"at the instant {FIRST[event]}{start}"
    return f"{in_words(seconds)} {WORDS[event]}{start}"


def in_words(seconds: float) -> str:
    """A time with an SI prefix, three digits."""
    for factor, unit in ((1.0, "s"), (1e-3, "ms"), (1e-6, "us"), (1e-9, "ns")):
        if seconds >= factor:
            return f"{seconds / factor:.3g} {unit}"
    return "0 s"


def steps_of(
    network: Network, steady: Steady, number: int, check: Check, point: Floats, stress: float, seconds: float,
    bound: float | None,
) -> tuple[Step, ...]:  # fmt: skip
    """Steady peak, energy of the steady state, largest value after the event and when, and the bound."""
    column = steady.column[number]
    steps = [
        Step("steady", "largest peak of the steady state", "its own finding", float(steady.worst.peaks.value[column]),
             check.unit, THEORY),
        Step("t", "instant of the largest value, counted from the event", "poles and residues at the point", seconds,
             "s", THEORY),
        Step(check.quantity, "largest size over time and phase: sum of the modes and of the driven part", "at t", stress,
             check.unit, THEORY),
    ]  # fmt: skip
    if bound is not None and any(axis.varies for axis in network.axes.items):
        energy = float(steady.worst.bounds.bound[steady.energy])
        steps.append(
            Step("sqrt(2 W)", "from the largest stored energy W of the steady state, bounded", "over the whole box",
                 energy, "J^0.5", "derived from passivity")
        )  # fmt: skip
        steps.append(
            Step("bound", BOUND[check.event], "over the whole box", bound, check.unit, "derived from passivity")
        )  # fmt: skip
    return tuple(steps)

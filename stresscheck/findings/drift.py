"""Parts whose value drifts with temperature: the circuit with their intervals widened, self-heating included."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from typing import TYPE_CHECKING

import numpy as np

from stresscheck.circuit.build import build
from stresscheck.circuit.network import Network
from stresscheck.errors import CheckError
from stresscheck.findings.checks import part_notes, present
from stresscheck.findings.worst import Asked, Problem, worst_case

if TYPE_CHECKING:
    from stresscheck.design.model import Design

ROUNDS = 8
SLACK = 0.5
"""Kelvin added to a proved temperature before it is tried: the next round has to stay below it."""


def drifting(design: Design) -> list[str]:
    """Present parts that declare a temperature coefficient."""
    return [
        name
        for kind in ("capacitor", "inductor", "resistor")
        for name, part in present(design, kind)
        if part.temperature_coefficient is not None
    ]


def drifted(design: Design, network: Network, gap: float, stop: Callable[[bool], bool]) -> Network:
    """The network over a box that holds every value that self-heating can bring; `network` where nothing drifts.

    A set of upper temperatures is right once the temperatures proved with it stay below it. Raises CheckError where
    that isn't reached: drift and heat feed each other, or no temperature can be proved.
    """
    notes = part_notes(design)
    parts = [n for n in drifting(design) if notes[n].thermal_resistance is not None and notes[n].ambient is not None]
    if not parts:
        return network
    tried: dict[str, float] = {}
    for _ in range(ROUNDS):
        proved = _temperatures(network, design, parts, gap, stop)
        if tried and all(proved[name] <= tried[name] for name in parts):
            return network
        tried = {name: max(proved[name] + SLACK, tried.get(name, 0.0)) for name in parts}
        network = build(design, tried)
    raise CheckError("the drift of " + ", ".join(parts) + " by self-heating doesn't settle")


def _temperatures(
    network: Network, design: Design, parts: list[str], gap: float, stop: Callable[[bool], bool]
) -> Mapping[str, float]:
    """Proved upper temperature of each part [K]."""
    asked = [Asked(name, "temperature") for name in parts]
    worst = worst_case(Problem(network, part_notes(design), asked), gap, np.full(len(asked), np.nan), stop)
    found = dict(zip(parts, (float(b) for b in worst.bounds.bound), strict=True))
    lost = [name for name, kelvin in found.items() if not math.isfinite(kelvin)]
    if lost:
        raise CheckError("the temperature of " + ", ".join(lost) + " can't be bounded, so its drift isn't known")
    return found

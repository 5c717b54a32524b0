"""Parts with ratings, and what limits they get, for the tests of limits."""

from __future__ import annotations

from typing import Any

import numpy as np

from stresscheck.design.parts import Capacitor, Inductor, Resistor
from stresscheck.limits.part_limits import PartLimits, limits_for
from stresscheck.limits.policy import load_policy

KHZ = np.array([85e3])
CURVE = {"by": "frequency", "points": [["10 kHz", "450 V"], ["85 kHz", "400 V"], ["200 kHz", "170 V"]]}
COIL = {"current_rms": "1 A", "voltage_peak": "1 kV"}
LINE = {"by": "temperature", "points": [["70 degC", "10 W"], ["155 degC", "1 uW"]]}


def capacitor(family: str | None = "polypropylene film", **rating: Any) -> Capacitor:
    table = {"between": ["a", "b"], "value": "150 nF", "tolerance": "5 %", "rating": rating}
    return Capacitor.model_validate(table | ({"family": family} if family else {}))


def inductor(family: str | None = "air core", **rating: Any) -> Inductor:
    table = {"between": ["a", "b"], "value": "22 uH", "rating": rating}
    return Inductor.model_validate(table | ({"family": family} if family else {}))


def resistor(family: str | None = "film", value: Any = "50 ohm", **rating: Any) -> Resistor:
    table = {"between": ["a", "b"], "value": value, "tolerance": "5 %", "rating": rating}
    return Resistor.model_validate(table | ({"family": family} if family else {}))


def ask(
    policy: str, kind: str, part: Any, quantity: str, kelvin: float | None = None, full: bool = False
) -> PartLimits:
    return limits_for(load_policy(policy), kind, "X", part, quantity, kelvin=kelvin, full=full)


def allowed(found: PartLimits, hertz: float = 85e3) -> dict[str, float]:
    assert found.outcome == "limits", found.why
    return {limit.rating_key: float(limit.allowed(np.array([hertz]))[0]) for limit in found.limits}

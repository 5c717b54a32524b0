"""Which of a capacitor's ratings sets its permissible voltage at the frequency of the worst case."""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.circuit.laws import TAU, CapacitorLaw
from stresscheck.circuit.network import Network
from stresscheck.limits.quantities import quantity_of
from stresscheck.limits.readings import read_rating
from stresscheck.physics.capacitor_zones import permissible_voltage

WORDS = {"voltage": "its voltage rating", "loss": "its loss or reactive power", "current": "its current rating"}


def zone_remark(network: Network, name: str, part: Any, point: Floats) -> str:
    """The binding zone of three, from the ratings of a single capacitor; empty where fewer than two are declared.

    Full ratings at the first drive's frequency; curves are read there. Source: C1 and C2 of the relations.
    """
    place = network.branch_of(name)
    rating = part.rating
    if place is None or rating is None or part.in_series or part.in_parallel:
        return ""
    law = network.branches[place].law
    assert isinstance(law, CapacitorLaw)
    hertz = float(network.lines[0].hertz(point[None])[0])
    axis = network.branches[place].axis
    farad = float(point[axis]) if axis is not None else 0.0
    volt, ampere = _read(name, rating, "voltage_rms", hertz), _read(name, rating, "current_rms", hertz)
    watt, var = _read(name, rating, "dissipation", hertz), _read(name, rating, "reactive_power", hertz)
    loss = float(law.ohm(np.array([farad]), np.array([TAU * hertz]))[0].real) * TAU * hertz * farad
    if math.isinf(watt) and math.isfinite(var):
        watt = var * loss
    if sum(math.isfinite(v) for v in (volt, watt, ampere)) < 2 or not loss > 0.0:
        return ""
    limit = permissible_voltage(hertz, farad, loss, volt, watt, ampere)
    return f"at this frequency {WORDS[str(limit.zone)]} binds first: {float(limit.volt_rms):.4g} V RMS at full rating"


def _read(name: str, rating: Any, key: str, hertz: float) -> float:
    """A full rating at a frequency, infinite where it isn't declared or says nothing there."""
    declared = getattr(rating, key)
    if declared is None:
        return math.inf
    reading = read_rating(f"capacitor {name}", key, declared, quantity_of("capacitor", key).unit, None)
    value = math.nan if reading.curve is None else float(reading.curve.at(np.array([hertz]))[0])
    return value if math.isfinite(value) else math.inf

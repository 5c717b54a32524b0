"""Courses in time of small circuits for the tests: direct steps as published examples have them."""

from __future__ import annotations

import numpy as np

from stresscheck.circuit.build import build
from stresscheck.circuit.network import Network
from stresscheck.design.load import read_design
from stresscheck.transient.carried import Carried, carried
from stresscheck.transient.events import Stage, happening, stage
from stresscheck.transient.swing import Happening, largest

UNIT = {"resistor": "ohm", "inductor": "H", "capacitor": "F"}
TINY = 1e-9
"""Level of the sine that a drive must have, where only its offset matters [V]."""


def circuit(parts: str, offset: float | None = None, extra: str = "", hertz: float = 1000.0, peak: float = TINY) -> str:
    """A design of parts written "resistor R in a 100 lossy-key=value", one drive from `in` to ground."""
    out = ['title = "course"', 'derating = "as-rated"', "[drive.D]", 'between = ["in", "ground"]']
    out += [f'peak = "{peak!r} V"', f'frequency = "{hertz!r} Hz"', extra]
    if offset is not None:
        out.append(f'offset = "{offset!r} V"')
    for line in parts.strip().splitlines():
        kind, name, a, b, value, *more = line.split()
        out += [f'[{kind}.{name}]\nbetween = ["{a}", "{b}"]\nvalue = "{float(value)!r} {UNIT[kind]}"']
        out += [f'{key} = "{text.replace("_", " ")}"' for key, text in (m.split("=") for m in more)]
    return "\n".join(out)


def network(text: str) -> Network:
    return build(read_design(text))


def here(net: Network, *, running: bool = True) -> Stage:
    return stage(net, net.axes.nominal, running=running)


def step_on(net: Network) -> Happening:
    """All drives switched on from rest."""
    return happening(here(net), Carried.nothing())


def switched_off(net: Network) -> Happening:
    """All drives to zero from the steady state."""
    return happening(here(net, running=False), carried(net, net.axes.nominal))


def row(net: Network, part: str, quantity: str) -> int:
    """Number of a response: "volt" or "ampere" of a part."""
    branch = net.branch_of(part)
    assert branch is not None
    return branch + (len(net.branches) if quantity == "volt" else 0)


def at(event: Happening, number: int, time: float) -> float:
    """Direct course of a response at an instant."""
    return float(event.direct.at(np.array([time]))[number, 0].real)


def top(event: Happening, number: int) -> float:
    """Largest size of a response."""
    return float(largest(event).value[number])

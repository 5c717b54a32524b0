"""How long capacitors keep their charge after the drives stop, with the drives shorted and with them open."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.circuit.laws import CapacitorLaw
from stresscheck.circuit.network import Network
from stresscheck.transient.carried import Carried, carried
from stresscheck.transient.events import Stage, happening, stage

ROUNDS = 200


def seconds_until(network: Network, point: Floats, levels: tuple[float, ...], *, drives_open: bool) -> Floats:
    """Time until each capacitor stays below each level [V], from the steady state at a point [axes]: [branches, levels].

    The sizes of all modes are added, whatever their phases, so the true time is at most this. Infinite where charge
    stays; zero for branches that aren't capacitors. drives_open: drives are cut out and the currents of coils
    are lost with them; else voltage drives are zero volt behind their resistance.
    """
    held = carried(network, point)
    if drives_open:
        omega = network.lines[0].omega(point[None])
        here = stage(_opened(network), point, running=False, omega=omega)
        held = _charges_only(network, held)
    else:
        here = stage(network, point, running=False)
    out = np.zeros((len(network.branches), len(levels)))
    found = _times(here, held, levels)
    out[: len(found)] = found
    return out


def _opened(network: Network) -> Network:
    """The network with every drive cut out, its resistance included; drives stand last among the branches."""
    kept = tuple(branch for branch in network.branches if branch.role != "source")
    assert kept == network.branches[: len(kept)]
    return replace(network, branches=kept, sources=(), lines=())


def _charges_only(network: Network, held: Carried) -> Carried:
    """What capacitors hold; the flux of coils goes into the opening contacts."""
    mine = {(b.part, b.role) for b in network.branches if isinstance(b.law, CapacitorLaw)}
    lines = {key: {p: v for p, v in places.items() if p in mine} for key, places in held.lines.items()}
    return Carried(lines, {p: v for p, v in held.direct.items() if p in mine})


def _times(here: Stage, held: Carried, levels: tuple[float, ...]) -> Floats:
    event = happening(here, held)
    network = here.network
    count = len(network.branches)
    out = np.zeros((count, len(levels)))
    decay = -here.ring.pole[0].real
    for index, branch in enumerate(network.branches):
        if not isinstance(branch.law, CapacitorLaw):
            continue
        size = np.zeros(len(decay))
        still = 0.0
        for swing in event.swings:
            for _, terms in swing.harmonics:
                size += np.abs(terms.coefficient[count + index])
        if event.direct.rate.size:
            direct = event.direct.coefficient[count + index]
            still += abs(float(direct[0].real))
            size += np.abs(direct[1:])
        for place, level in enumerate(levels):
            out[index, place] = _until(size, decay, still, level)
    return out


def _until(size: Floats, decay: Floats, still: float, level: float) -> float:
    """When sum of size e^{-decay t} + still falls to the level [s]."""

    def left(time: float) -> float:
        return still + float((size * np.exp(-decay * time)).sum())

    if left(0.0) <= level:
        return 0.0
    stays = still + float(size[decay <= 0.0].sum())
    if stays >= level:
        return math.inf
    low, high = 0.0, 1.0 / float(decay[decay > 0.0].max())
    while left(high) > level:
        low, high = high, 2.0 * high
        if high > 1e12:
            return math.inf
    for _ in range(ROUNDS):
        middle = 0.5 * (low + high)
        if middle in (low, high):
            break
        low, high = (middle, high) if left(middle) > level else (low, middle)
    return high


def bleeder(farad: float, volt: float, level: float, seconds: float) -> tuple[float, float]:
    """Largest resistance [ohm] across a single capacitor that takes it from `volt` to `level` in a time, and the power
    that it takes at `volt` [W]: R = t/(C ln(V/V_s)), P = V^2/R. Source: circuit theory (C14 of the relations)."""
    ohm = seconds / (farad * math.log(volt / level))
    return ohm, volt * volt / ohm

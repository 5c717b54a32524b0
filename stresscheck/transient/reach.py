"""How far a free swing of a given energy can drive each response, anywhere in the box.

A passive network's free swing never holds more energy than at its start. A response is a sum of capacitor voltages and
coil currents with factors g that the resistances alone set, so with D the capacitances and inductances

    |y| <= sqrt(2 W) sqrt(g D^-1 g^T).

Each g is, in each resistance by itself, a ratio of straight lines without a pole, so its largest size is at a corner of
the resistances' intervals. Source: derived (passivity).
"""

from __future__ import annotations

import itertools

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.circuit.laws import CapacitorLaw, ResistorLaw
from stresscheck.circuit.motion import instant, roles_for
from stresscheck.circuit.network import Network
from stresscheck.circuit.nodal import branch_ohm
from stresscheck.circuit.roles import Roles
from stresscheck.circuit.tableau import readings

MOST_VARYING = 11
"""More resistances that vary than this get no bound: 2^11 small systems are a fraction of a second."""
LOSS = (0.5, 2.0)
"""Losses of dielectric and windings are taken within these factors of their values at the drives' frequencies."""
NOTHING = 1e-9


def reach(network: Network) -> Floats:
    """Largest |y| per sqrt(2 W) over the whole box, [responses: branch currents, voltages, nodes, terminals].

    Units V/sqrt(J) or A/sqrt(J). Infinite where none is found: where a charge is tied, where three or more coils are
    coupled with each other, or where too many resistances vary.
    """
    roles = roles_for(network)
    count = 2 * len(network.branches) + len(network.nodes)
    low, high = _loss_ends(network)
    moving = np.flatnonzero(high > low * (1.0 + 1e-12))
    inverse = _inverse(network, roles)
    if len(moving) > MOST_VARYING or inverse is None:
        return np.full(count + len(network.sources), np.inf)
    picks = np.array(list(itertools.product((0, 1), repeat=len(moving))), dtype=np.bool_)
    loss = np.repeat(low[None], len(picks), axis=0)
    loss[:, moving] = np.where(picks, high[moving], low[moving])
    read = np.abs(readings(roles.form) @ instant(network, roles, loss)).max(axis=0)
    factor = read[:, : len(roles.free)]
    out = np.sqrt(np.einsum("oi,ij,oj->o", factor, inverse, factor))
    tied = read[:, len(roles.free) : len(roles.reactive)]
    out[(tied > NOTHING).any(axis=1)] = np.inf
    ends = np.zeros(len(network.sources))
    for index, source in enumerate(network.sources):
        behind = source.branch if source.branch is not None else network.branch_of(source.name, "source")
        ends[index] = 0.0 if behind is None else out[behind]
    return np.concatenate([out, ends])


def _loss_ends(network: Network) -> tuple[Floats, Floats]:
    """Smallest and largest series resistance of every branch over the box."""
    axes = network.axes
    ends = np.stack([axes.low, axes.high])
    bands = [network.band_of(line) for line in network.lines]
    omega = 2.0 * np.pi * np.array([min(b[0] for b in bands), max(b[1] for b in bands)])
    seen = np.concatenate([branch_ohm(network, ends, np.full(2, w)).real for w in omega])
    low, high = seen.min(axis=0), seen.max(axis=0)
    for index, branch in enumerate(network.branches):
        if isinstance(branch.law, CapacitorLaw) and not branch.law.loss_factor.zero:
            low[index], high[index] = LOSS[0] * low[index], LOSS[1] * high[index]
    return low, high


def _inverse(network: Network, roles: Roles) -> Floats | None:
    """Largest entries of D^-1 over the box, for the free charges and fluxes; None where coils form larger groups."""
    n = len(roles.free)
    place = {index: i for i, index in enumerate(roles.free)}
    out = np.zeros((n, n))
    for index, i in place.items():
        branch = network.branches[index]
        assert not isinstance(branch.law, ResistorLaw)
        least = branch.fixed if branch.axis is None else network.axes.items[branch.axis].low
        out[i, i] = 1.0 / (branch.law.scale * least if isinstance(branch.law, CapacitorLaw) else least)
    met: set[int] = set()
    for coupling in network.couplings:
        pair = (coupling.first, coupling.second)
        if met & set(pair):
            return None
        met |= set(pair)
        axis = network.axes.items[coupling.axis]
        k = max(abs(axis.low), abs(axis.high))
        lows = [network.axes.items[network.branches[c].axis].low for c in pair]  # type: ignore[index]
        for c in pair:
            if c in place:
                out[place[c], place[c]] /= 1.0 - k * k
        if all(c in place for c in pair):
            mixed = k / (1.0 - k * k) / float(np.sqrt(lows[0] * lows[1]))
            out[place[pair[0]], place[pair[1]]] = out[place[pair[1]], place[pair[0]]] = mixed
    return out

"""Lines for the harmonics of drives that aren't sines, up to the order whose rest hardly matters."""

from __future__ import annotations

import cmath
from dataclasses import dataclass, replace

import numpy as np

from stresscheck.arrays import Complexes, Floats
from stresscheck.circuit.motion import motion, roles_for
from stresscheck.circuit.network import Line, Network
from stresscheck.circuit.phasors import phasors

MOST = 61
"""Highest order of a square or triangle that gets a line of its own; what is left beyond it is bounded and reported."""
PROBED = 399
"""Orders up to which the rest is added up when the cut-off is chosen."""
REST = 1e-3
"""Largest rest beside the largest value of each response; what the rest does at once is reckoned apart."""
WEIGHTY = 0.01
"""Part of a response from which a harmonic counts when limits that move with frequency are read."""
NOTHING = 1e-9
"""Responses below this part of the largest of their kind are rounding."""


@dataclass(frozen=True, slots=True)
class _Sizes:
    """Sizes of every response to every order at the points looked at: [orders, points, responses]; `rest` the same
    without what passes at once."""

    full: Floats
    rest: Floats

    # What passes at once and what follows the drive's integral are put together in time, not by harmonics.


def with_harmonics(network: Network) -> Network:
    """The network with a line for every order that matters, and drives that know their first line."""
    if all(source.waveform.kind == "sine" for source in network.sources):
        return network
    points = _points(network)
    lines: list[Line] = []
    home: dict[int, int] = {}
    left_out = 0.0
    for base in network.lines:
        orders, heavy, rest = _orders(network, base, points)
        left_out = max(left_out, rest)
        for order in orders:
            line = _line(network, base, order, order in heavy or order == orders[0])
            for index in line.sources:
                home.setdefault(index, len(lines))
            lines.append(line)
    sources = tuple(replace(source, line=home[index]) for index, source in enumerate(network.sources))
    groups = _groups(network, lines)
    grouped = tuple(replace(line, group=number) for line, number in zip(lines, groups, strict=True))
    return replace(network, sources=sources, lines=grouped, left_out=left_out)


def _line(network: Network, base: Line, order: int, weighty: bool) -> Line:
    """The line of one order: the drives of the base line that have it, with their sizes and phases."""
    members, weights = [], []
    for index in base.sources:
        source = network.sources[index]
        weight = source.waveform.weight(order)
        if abs(weight) > 1e-9:
            members.append(index)
            weights.append(weight * cmath.exp(1j * order * source.phase))
    return Line(base.frequency_axis, tuple(members), base.group, order, tuple(weights), weighty)


def _points(network: Network) -> Floats:
    """Where the size of harmonics is looked at: nominal values, all low, all high, and every value at either end."""
    low, middle, high = network.axes.low, network.axes.nominal, network.axes.high
    rows = [middle, low, high]
    for axis, item in enumerate(network.axes.items):
        if item.varies and len(rows) < 24:
            for end in (low, high):
                row = middle.copy()
                row[axis] = end[axis]
                rows.append(row)
    return np.array(rows)


def _orders(network: Network, base: Line, points: Floats) -> tuple[tuple[int, ...], set[int], float]:
    """Orders that get a line, those of them that count for limits, and the largest rest."""
    forms = [network.sources[index].waveform for index in base.sources]
    endless = any(form.endless for form in forms)
    fixed = sorted({n for form in forms if not form.endless for n in form.orders(1)})
    if not endless:
        sizes = _sizes(network, base, points, tuple(fixed))
        return tuple(fixed), _heavy(sizes, fixed), 0.0
    probed = sorted({n for form in forms for n in form.orders(PROBED)})
    sizes = _sizes(network, base, points, tuple(probed))
    largest = sizes.full.max(axis=0)
    scale = np.maximum(largest, NOTHING * largest.max(axis=1, keepdims=True))
    beyond = np.flip(np.cumsum(np.flip(sizes.rest, axis=0), axis=0), axis=0)
    share = np.where(scale > 0.0, beyond / np.where(scale > 0.0, scale, 1.0), 0.0).max(axis=(1, 2))
    share = np.append(share[1:], 0.0)
    enough = np.flatnonzero(share <= REST)
    last = probed[int(enough[0])] if enough.size else PROBED
    cut = max(min(last, MOST), max(fixed, default=1))
    kept = [n for n in probed if n <= cut]
    return tuple(kept), _heavy(sizes, probed), float(share[len(kept) - 1])


def _heavy(sizes: _Sizes, orders: list[int]) -> set[int]:
    """Orders that carry a noticeable part of some response."""
    largest = sizes.full.max(axis=0)
    floor = NOTHING * largest.max(axis=1, keepdims=True)
    part = np.where(largest > floor, sizes.full / np.where(largest > floor, largest, 1.0), 0.0)
    return {n for n, share in zip(orders, part.max(axis=(1, 2)), strict=True) if share >= WEIGHTY}


def _sizes(network: Network, base: Line, points: Floats, orders: tuple[int, ...]) -> _Sizes:
    """Sizes of branch currents, branch voltages and node voltages, order by order."""
    system = motion(network, points, base.omega(points), roles_for(network))
    follows = system.c @ system.b
    full, rest = [], []
    for order in orders:
        line = _line(network, base, order, True)
        seen = phasors(network, points, line)
        every: Complexes = np.concatenate([seen.ampere, seen.volt, seen.node], axis=1)
        passing = system.d + follows / (1j * seen.omega[:, None, None])
        at_once = np.einsum("pos,ps->po", passing[:, :, list(line.sources)], seen.level)
        full.append(np.nan_to_num(np.abs(every)))
        rest.append(np.nan_to_num(np.abs(every - at_once)))
    return _Sizes(np.array(full), np.array(rest))


def _groups(network: Network, lines: list[Line]) -> list[int]:
    """Lines of different frequencies that may coincide share a number; those of one frequency never do."""
    bands = [network.band_of(line) for line in lines]
    group = list(range(len(lines)))
    for i, one in enumerate(lines):
        for j in range(i):
            if one.frequency_axis == lines[j].frequency_axis:
                continue
            if bands[i][0] <= bands[j][1] and bands[j][0] <= bands[i][1]:
                old, new = group[i], group[j]
                group = [new if g == old else g for g in group]
    return group

"""Highest and lowest values of every response over time, from the harmonics of each drive and what they leave out.

Lines of one frequency form a course whose harmonics keep their phases: it is put together over one period. Courses
of different frequencies meet in every phase, so their extremes add. What the harmonics leave out of a square acts on
a response only at once, through the network's direct feed-through, for capacitors and coils need time.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from stresscheck.arrays import Complexes, Floats
from stresscheck.circuit.motion import motion, roles_for
from stresscheck.circuit.network import Network
from stresscheck.circuit.phasors import Phasors
from stresscheck.stress.rests import terminal_feed

PER_HARMONIC = 16
"""Points of a period for each order that is summed; the top is then sought between them by Newton's method."""
LEAST = 128
BLOCK = 4_000_000
"""Numbers handled at once."""
SIDE = 1e-9
"""Angles this near to an edge stand for just before and just after it [rad]."""
UNLIMITED = 1e-9
"""Share of a unit drive's rate of change in a response above which an edge makes the response endless."""


def extremes(network: Network, seen: Sequence[Phasors], terminal: Complexes, points: Floats) -> tuple[Floats, Floats]:
    """Largest values and largest values of the opposite sign, without direct parts: two arrays [points, responses].

    Responses: branch currents, branch voltages, node voltages, currents of drives at their terminals.
    terminal: peak phasors [lines, points, sources]. Infinite where an edge isn't limited by anything.
    """
    count = len(network.branches)
    total = 2 * count + len(network.nodes) + len(network.sources)
    high, low = np.zeros((len(points), total)), np.zeros((len(points), total))
    for numbers in network.courses():
        harmonics = np.stack(
            [np.concatenate([seen[n].ampere, seen[n].volt, seen[n].node, terminal[n]], axis=1) for n in numbers], axis=2
        )
        orders = [network.lines[n].order for n in numbers]
        if len(orders) == 1 and not _edged(network, numbers):
            size = np.abs(harmonics[:, :, 0])
            high, low = high + size, low + size
            continue
        up, down = _summed(network, numbers, harmonics, points)
        high, low = high + up, low + down
    return high, low


def _edged(network: Network, numbers: tuple[int, ...]) -> bool:
    """Does a drive of these lines have endless harmonics?"""
    return any(network.sources[s].waveform.endless for n in numbers for s in network.lines[n].sources)


def _summed(network: Network, numbers: tuple[int, ...], harmonics: Complexes, points: Floats) -> tuple[Floats, Floats]:
    """Extremes of one course, [points, responses] each. harmonics: [points, responses, lines]."""
    orders = np.array([network.lines[n].order for n in numbers])
    angle, grid = _angles(network, numbers, orders)
    basis = np.concatenate([np.cos(orders[:, None] * angle), -np.sin(orders[:, None] * angle)])
    feed = _feeds(network, numbers, points)
    rest = _left_out(network, numbers, angle)
    up = np.empty(harmonics.shape[:2])
    down = np.empty_like(up)
    block = max(1, BLOCK // (harmonics.shape[1] * angle.size))
    for start in range(0, len(points), block):
        rows = slice(start, start + block)
        parts = np.concatenate([harmonics[rows].real, harmonics[rows].imag], axis=2)
        course = parts @ basis + feed[rows] @ rest
        for out, sign in ((up, 1.0), (down, -1.0)):
            place = (sign * course).argmax(axis=2)
            top = np.take_along_axis(course, place[..., None], axis=2)[..., 0]
            at = _nearby_top(sign * harmonics[rows], orders, angle[place], 2.0 * np.pi / grid)
            wave = (harmonics[rows] * np.exp(1j * at[..., None] * orders)).real.sum(axis=2)
            moved = wave + np.einsum("spo,pos->po", _left_out(network, numbers, at), feed[rows])
            out[rows] = np.maximum(sign * top, sign * moved)
    return up, down


def _nearby_top(harmonics: Complexes, orders: Floats, at: Floats, width: float) -> Floats:
    """Angle of the top beside each best point of the grid: one step of Newton's method, at most a grid's width."""
    here = harmonics * np.exp(1j * at[..., None] * orders)
    slope, bend = (1j * orders * here).real.sum(axis=2), -(orders**2 * here).real.sum(axis=2)
    with np.errstate(all="ignore"):
        step = np.where(bend < 0.0, np.clip(-slope / bend, -width, width), 0.0)
    return np.asarray(at + step)


def _angles(network: Network, numbers: tuple[int, ...], orders: Floats) -> tuple[Floats, int]:
    """Angles of one period: an even grid, then both sides of every edge; and how many of them are the grid."""
    count = max(LEAST, PER_HARMONIC * int(orders.max()))
    grid = np.linspace(-np.pi, np.pi, count, endpoint=False)
    edges = []
    for n in numbers:
        for index in network.lines[n].sources:
            source = network.sources[index]
            edges += [e - source.phase + side for e in source.waveform.edges() for side in (-SIDE, SIDE)]
    return np.concatenate([grid, np.unique(np.array(edges))]), count


def _members(network: Network, numbers: tuple[int, ...]) -> list[int]:
    """Drives that have a part in these lines."""
    return sorted({s for n in numbers for s in network.lines[n].sources})


def _left_out(network: Network, numbers: tuple[int, ...], angle: Floats) -> Floats:
    """Rest of each drive's waveform, then the integral of each: [2 drives, *shape of angle]."""
    rest, integral = [], []
    for index in _members(network, numbers):
        waveform, turned = network.sources[index].waveform, angle + network.sources[index].phase
        orders = tuple(network.lines[n].order for n in numbers if index in network.lines[n].sources)
        rest.append(waveform.rest(turned, orders))
        integral.append(waveform.rest_integral(turned, orders))
    return np.stack(rest + integral)


def _feeds(network: Network, numbers: tuple[int, ...], points: Floats) -> Floats:
    """Part of each drive's rest in each response, then of its integral: D, and C B over the angular frequency, both
    times the level; [points, responses, 2 drives]."""
    members = _members(network, numbers)
    count, sources = len(network.branches), len(network.sources)
    feed = np.zeros((len(points), 2 * count + len(network.nodes) + sources, 2 * len(members)))
    if not any(network.sources[index].waveform.endless for index in members):
        return feed
    line = network.lines[numbers[0]]
    omega = (line.omega(points) / line.order)[:, None, None]
    system = motion(network, points, line.omega(points), roles_for(network))
    direct = np.where(np.abs(system.e) > UNLIMITED / omega, np.inf, system.d)
    follows = system.c @ system.b / omega
    for column, index in enumerate(members):
        source = network.sources[index]
        level = (points[:, source.level_axis] * source.level_scale)[:, None]
        at_once = [direct[:, :, index], terminal_feed(network, direct, index)]
        later = [follows[:, :, index], terminal_feed(network, follows, index, own=0.0)]
        feed[:, :, column] = level * np.concatenate(at_once, axis=1)
        feed[:, :, len(members) + column] = level * np.concatenate(later, axis=1)
    return feed

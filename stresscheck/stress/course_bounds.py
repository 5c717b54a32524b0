"""Bounds over boxes of drives that aren't sines: harmonic by harmonic, and for what the harmonics leave out.

With c a response's direct feed-through, u a drive and H its response at each harmonic n, the largest value is at most
both of

    sum |H_n U_n| + |c| max|rest of u| + tail      and      |c| max|u| + sum |H_n U_n - c U_n| + tail,

tail: sum over the orders left out of |H - c| |U_n|, bounded for all frequencies above the last line at once.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, field

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.circuit.enclosure import LineBounds, Need, line_bounds
from stresscheck.circuit.motion import motion, roles_for
from stresscheck.circuit.network import Network
from stresscheck.circuit.tail import tail
from stresscheck.errors import CheckError
from stresscheck.stress.rests import Rest, drives_of, terminal_feed

SAME = 1e-9
"""Feed-throughs that agree to this part of the largest are the same everywhere in the box."""
CORNERS = 64
"""Points of the box at which feed-throughs are compared."""


@dataclass(frozen=True, slots=True)
class Ending:
    """The endless part of one course over the whole box, per unit level of each drive: `feed` c, and `size` and `fall`
    as in Tail, [responses, drives]; `orders` with a line, per drive. Responses: branch currents, branch voltages,
    nodes, terminals of all drives."""

    feed: Floats
    size: Floats
    fall: Floats
    orders: dict[int, tuple[int, ...]]


@dataclass(frozen=True, slots=True)
class CourseBounds:
    """Bounds of every line, and what the endless courses add: `rests` for RMS, `peaks` [boxes, responses] each."""

    lines: tuple[LineBounds, ...]
    rests: list[Rest] = field(default_factory=list)
    extra: list[tuple[tuple[int, ...], Ending]] = field(default_factory=list)
    levels: Floats = field(default_factory=lambda: np.zeros((0, 0)))


def endings_of(network: Network) -> dict[tuple[int, ...], Ending]:
    """The endless part of every course that has one, over the whole box of the network."""
    found = {}
    for course in network.courses():
        orders = drives_of(network, course)
        if orders:
            found[course] = _ending(network, course, orders)
    return found


def _ending(network: Network, course: tuple[int, ...], orders: dict[int, tuple[int, ...]]) -> Ending:
    feed, same = _feed(network, course)
    line = network.lines[course[0]]
    band = network.band_of(line)
    top = max(network.lines[n].order for n in course)
    lowest = (top + 1) * band[0] / line.order
    count = 2 * len(network.branches) + len(network.nodes)
    size, fall = np.full_like(feed, np.inf), np.full_like(feed, np.inf)
    rows = [*range(count), *(count + s for s in line.sources)]
    got = tail(network, line, lowest, network.axes.low, network.axes.high, feed[np.ix_(rows, list(line.sources))])
    for place, index in enumerate(line.sources):
        size[rows, index] = got.size[:, place]
        fall[rows, index] = np.where(same[rows, index], got.fall[:, place], np.inf)
    for place, source in enumerate(network.sources):
        if place not in line.sources and source.branch is not None:
            size[count + place], fall[count + place] = size[source.branch], fall[source.branch]
    return Ending(feed, size, fall, orders)


def _feed(network: Network, course: tuple[int, ...]) -> tuple[Floats, Floats]:
    """Feed-through in the middle of the box, and whether it is the same everywhere, [responses, drives]."""
    low, middle, high = network.axes.low, network.axes.nominal, network.axes.high
    rng = np.random.default_rng(17)
    ends = np.where(rng.random((CORNERS, len(low))) < 0.5, low, high)
    points = np.concatenate([middle[None], ends])
    system = motion(network, points, network.lines[course[0]].omega(points), roles_for(network))
    if np.abs(system.e).max() > 0.0:
        raise CheckError("an edge of a drive lies straight across a capacitor: nothing limits its current")
    terminal = np.stack([terminal_feed(network, system.d, s) for s in range(len(network.sources))], axis=2)
    feed = np.concatenate([system.d, terminal], axis=1)
    spread = np.abs(feed - feed[:1]).max(axis=0)
    return feed[0], spread <= SAME * max(1.0, float(np.abs(feed).max()))


@dataclass(frozen=True, slots=True)
class Settled:
    """What holds for every box in the network's whole box: `endings` of its courses, and `lines`: bounds, one row each,
    of those that carry no noticeable part of a stress."""

    endings: dict[tuple[int, ...], Ending]
    lines: Mapping[int, LineBounds]


def settled(network: Network, need: Need) -> Settled:
    """Bound once what hardly matters: the light harmonics, and what has no line at all."""
    endings = endings_of(network)
    constant = {n: _constant(network, n, ending) for course, ending in endings.items() for n in course}
    low, high = network.axes.low[None], network.axes.high[None]
    light = {n: line for n, line in enumerate(network.lines) if not line.weighty}
    return Settled(
        endings, {n: line_bounds(network, line, low, high, need, constant.get(n)) for n, line in light.items()}
    )


def courses_over(
    network: Network, lows: Floats, highs: Floats, need: Need | None, known: Settled | None = None
) -> CourseBounds:
    """Bound every line over boxes [lows, highs], and what the endless courses leave out."""
    endings = endings_of(network) if known is None else known.endings
    light = {} if known is None else known.lines
    constant = {n: _constant(network, n, ending) for course, ending in endings.items() for n in course}
    lines = tuple(
        _repeated(light[n], len(lows)) if n in light else line_bounds(network, line, lows, highs, need, constant.get(n))
        for n, line in enumerate(network.lines)
    )
    levels = np.stack([s.level_scale * highs[:, s.level_axis] for s in network.sources], axis=1)
    rests = [_rest(network, ending, levels) for ending in endings.values()]
    return CourseBounds(lines, rests, list(endings.items()), levels)


def _constant(network: Network, number: int, ending: Ending) -> Floats | None:
    """Feed-through of a line's only drive as the bounds of a line are ordered; None where it has several."""
    sources = network.lines[number].sources
    if len(sources) != 1:
        return None
    count = 2 * len(network.branches) + len(network.nodes)
    return np.append(ending.feed[:count, sources[0]], ending.feed[count + sources[0], sources[0]])


def _repeated(bound: LineBounds, boxes: int) -> LineBounds:
    def wide(values: Floats) -> Floats:
        return np.broadcast_to(values, (boxes, values.shape[1]))

    around = None if bound.around is None else wide(bound.around)
    return LineBounds(
        wide(bound.ampere), wide(bound.volt), wide(bound.node), wide(bound.terminal), wide(bound.root_watt),
        wide(bound.root_var), (), around,
    )  # fmt: skip


def _rest(network: Network, ending: Ending, levels: Floats) -> Rest:
    """RMS of what is left out: |c| + |H - c| at most, times the RMS of the drive's rest."""
    count, nodes = len(network.branches), len(network.nodes)
    total = np.zeros((len(levels), len(ending.feed)))
    for index, orders in ending.orders.items():
        factor = np.abs(ending.feed[:, index]) + np.fmin(ending.size[:, index], ending.fall[:, index])
        rms = math.sqrt(2.0) * network.sources[index].waveform.rest_rms(orders)
        total += factor * rms * levels[:, index : index + 1]
    split = np.split(total, [count, 2 * count, 2 * count + nodes], axis=1)
    return Rest(split[0], split[1], split[2], split[3])


def bounded_rests(network: Network, found: CourseBounds, highs: Floats) -> list[Floats]:
    """sqrt(R) I of what is left out, R the largest at the course's last line, [boxes, branches] each."""
    out = []
    for (course, _), rest in zip(found.extra, found.rests, strict=True):
        line = network.lines[course[-1]]
        ohm = np.empty_like(rest.ampere)
        omega = line.omega(highs)
        for index, branch in enumerate(network.branches):
            value = highs[:, branch.axis] if branch.axis is not None else np.full(len(highs), branch.fixed)
            ohm[:, index] = branch.law.ohm(value, omega).real
        with np.errstate(invalid="ignore"):
            out.append(np.where(ohm == 0.0, 0.0, np.sqrt(ohm) * rest.ampere))
    return out


def bounded_extremes(network: Network, found: CourseBounds, terminal: Floats) -> Floats:
    """Bound of the largest value over time, of either sign, without direct parts: [boxes, responses]."""
    summed = [
        np.concatenate([bound.ampere, bound.volt, bound.node, terminal[n]], axis=1)
        for n, bound in enumerate(found.lines)
    ]
    total = np.zeros_like(summed[0])
    endings = dict(found.extra)
    for course in network.courses():
        plain = sum((summed[n] for n in course), np.zeros_like(total))
        if course in endings:
            plain = _with_ending(network, course, endings[course], found, plain)
        total = total + plain
    return np.asarray(total)


def _with_ending(
    network: Network, course: tuple[int, ...], ending: Ending, found: CourseBounds, plain: Floats
) -> Floats:
    """The smaller of the two sums at the top of this file."""
    one, tails = plain.copy(), np.zeros_like(plain)
    for index, orders in ending.orders.items():
        waveform = network.sources[index].waveform
        level = found.levels[:, index : index + 1]
        one += np.abs(ending.feed[:, index]) * waveform.rest_peak(orders) * level
        top = max(orders)
        by_fall = ending.fall[:, index] * (top + 1) * waveform.rest_sum(orders, 1)
        with np.errstate(invalid="ignore"):
            by_size = np.where(ending.size[:, index] == 0.0, 0.0, ending.size[:, index] * waveform.rest_sum(orders, 0))
        tails += np.fmin(by_fall, by_size) * level
    one += tails
    other = _around_feed(network, course, ending, found)
    return one if other is None else np.fmin(one, other + tails)


def _around_feed(network: Network, course: tuple[int, ...], ending: Ending, found: CourseBounds) -> Floats | None:
    """|c| max|u| + sum |H_n U_n - c U_n|; None where a course has several drives."""
    members = {s for n in course for s in network.lines[n].sources}
    if len(members) != 1 or any(found.lines[n].around is None for n in course):
        return None
    index = members.pop()
    waveform = network.sources[index].waveform
    level = found.levels[:, index : index + 1]
    total = np.abs(ending.feed[:, index]) * (1.0 + abs(waveform.mean)) * level
    count = 2 * len(network.branches) + len(network.nodes)
    for n in course:
        around = found.lines[n].around
        assert around is not None
        wide = np.full_like(total, np.inf)
        wide[:, :count] = around[:, :count]
        wide[:, count + index] = around[:, count]
        total = total + wide
    return np.asarray(total)

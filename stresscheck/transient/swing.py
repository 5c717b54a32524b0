"""A response in time at one point of the box, and the largest value that it can take whatever the phases.

Each frequency of the drives brings a swing: y(t) = Re sum over its harmonics n of e^{jn theta} F_n(t), with the phase
theta at the instant of the event unknown, and F_n(t) a sum of c e^{r t}: the driven part r = j n omega, and the
natural modes. Beside the swings stands the part that no phase changes (direct currents). The largest value over the
phases is then the sum of |F(t)| over the frequencies, plus the size of the direct part.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np

from stresscheck.arrays import Complexes, Flags, Floats

PER_SCALE = 193
"""Instants for every time constant and period that occurs, from zero to twelve of it."""
SPAN = 12.0
FINE = 48
"""Instants per period of the fastest beat where the top is sought."""
MOST_FINE = 12_000
MOST_WITH_HARMONICS = 160
"""Fewer instants where every phase is looked at for each."""
TOPS = 3
MORE_TOPS = 24
"""Tops of the envelope that are searched finely, at first and where not every instant can be."""
MOST_EVERYWHERE = 20_000
"""Instants, from the event on, at which the course is looked at; beyond them around tops of the envelope only."""
APART = 0.15
"""Rates whose frequencies differ by more than this part of the larger beat fast: their sizes are added."""
GLANCE = 3
"""Every third instant is enough to compare points."""
DEAD = 1e-13
"""Rates below this part of the fastest stand still."""

Rest = Callable[[Floats], Floats]
"""Angle of the fundamental [any shape] to what the harmonics left out adds to each response, [responses, shape]."""


@dataclass(frozen=True, slots=True)
class Terms:
    """Sum of c e^{r t}: `coefficient` [responses, terms], `rate` [terms], real parts not positive."""

    coefficient: Complexes
    rate: Complexes

    def at(self, time: Floats) -> Complexes:
        """Values at instants [n] or [responses, n], shape [responses, n]."""
        if time.ndim == 1:
            return np.asarray(self.coefficient @ np.exp(self.rate[:, None] * time))
        return np.asarray(np.einsum("ot,otn->on", self.coefficient, np.exp(self.rate[:, None] * time[:, None, :])))

    def clusters(self) -> list[Terms]:
        """Groups of terms whose frequencies lie close together."""
        order = np.argsort(self.rate.imag, kind="stable")
        frequency = self.rate.imag[order]
        gap = np.diff(frequency) > APART * np.maximum(np.abs(frequency[1:]), np.abs(frequency[:-1]))
        return [
            Terms(self.coefficient[:, rows], self.rate[rows])
            for rows in np.split(order, np.flatnonzero(gap) + 1)
            if rows.size
        ]


@dataclass(frozen=True, slots=True)
class Swing:
    """One frequency: (order, terms) of each harmonic; `omega` of the fundamental [rad/s]. `rest`: what the harmonics
    leave out, None where nothing; `feed` [responses]: its largest size; `edges`: angles at which it jumps."""

    harmonics: tuple[tuple[int, Terms], ...]
    omega: float
    edges: tuple[float, ...] = ()
    feed: Floats | None = None
    rest: Rest | None = None


@dataclass(frozen=True, slots=True)
class Happening:
    """All swings of an event, the direct part, and which responses nothing limits [responses]."""

    swings: tuple[Swing, ...]
    direct: Terms
    unlimited: Flags

    def only(self, rows: list[int]) -> Happening:
        """The same for some responses."""
        swings = tuple(
            Swing(
                tuple((n, Terms(t.coefficient[rows], t.rate)) for n, t in swing.harmonics),
                swing.omega,
                swing.edges,
                None if swing.feed is None else swing.feed[rows],
                None if swing.rest is None else _rows_of(swing.rest, rows),
            )
            for swing in self.swings
        )
        direct = Terms(self.direct.coefficient[rows], self.direct.rate)
        return Happening(swings, direct, self.unlimited[rows])

    def terms(self) -> list[Terms]:
        """Every sum of terms, the direct part last."""
        return [terms for swing in self.swings for _, terms in swing.harmonics] + [self.direct]


@dataclass(frozen=True, slots=True)
class Largest:
    """Per response: `value`, the largest found, at the instant `time` after the event; `ceiling`: the value exceeds it
    at no instant and for no phase."""

    value: Floats
    time: Floats
    ceiling: Floats


def largest(happening: Happening, until: float = np.inf) -> Largest:
    """Largest value of every response from the event on, up to an instant [s]. Infinite where nothing limits it."""
    terms = happening.terms()
    rates = np.concatenate([t.rate for t in terms])
    if not rates.size:
        none = np.zeros(len(happening.unlimited))
        return Largest(none, none, none)
    clusters = [c for t in terms for c in t.clusters()]
    time = _instants(rates, [c.rate for c in clusters])
    ends = until < np.inf
    if ends:
        time = np.append(time[time < until], until)
    envelope = np.sum([np.abs(c.at(time)) for c in clusters], axis=0)
    ceiling = _ceiling(clusters, time, envelope, ends=ends) + _rest_ceiling(happening)
    value, when = _refined(happening, time, envelope, until)
    value = np.where(happening.unlimited, np.inf, value)
    return Largest(value, when, np.where(happening.unlimited, np.inf, np.maximum(ceiling, value)))


def glance(happening: Happening) -> Floats:
    """Size of every response at a few hundred instants of every scale, the largest of each: quick, to compare points.

    Harmonics of one frequency are added whatever their phases. Infinite where nothing limits it.
    """
    terms = happening.terms()
    rates = np.concatenate([t.rate for t in terms])
    if not rates.size:
        return np.zeros(len(happening.unlimited))
    time = _instants(rates, [c.rate for t in terms for c in t.clusters()])[::GLANCE]
    total = np.sum([np.abs(t.at(time)) for t in terms[:-1]], axis=0) + np.abs(happening.direct.at(time).real)
    return np.where(happening.unlimited, np.inf, total.max(axis=1))


def _instants(rates: Complexes, clusters: list[Complexes]) -> Floats:
    """Instants at every scale that occurs: of each rate, and of the beats within each cluster."""
    beats = [np.abs(c[:, None] - c[None, :]).reshape(-1) for c in clusters]
    speed = np.concatenate([np.abs(rates), np.abs(rates.real), *beats])
    speed = np.sort(speed[speed > DEAD * np.abs(rates).max()])
    if not speed.size:
        return np.zeros(1)
    kept = speed[np.concatenate([[True], np.diff(np.log(speed)) > 0.25])]
    grids = [np.linspace(0.0, SPAN / s, PER_SCALE) for s in kept]
    return np.unique(np.concatenate([np.zeros(1), *grids]))


def _ceiling(clusters: list[Terms], time: Floats, envelope: Floats, *, ends: bool) -> Floats:
    """Upper bound over all instants: between two of them each cluster moves by at most its slope times half the gap."""
    middle = [0.5 * (c.rate.imag.max() + c.rate.imag.min()) for c in clusters]
    step = np.append(np.diff(time), 0.0)
    drift = np.zeros_like(envelope)
    later = np.zeros_like(envelope)
    for cluster, centre in zip(clusters, middle, strict=True):
        size = np.abs(cluster.coefficient)
        alive = np.exp(cluster.rate.real[:, None] * time)
        drift += (size * np.abs(cluster.rate - 1j * centre)) @ alive
        later += size @ alive
    # From a grid point up to half the gap ahead, and from the next one half the gap back with the slope of the earlier.
    ahead = np.minimum(envelope + 0.5 * step * drift, later)
    back = np.minimum(envelope[:, 1:] + 0.5 * step[:-1] * drift[:, :-1], later[:, :-1])
    most = np.maximum(ahead.max(axis=1), back.max(axis=1, initial=0.0))
    return np.asarray(most if ends else np.maximum(most, later[:, -1]))


def _rest_ceiling(happening: Happening) -> Floats:
    total = np.zeros(len(happening.unlimited))
    for swing in happening.swings:
        if swing.feed is not None:
            total += swing.feed
    return total


def _refined(happening: Happening, time: Floats, envelope: Floats, until: float) -> tuple[Floats, Floats]:
    """Look finely, response by response: everywhere where that is affordable, else around the envelope's tops."""
    value, when = np.zeros(len(envelope)), np.zeros(len(envelope))
    for row, course in enumerate(envelope):
        if course.max() <= 0.0:
            continue
        one = _only(happening, row)
        slow = _slowest_beat(one)
        for top in _tops(course, TOPS):
            value[row], when[row] = _better(one, _window(one, float(time[top]), until, slow), value[row], when[row])
        # Beyond the last instant at which the envelope is above what has been found nothing can be larger.
        last = np.flatnonzero(course > value[row] * (1.0 + 1e-9))
        if not last.size:
            continue
        end = min(until, float(time[min(last[-1] + 1, len(time) - 1)]))
        step = _step(one, 0.0)
        if step <= 0.0:
            continue
        alone = all(len(swing.harmonics) == 1 for swing in one.swings)
        count = int(min(max(end / step, 65.0), MOST_EVERYWHERE if alone else 4 * MOST_WITH_HARMONICS))
        value[row], when[row] = _better(one, np.linspace(0.0, min(end, count * step), count), value[row], when[row])
        if end > count * step and alone:
            for top in _tops(course, MORE_TOPS)[TOPS:]:
                value[row], when[row] = _better(one, _window(one, float(time[top]), until, slow), value[row], when[row])
    return value, when


def _better(one: Happening, fine: Floats, value: float, when: float) -> tuple[float, float]:
    """The larger of what is known and of the largest value at these instants and between them."""
    seen = _worst_phase(one, fine)
    best = int(seen.argmax())
    for _ in range(2):
        near = np.linspace(fine[max(best - 1, 0)], fine[min(best + 1, len(fine) - 1)], 33)
        again = _worst_phase(one, near)
        if again.max() < seen.max():
            break
        fine, seen, best = near, again, int(again.argmax())
    return (float(seen[best]), float(fine[best])) if seen[best] > value else (value, when)


def _tops(course: Floats, count: int) -> list[int]:
    """Places of the highest tops of an envelope."""
    padded = np.concatenate([[-np.inf], course, [-np.inf]])
    tops = np.flatnonzero((padded[1:-1] >= padded[:-2]) & (padded[1:-1] > padded[2:]))
    order = tops[np.argsort(-course[tops], kind="stable")]
    return [int(i) for i in order[:count]]


def _only(happening: Happening, row: int) -> Happening:
    """The same for one response, without the terms that it doesn't have."""

    def cut(terms: Terms) -> Terms:
        keep = np.abs(terms.coefficient[0]) > 0.0
        return Terms(terms.coefficient[:, keep], terms.rate[keep])

    one = happening.only([row])
    swings = tuple(replace(swing, harmonics=tuple((n, cut(t)) for n, t in swing.harmonics)) for swing in one.swings)
    return Happening(swings, cut(one.direct), one.unlimited)


def _rows_of(rest: Rest, rows: list[int]) -> Rest:
    return lambda angle: rest(angle)[rows]


def _alive(one: Happening, time: float) -> list[Floats]:
    """Frequencies [rad/s] of the terms that still count at an instant, sum by sum."""
    terms = one.terms()
    sizes = [np.abs(t.coefficient[0]) * np.exp(t.rate.real * time) for t in terms]
    biggest = max((float(s.max()) for s in sizes if s.size), default=0.0)
    return [t.rate.imag[size > 1e-5 * biggest] for t, size in zip(terms, sizes, strict=True) if size.size]


def _fastest(one: Happening, time: float) -> float:
    """Fastest beat at an instant [rad/s]: within each sum, and of everything where a direct part beats with it."""
    alive = [a for a in _alive(one, time) if a.size]
    spread = [float(np.ptp(a)) for a in alive]
    if one.direct.rate.size:
        spread += [float(np.abs(a).max()) for a in alive]
    return max(spread, default=0.0)


def _step(one: Happening, time: float) -> float:
    """Time between instants that is fine enough for the fastest beat; zero without any."""
    fast = _fastest(one, time)
    return 2.0 * np.pi / fast / FINE if fast > 0.0 else 0.0


def _slowest_beat(one: Happening) -> float:
    """Smallest distance between the frequencies of clusters [rad/s], infinite where there is one cluster."""
    centres = np.unique([float(c.rate.imag.mean()) for t in one.terms() for c in t.clusters()])
    gaps = np.diff(centres)
    return float(gaps.min()) if gaps.size else np.inf


def _window(one: Happening, top: float, until: float, slow: float) -> Floats:
    """Fine instants around a top: two periods of the slowest fast beat, fine enough for the fastest one alive."""
    fast = _fastest(one, top)
    if fast == 0.0:
        return np.array([top])
    half = 2.0 * np.pi / min(slow, fast)
    step = 2.0 * np.pi / fast / FINE
    most = MOST_FINE if all(len(swing.harmonics) == 1 for swing in one.swings) else MOST_WITH_HARMONICS
    count = int(min(most, max(65, 2.0 * half / step)))
    start = max(0.0, top - half)
    return np.linspace(start, min(top + half, until), count)


def _worst_phase(one: Happening, time: Floats) -> Floats:
    """Largest size over all phases at each instant, [instants], of a happening of one response."""
    direct = one.direct.at(time)[0].real if one.direct.rate.size else np.zeros(len(time))
    up, down = np.zeros(len(time)), np.zeros(len(time))
    for swing in one.swings:
        if len(swing.harmonics) == 1 and swing.rest is None:
            size = np.abs(swing.harmonics[0][1].at(time)[0])
            up, down = up + size, down + size
            continue
        high, low = _over_phases(swing, time)
        up, down = up + high, down + low
    return np.asarray(np.maximum(np.abs(direct + up), np.abs(direct - down)))


def _over_phases(swing: Swing, time: Floats) -> tuple[Floats, Floats]:
    """Largest and largest opposite value of a swing with harmonics over the phase, [instants] each.

    The phase is counted from each instant's own angle, so that the grid, its edges and the rest serve all instants.
    """
    orders = np.array([n for n, _ in swing.harmonics])
    grid = np.linspace(-np.pi, np.pi, max(64, 10 * int(orders.max())), endpoint=False)
    angle = np.concatenate([grid, [e + side for e in swing.edges for side in (-1e-9, 1e-9)]])
    basis = np.concatenate([np.cos(orders[:, None] * angle), -np.sin(orders[:, None] * angle)])
    turned = np.stack([t.at(time)[0] * np.exp(-1j * n * swing.omega * time) for n, t in swing.harmonics], axis=1)
    course = np.concatenate([turned.real, turned.imag], axis=1) @ basis
    if swing.rest is not None:
        course = course + swing.rest(angle)[0]
    return course.max(axis=1), -course.min(axis=1)

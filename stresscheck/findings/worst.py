"""The worst case of many stresses of one network: found by climbing, bounded by branch and bound."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field, replace
from itertools import product

import numpy as np

from stresscheck.arrays import Flags, Floats, Indices
from stresscheck.circuit.enclosure import LineBounds
from stresscheck.circuit.modes import mode_hertz
from stresscheck.circuit.network import Network
from stresscheck.circuit.splitting import best_split
from stresscheck.circuit.tuning import branch_on_axis, reactive_axes, stationary_values, tuned_values
from stresscheck.search.box import Box, corner_points
from stresscheck.search.climb import Peaks, climb, merge
from stresscheck.search.prove import Bounds, Goal, prove
from stresscheck.search.ridge import along_ridges, gained
from stresscheck.stress.course_bounds import Settled, settled
from stresscheck.stress.energy import CIRCUIT, QUANTITY
from stresscheck.stress.needs import needs_of
from stresscheck.stress.sizes import only_sines, sizes_at, sizes_over
from stresscheck.stress.stresses import PartNotes, stresses

ZERO = 1e-9
"""What counts as zero beside the largest stress of the same quantity: rounding leaves such noise in dead parts."""
BATCH_CORNERS = 6144
"""Corners handled together: few enough for the cache, enough to pay for the calls."""
MOST_NUMBERS = 4_000_000
"""Numbers of all matrices of a block of points."""
LEADING = 4
"""Harmonics of each frequency that may be tuned to a resonance when starts are chosen."""
RIDGE_ROUNDS = 6
PATTERN = 12
"""Scales of the steps tried on axes without a closed form, each a quarter of the one before."""


@dataclass(frozen=True, slots=True)
class Limiting:
    """A limit that moves with frequency: its value at each frequency [Hz], and its smallest over bands."""

    at: Callable[[Floats], Floats]
    smallest: Callable[[Floats, Floats], Floats]


@dataclass(frozen=True, slots=True)
class Asked:
    """One function to be maximized: a stress, or a stress over a limit that moves with frequency.

    `prove`: whether a bound is wanted too.
    """

    part: str
    quantity: str
    limit: Limiting | None = None
    prove: bool = True


@dataclass(frozen=True, slots=True)
class Worst:
    """Per asked function: nominal value, largest found and where, largest at corners alone, and the bound.

    `noise`: values up to this are rounding of a stress that is zero; `too_many`: so many values vary that no bound was
    tried.
    """

    nominal: Floats
    peaks: Peaks
    corners: Floats
    bounds: Bounds
    noise: Floats
    too_many: bool = False


@dataclass(slots=True)
class Problem:
    """The functions of one network over its box. Holds the largest values seen at any point that was evaluated."""

    network: Network
    notes: Mapping[str, PartNotes]
    asked: Sequence[Asked]
    box: Box = field(init=False)
    too_many: bool = False
    known: Settled | None = None
    carriers: Indices | None = None
    rough: bool = False

    def __post_init__(self) -> None:
        axes = self.network.axes
        self.box = Box(axes.low, axes.nominal, axes.high)

    def _settled(self) -> Settled:
        """What is bounded once for the whole box."""
        if self.known is None:
            self.known = settled(self.network, needs_of(self.network, self.asked))
        return self.known

    def values(self, points: Floats) -> Floats:
        """Every asked function at points, [points, functions]; in blocks that fit the memory."""
        size = (len(self.network.nodes) + len(self.network.branches)) ** 2
        block = max(256, MOST_NUMBERS // size)
        if len(points) <= block:
            return self._values(points)
        return np.concatenate([self._values(points[i : i + block]) for i in range(0, len(points), block)])

    def _values(self, points: Floats) -> Floats:
        sizes = sizes_at(self.network, points, rough=self.rough)
        found = stresses(self.network, self.notes, sizes)
        columns = []
        for ask in self.asked:
            value = found[ask.part, ask.quantity]
            if ask.limit is not None:
                hertz = [line.hertz(points) for line in self.network.lines if line.weighty]
                value = value / np.min([ask.limit.at(f) for f in hertz], axis=0)
            columns.append(value)
        return np.stack(columns, axis=1)

    def bounds(self, lows: Floats, highs: Floats, focus: Indices, still: Flags) -> tuple[Floats, Indices]:
        """Bound of the functions still asked for over boxes, and the axis to split each box on."""
        need = needs_of(self.network, [a for a, s in zip(self.asked, still, strict=True) if s])
        sizes, lines = sizes_over(self.network, lows, highs, need, self._settled())
        self.too_many = all(line.none_tried for line in lines)
        found = stresses(self.network, self.notes, sizes)
        bound = np.full((len(lows), len(self.asked)), np.inf)
        for column, ask in enumerate(self.asked):
            if not still[column]:
                continue
            value = found[ask.part, ask.quantity]
            if ask.limit is not None:
                bands = [(ln.hertz(lows), ln.hertz(highs)) for ln in self.network.lines if ln.weighty]
                value = value / np.min([ask.limit.smallest(*band) for band in bands], axis=0)
            bound[:, column] = np.where(np.isnan(value), np.inf, value)
        return bound, self._split(sizes.ampere, sizes.volt, lines, lows, highs, focus)

    def _split(
        self, ampere: Floats, volt: Floats, lines: list[LineBounds], lows: Floats, highs: Floats, focus: Indices
    ) -> Indices:
        """Split on behalf of the line that contributes most to the function in focus."""
        outputs = self.outputs()[focus]
        rows = np.arange(len(lows))
        count = len(self.network.branches)
        share = np.stack([
            np.where(outputs < count, a[rows, outputs % count], v[rows, outputs % count])
            for a, v in zip(ampere, volt, strict=True)
        ])  # fmt: skip
        leading = np.where(np.isnan(share), np.inf, share).argmax(axis=0)
        axis = np.empty(len(lows), dtype=np.intp)
        for number, line in enumerate(self.network.lines):
            mine = leading == number
            if mine.any():
                axis[mine] = best_split(self.network, line, lines[number], outputs, lows, highs)[mine]
        return axis

    def outputs(self) -> Indices:
        """For each asked function the response that carries it, in the order of the tableau's readings."""
        if self.carriers is None:
            self.carriers = self._carriers()
        return self.carriers

    def _carriers(self) -> Indices:
        count = len(self.network.branches)
        out = []
        for ask in self.asked:
            if ask.part == CIRCUIT:
                out.append(self._liveliest())
                continue
            if ask.part.startswith("node:"):
                out.append(2 * count + self.network.nodes.index(ask.part[5:]))
                continue
            place = self.network.branch_of(ask.part)
            if place is None:
                place = self.network.branch_of(ask.part, "source") or 0
            by_volt = ask.quantity.startswith("voltage") or ask.quantity == "slew_rate"
            out.append(place + count if by_volt else place)
        return np.array(out, dtype=np.intp)

    def _liveliest(self) -> int:
        """The current of the capacitor or coil that stores most at nominal values: it stands for the energy."""
        seen = sizes_at(self.network, self.box.nominal[None])
        stored = (seen.root_var[: len(self.network.lines), 0] ** 2 / seen.omega[0]).sum(axis=0)
        return int(stored.argmax())

    def candidates(self, points: Floats, target: Indices, axis: int) -> Floats:
        """Values to try on one axis: stationary ones in closed form, else a pattern of shrinking steps."""
        network = self.network
        outputs = self.outputs()[target]
        branch = branch_on_axis(network, axis)
        tries = []
        coupled = any(branch in (c.first, c.second) for c in network.couplings)
        if branch is not None:
            tries = [stationary_values(network, line, points, axis, outputs) for line in network.leading(LEADING)]
        direct = [ask.quantity.startswith(("voltage", "current", QUANTITY)) for ask in self.asked]
        if branch is None or coupled or not np.array(direct)[target].all():
            width = self.box.high[axis] - self.box.low[axis]
            steps = width * 0.25 ** np.arange(1, PATTERN + 1)
            here = points[:, axis : axis + 1]
            tries += [here + steps, here - steps]
        return np.concatenate(tries, axis=1)

    def tunable(self) -> tuple[int, ...]:
        """Axes that can bring a point back to resonance: reactive elements, else the frequency."""
        reactive = reactive_axes(self.network)
        bands = tuple(ln.frequency_axis for ln in self.network.lines if self.network.band(ln))
        return reactive or bands

    def retuned(self, points: Floats, target: Indices, axis: int) -> Floats:
        """Values of one axis that may bring each point back onto its ridge: of the element, or the nearest mode's."""
        for line in self.network.lines:
            if axis == line.frequency_axis:
                modes = mode_hertz(self.network, points)
                if not modes.shape[1]:
                    return points[:, axis : axis + 1]
                modes = modes / line.order
                distance = np.where(np.isfinite(modes), np.abs(modes - points[:, axis : axis + 1]), np.inf)
                return np.take_along_axis(modes, distance.argmin(axis=1)[:, None], axis=1)
        outputs = self.outputs()[target]
        return stationary_values(self.network, self.network.lines[0], points, axis, outputs)

    def starts(self) -> Floats:
        """Corners; each with one reactive element tuned; each with its drives at a natural frequency."""
        corners = np.concatenate([self.box.nominal[None], corner_points(self.box)])
        out = [corners]
        for axis in reactive_axes(self.network):
            for line in self.network.leading(LEADING):
                tuned = corners.copy()
                value = tuned_values(self.network, line, corners, axis)
                tuned[:, axis] = np.where(np.isfinite(value), value, corners[:, axis])
                out.append(tuned)
        bands = [(ln.frequency_axis, ln.order) for ln in self.network.leading(LEADING) if self.network.band(ln)]
        if bands:
            modes = mode_hertz(self.network, corners)
            for column, order in product(range(modes.shape[1]), sorted({order for _, order in bands})):
                at_mode, hertz = corners.copy(), modes[:, column] / order
                for axis in {axis for axis, n in bands if n == order}:
                    at_mode[:, axis] = np.where(np.isfinite(hertz), hertz, corners[:, axis])
                out.append(at_mode)
        return np.asarray(np.clip(np.concatenate(out), self.box.low, self.box.high))


def _find(problem: Problem, stop: Callable[[], bool]) -> Peaks:
    """Climb from all starts, then along ridges as long as that gains."""
    peaks = climb(problem.box, problem.values, problem.candidates, problem.starts(), stop)
    tunable = problem.tunable()
    for _ in range(RIDGE_ROUNDS):
        if stop():
            break
        better = along_ridges(problem.box, problem.values, problem.retuned, tunable, peaks)
        if not gained(peaks, better):
            break
        starts = np.unique(better.point[better.value > peaks.value], axis=0)
        peaks = merge(better, climb(problem.box, problem.values, problem.candidates, starts, stop))
    return peaks


def _found(problem: Problem, stop: Callable[[], bool]) -> Peaks:
    """The largest values found; where courses have harmonics the search adds the peaks of the leading ones, and the
    courses themselves are put together at the points that it ends at."""
    if only_sines(problem.network):
        return _find(problem, stop)
    few = replace(problem.network, lines=problem.network.leading(LEADING))
    rough = _find(Problem(few, problem.notes, problem.asked, rough=True), stop)
    points = np.unique(
        np.concatenate([problem.box.nominal[None], rough.point[np.isfinite(rough.point).all(axis=1)]]), axis=0
    )
    values = problem.values(points)
    row = np.where(np.isfinite(values), values, -np.inf).argmax(axis=0)
    return Peaks(values[row, np.arange(values.shape[1])], points[row])


def worst_case(problem: Problem, gap: float, limit: Floats, stop: Callable[[bool], bool]) -> Worst:
    """Find and bound every asked function of a problem.

    gap: how far a bound may stay above the found value, relative; limit: what each function is compared with, NaN
    where nothing is; stop: True ends the proof early, what isn't proved then keeps a larger bound.
    """
    nominal = problem.values(problem.box.nominal[None])[0]
    corners = _largest(problem.values(corner_points(problem.box)))
    peaks = _found(problem, lambda: stop(False))
    if not problem.box.varying:
        peaks = Peaks(nominal, np.repeat(problem.box.nominal[None], len(nominal), axis=0))
        return Worst(nominal, peaks, corners, Bounds(nominal.copy(), 1, False), _floor(problem, nominal))
    state = {"peaks": peaks}

    def improve(points: Floats) -> Floats:
        values = problem.values(points)
        values = np.where(np.isfinite(values), values, -np.inf)
        row = values.argmax(axis=0)
        seen = Peaks(values[row, np.arange(values.shape[1])], points[row])
        best = state["peaks"].value
        better = seen.value - best > 1e-9 * np.abs(best)
        if better.any() and not only_sines(problem.network):
            state["peaks"] = merge(state["peaks"], seen)
        elif better.any():
            again = climb(problem.box, problem.values, problem.candidates, seen.point[better])
            state["peaks"] = merge(merge(state["peaks"], seen), again)
        return state["peaks"].value

    floor = _floor(problem, peaks.value)
    goal = Goal(gap, floor, limit)
    wanted = np.array([ask.prove for ask in problem.asked])

    def known(points: Floats) -> Floats:
        return np.where(wanted, improve(points), np.nan)

    found = np.where(wanted, peaks.value, np.nan)
    bounds = prove(
        problem.box, problem.bounds, known, found, goal, _batch(problem), lambda d: problem.too_many or stop(d)
    )
    bounds = Bounds(bounds.bound + floor, bounds.boxes, bounds.spent)
    return Worst(nominal, state["peaks"], corners, bounds, floor, problem.too_many)


def _largest(values: Floats) -> Floats:
    return np.asarray(np.where(np.isfinite(values), values, -np.inf).max(axis=0))


def _floor(problem: Problem, value: Floats) -> Floats:
    """Noise level of each function: a small part of the largest stress of the same quantity."""
    largest: dict[str, float] = {}
    for ask, v in zip(problem.asked, value, strict=True):
        if np.isfinite(v) and ask.limit is None:
            largest[ask.quantity] = max(largest.get(ask.quantity, 0.0), float(v))
    return np.array([ZERO * largest.get(a.quantity, 0.0) if a.limit is None else 0.0 for a in problem.asked])


def _batch(problem: Problem) -> int:
    """Boxes split together, by how many corners a box has."""
    varying = len(problem.box.varying)
    return int(np.clip(BATCH_CORNERS // 2 ** (varying + 1), 1, 64))

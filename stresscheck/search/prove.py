"""Upper bounds of several functions over a box, by splitting the boxes that are too loose, worst first."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Flags, Floats, Indices
from stresscheck.search.box import Box

Enclose = Callable[[Floats, Floats, Indices, Flags], tuple[Floats, Indices]]
"""(lows, highs [boxes, axes], function that matters most in each box, functions still asked for) → (upper bounds
[boxes, functions], infinite where none is known or asked for; axis on which each box is best split)."""
Improve = Callable[[Floats], Floats]
"""points [points, axes] → the largest values now known of every function [functions]."""
Stop = Callable[[bool], bool]
"""True ends the search; the argument says whether every function is decided against its limit already."""


PATIENCE = 400
"""Boxes after which gaps are no longer narrowed once every function is decided: counted, not timed, so that the same
input gives the same bounds."""
ROUNDS = 6
"""Rounds of splitting that a function gets before the next one's turn."""


@dataclass(frozen=True, slots=True)
class Bounds:
    """`bound` [functions]: no point of the box exceeds it; `boxes`: how many boxes were examined; `spent`: True
    where the search was stopped before every gap was closed."""

    bound: Floats
    boxes: int
    spent: bool


@dataclass(frozen=True, slots=True)
class Goal:
    """When a bound is good enough.

    `gap`: relative distance to the largest value found; `floor` [functions]: what counts as zero, so that a
    function that is zero everywhere closes too; `limit` [functions]: what the function is compared with, infinite
    where nothing is, NaN where closing the gap itself is asked for. A function whose found value is over its limit, or
    whose bound is under it, is decided.
    """

    gap: float
    floor: Floats
    limit: Floats

    def close(self, found: Floats) -> Floats:
        """Bounds at most this have closed their gap; infinite for functions without a found value."""
        return np.where(np.isfinite(found), (1.0 + self.gap) * np.maximum(found, 0.0) + self.floor, np.inf)

    def decided(self, found: Floats) -> Floats:
        """Bounds at most this decide the comparison with the limit."""
        with np.errstate(invalid="ignore"):
            over = np.where(found > self.limit, np.inf, self.limit)
        return np.fmax(self.close(found), over)


@dataclass(slots=True)
class _Pool:
    """Boxes still open, one row each: ends [boxes, axes], bounds [boxes, functions], axis to split on.

    `closed` [functions]: largest bound of the boxes that are done.
    """

    low: Floats
    high: Floats
    bound: Floats
    axis: Indices
    closed: Floats

    @staticmethod
    def empty(axes: int, asked: Flags) -> _Pool:
        none = np.empty((0, axes))
        closed = np.where(asked, -np.inf, np.inf)
        return _Pool(none, none, np.empty((0, len(asked))), np.empty(0, dtype=np.intp), closed)

    def add(self, low: Floats, high: Floats, bound: Floats, axis: Indices, goal: Floats) -> None:
        """Take boxes in; those whose bounds all meet the goal are done at once."""
        self.low = np.concatenate([self.low, low])
        self.high = np.concatenate([self.high, high])
        self.bound = np.concatenate([self.bound, bound])
        self.axis = np.concatenate([self.axis, axis])
        self.retire(goal)

    def retire(self, goal: Floats) -> None:
        """Close the boxes whose bounds all meet the goal."""
        open_: Flags = np.asarray((self.bound > goal).any(axis=1))
        if not open_.all():
            self.closed = np.maximum(self.closed, self.bound[~open_].max(axis=0))
            self._keep(open_)

    def take(self, function: int, goal: Floats, batch: int) -> tuple[Floats, Floats, Floats, Indices]:
        """Remove and return the boxes with the largest bounds of one function, those over its goal only."""
        column = self.bound[:, function]
        count = min(batch, int((column > goal[function]).sum()))
        chosen = np.argpartition(-column, count - 1)[:count]
        out = self.low[chosen], self.high[chosen], self.bound[chosen], self.axis[chosen]
        rest = np.ones(len(column), dtype=np.bool_)
        rest[chosen] = False
        self._keep(rest)
        return out

    def _keep(self, rows: Flags) -> None:
        self.low, self.high = self.low[rows], self.high[rows]
        self.bound, self.axis = self.bound[rows], self.axis[rows]

    def overall(self) -> Floats:
        """Largest bound of any box, done or open, [functions]."""
        if not len(self.bound):
            return self.closed
        return np.asarray(np.maximum(self.closed, self.bound.max(axis=0)))


def prove(box: Box, enclose: Enclose, improve: Improve, found: Floats, goal: Goal, batch: int, stop: Stop) -> Bounds:
    """Best-first branch and bound until every function has closed its gap, patience is spent, or `stop` says so.

    found: largest values known [functions]; NaN functions get an infinite bound. A child's bound is never above its
    parent's. batch: how many boxes are split together. The functions take turns, those that are undecided against
    their limits first, so that a stubborn one doesn't starve the others.
    Source: branch and bound, common practice.
    """
    asked = np.isfinite(found)
    pool = _Pool.empty(len(box.low), asked)
    start = np.array([int(asked.argmax())], dtype=np.intp)
    first, axis = enclose(box.low[None], box.high[None], start, asked)
    pool.add(box.low[None], box.high[None], first, axis, goal.close(found))
    boxes = 1
    turns = _Turns(len(found))
    while len(pool.bound) and box.varying:
        overall = pool.overall()
        undecided = overall > goal.decided(found)
        decided = not undecided.any()
        if stop(decided) or (decided and boxes >= PATIENCE):
            break
        turn = turns.next(undecided if undecided.any() else overall > goal.close(found))
        low, high, parent, axis = pool.take(turn, goal.close(found), batch)
        found = improve(0.5 * (low + high))
        lows, highs, parents = _halves(low, high, parent, axis)
        still = asked & (parents > goal.close(found)).any(axis=0)
        focus = np.full(len(lows), turn, dtype=np.intp)
        bounds, axes = enclose(lows, highs, focus, still)
        boxes += len(lows)
        pool.add(lows, highs, np.minimum(bounds, parents), axes, goal.close(found))
    return Bounds(pool.overall(), boxes, bool(len(pool.bound)))


@dataclass(slots=True)
class _Turns:
    """Whose turn it is: a function keeps it for some rounds, for its boxes are split to suit it."""

    functions: int
    current: int = 0
    left: int = ROUNDS

    def next(self, open_: Flags) -> int:
        """The function to work for, one of those that are open."""
        if self.left > 0 and open_[self.current]:
            self.left -= 1
            return self.current
        order = (self.current + 1 + np.arange(self.functions)) % self.functions
        self.current = int(order[open_[order].argmax()])
        self.left = ROUNDS - 1
        return self.current


def _halves(low: Floats, high: Floats, bound: Floats, axis: Indices) -> tuple[Floats, Floats, Floats]:
    """Both halves of every box along its axis, and the bounds of their parents: lower halves first."""
    rows = np.arange(len(low))
    middle = 0.5 * (low[rows, axis] + high[rows, axis])
    left_high, right_low = high.copy(), low.copy()
    left_high[rows, axis] = right_low[rows, axis] = middle
    return np.concatenate([low, right_low]), np.concatenate([left_high, high]), np.concatenate([bound, bound])

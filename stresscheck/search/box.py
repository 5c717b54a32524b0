"""A box of values and samples of its corners."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Floats

MOST_CORNERS = 256
"""Corners taken as starts; where a box has more, a seeded sample of this many."""
SEED = 20260101


@dataclass(frozen=True, slots=True)
class Box:
    """The product of intervals [low, high], one per axis; some may have no width. Shapes [axes]."""

    low: Floats
    nominal: Floats
    high: Floats

    @property
    def varying(self) -> tuple[int, ...]:
        """Columns of the axes that have a width."""
        return tuple(int(i) for i in np.flatnonzero(self.high > self.low))


def corner_points(box: Box, most: int = MOST_CORNERS) -> Floats:
    """Corners of the box, shape [corners, axes]: all of them, or a reproducible sample that holds the two extremes."""
    varying = box.varying
    count = len(varying)
    if 2**count <= most:
        bits = (np.arange(2**count)[:, None] >> np.arange(count)) & 1
    else:
        bits = np.random.default_rng(SEED).integers(0, 2, size=(most, count))
        bits[0], bits[1] = 0, 1
    out = np.repeat(box.low[None], len(bits), axis=0)
    for position, axis in enumerate(varying):
        out[:, axis] = np.where(bits[:, position] == 1, box.high[axis], box.low[axis])
    return out

"""Sizes as the laws take them, and the refusal of sizes for which a law says nothing."""

from __future__ import annotations

import numpy as np

from stresscheck.arrays import Floats

Size = Floats | float
"""One size or an array of them; several arguments broadcast against each other."""


def above_zero(**sizes: Size) -> None:
    """Raise ValueError, naming the argument, for a size that isn't above zero; infinity is let through, NaN isn't."""
    for name, size in sizes.items():
        if not np.all(np.asarray(size) > 0.0):
            raise ValueError(f"{name} has to be above zero")


def zero_or_more(**sizes: Size) -> None:
    """Raise ValueError, naming the argument, for a size below zero or NaN."""
    for name, size in sizes.items():
        if not np.all(np.asarray(size) >= 0.0):
            raise ValueError(f"{name} has to be zero or more")


def finite(**sizes: Size) -> None:
    """Raise ValueError, naming the argument, for a size that is infinite or NaN."""
    for name, size in sizes.items():
        if not np.all(np.isfinite(size)):
            raise ValueError(f"{name} has to be finite")

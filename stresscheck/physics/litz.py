"""AC resistance of litz wire by the low-frequency strand formula, refused where it no longer holds."""

from __future__ import annotations

import math

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.physics.ranges import Size, above_zero, finite, zero_or_more

FEWEST_STRANDS = 7
LARGEST_RATIO = 0.8
"""Strand radius over skin depth, up to which the formula overstates the added loss by at most 4.7 %."""
DENSEST = math.pi / math.sqrt(12.0)
"""Share of the bundle that round strands can fill at most."""


def litz_ratio(strands: Size, strand_radius: Size, bundle_radius: Size, depth: Size, outer_field: Size = 0.0) -> Floats:
    """R_ac/R_dc of a bundle, 1 + (a/depth)^4 [1/48 + n^2 a^2/(8 b^2) + (pi n a h)^2].

    n strands of radius a spread evenly over a bundle, b the radius of the circle of the bundle's area [m];
    h = `outer_field`: root-mean-square field of all other turns at the bundle per ampere [1/m] (`window_field`). Any
    shapes that broadcast. The terms are skin effect of a strand, the bundle's own field, the field of other turns.
    Valid, else ValueError, for a/depth <= 0.8, at least 7 strands, and strands that fit (n a^2 <= 0.907 b^2); supposes
    that every strand takes every place along the bundle, so that currents divide equally, and counts no longer way by
    the twist. The loss of the bundle's own field is overstated by up to 21 % at 7 strands and 1 % at 500.
    Source: derived (low-frequency loss of a cylinder in a field).
    """
    above_zero(strand_radius=strand_radius, bundle_radius=bundle_radius, depth=depth)
    zero_or_more(outer_field=outer_field)
    finite(strands=strands, strand_radius=strand_radius, bundle_radius=bundle_radius, outer_field=outer_field)
    n, a, b = np.asarray(strands), np.asarray(strand_radius), np.asarray(bundle_radius)
    ratio = a / np.asarray(depth)
    if not np.all(n >= FEWEST_STRANDS):
        raise ValueError(f"the strand formula holds for {FEWEST_STRANDS} strands or more")
    if not np.all(ratio <= LARGEST_RATIO):
        raise ValueError(f"the strand formula holds up to a strand radius of {LARGEST_RATIO} skin depths")
    if not np.all(n * a * a <= DENSEST * b * b * (1.0 + 1e-9)):
        raise ValueError(f"strands of that radius fill more than {DENSEST:.3f} of the bundle")
    fields = (n * a / b) ** 2 / 8.0 + (math.pi * n * a * np.asarray(outer_field)) ** 2
    return np.asarray(1.0 + ratio**4 * (1.0 / 48.0 + fields))


def window_field(turns: Size, breadth: Size) -> Floats:
    """Root-mean-square field per ampere in a winding that fills a window, N/(sqrt(3) w) [1/m].

    N turns over a window of breadth w [m], the field rising evenly from zero on one side of the winding to N I/w on the
    other; any shapes that broadcast. Valid between the walls of an ungapped core, or with another winding beside it;
    too low near gaps and at the ends of open coils. Source: derived (Ampere's law).
    """
    above_zero(turns=turns, breadth=breadth)
    finite(turns=turns, breadth=breadth)
    return np.asarray(np.asarray(turns) / (math.sqrt(3.0) * np.asarray(breadth)))

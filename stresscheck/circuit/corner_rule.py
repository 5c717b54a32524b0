"""The corner rule: an upper bound of |N/D| over a box from values at its corners.

N and D are polynomials over the box with common Bernstein (corner) values N_v, D_v: linear in each element, or
quadratic with a middle control value. For any angle t with Re(e^{-jt} D_v) > 0 at every v,

    |N/D| <= max over v of |N_v| / Re(e^{-jt} D_v),

because N and D at a point are the same positive average of the N_v and D_v, so |N| <= average of |N_v| <=
bound * average of Re(e^{-jt} D_v) = bound * Re(e^{-jt} D) <= bound * |D|. The right side is convex in t where it is
finite, so the best t is found by meeting the corners that bind on either side; any t gives a valid bound.

Source: convex hull property of Bernstein form; mapping theorem, Zadeh and Desoer, Linear System Theory, 1963.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Complexes, Flags, Floats, Indices

MARGIN = 1e-6
"""Relative margin that every bound carries for rounding (tried on random networks: 6e-8 seen)."""
STEPS = 8
"""Angles tried: each is where the two corners that bind on either side are equal, so few are needed."""


def corner_rule(size: Floats, denominator: Complexes, steps: int = STEPS) -> Floats:
    """Bound of |N/D| per box and output, shape [boxes, outputs]; infinite where no angle serves.

    size: |N_v|, shape [boxes, corners, outputs]; denominator: D_v, shape [boxes, corners]. NaN anywhere in a box
    makes its bounds infinite. Valid for any box; never below the true maximum beyond rounding.
    """
    low, high, usable = angle_arc(denominator)
    re, im = denominator.real[:, :, None], denominator.imag[:, :, None]
    shape = (size.shape[0], size.shape[2])
    left, right = np.broadcast_to(low[:, None], shape), np.broadcast_to(high[:, None], shape)
    below = _Binding.none(shape)
    above = _Binding.none(shape)
    angle = 0.5 * (left + right)
    best = np.full(shape, np.inf)
    with np.errstate(all="ignore"):
        for _ in range(steps):
            along = np.cos(angle)[:, None, :] * re + np.sin(angle)[:, None, :] * im
            ratio = size / along
            place = ratio.argmax(axis=1)[:, None, :]
            value = np.take_along_axis(ratio, place, axis=1)[:, 0]
            valid = along.min(axis=1) > 0.0
            best = np.where(valid & (value < best), value, best)
            corner = _Binding.at(place, size, denominator)
            rising = np.cos(angle) * corner.im < np.sin(angle) * corner.re
            left, right = np.where(rising, left, angle), np.where(rising, angle, right)
            above, below = above.replaced(rising, corner), below.replaced(~rising, corner)
            angle = _meeting(below, above, left, right)
    best[~usable] = np.inf
    best[np.isnan(size).any(axis=1)] = np.inf
    return best


@dataclass(frozen=True, slots=True)
class _Binding:
    """The corner that binds on one side of the best angle: its |N| and D, NaN where none is known yet."""

    size: Floats
    re: Floats
    im: Floats

    @staticmethod
    def none(shape: tuple[int, int]) -> _Binding:
        empty = np.full(shape, np.nan)
        return _Binding(empty, empty, empty)

    @staticmethod
    def at(place: Indices, size: Floats, denominator: Complexes) -> _Binding:
        d = np.take_along_axis(denominator[:, :, None], place, axis=1)[:, 0].astype(np.complex128)
        return _Binding(np.take_along_axis(size, place, axis=1)[:, 0], d.real, d.imag)

    def replaced(self, where: Flags, by: _Binding) -> _Binding:
        return _Binding(
            np.where(where, by.size, self.size), np.where(where, by.re, self.re), np.where(where, by.im, self.im)
        )


def _meeting(below: _Binding, above: _Binding, left: Floats, right: Floats) -> Floats:
    """Angle at which both corners give the same bound; the middle of the bracket where that is outside or unknown."""
    across = below.size * above.re - above.size * below.re
    along = above.size * below.im - below.size * above.im
    angle = np.arctan2(across, along)
    middle = 0.5 * (left + right)
    angle = angle + np.pi * np.round((middle - angle) / np.pi)
    return np.where((angle > left) & (angle < right), angle, middle)


def angle_arc(denominator: Complexes) -> tuple[Floats, Floats, Flags]:
    """Arc (low, high) of angles t with Re(e^{-jt} D_v) > 0 at every corner, and whether there is one.

    The corners' directions must leave a gap of more than half a turn. Shapes [boxes].
    """
    widest, first = _widest_gap(denominator)
    last = first + 2.0 * np.pi - widest
    finite = np.isfinite(denominator).all(axis=1) & (denominator != 0.0).all(axis=1)
    usable = finite & (widest > np.pi)
    low, high = last - 0.5 * np.pi, first + 0.5 * np.pi
    return np.where(usable, low, 0.0), np.where(usable, high, 0.0), usable


def angle_span(denominator: Complexes) -> Floats:
    """Angle that the corners' directions span [rad], shape [boxes]: from half a turn on there is no bound."""
    return np.asarray(2.0 * np.pi - _widest_gap(denominator)[0])


def _widest_gap(denominator: Complexes) -> tuple[Floats, Floats]:
    """Widest gap between neighbouring directions, and the direction it ends at, [boxes] each."""
    angle = np.sort(np.angle(denominator).astype(np.float64), axis=1)
    following = np.concatenate([angle[:, 1:], angle[:, :1] + 2.0 * np.pi], axis=1)
    gap = following - angle
    place = gap.argmax(axis=1)[:, None]
    widest: Floats = np.take_along_axis(gap, place, axis=1)[:, 0]
    end: Floats = np.take_along_axis(following, place, axis=1)[:, 0]
    return widest, end

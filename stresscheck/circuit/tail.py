"""Bounds that hold for every frequency above a given one: what the harmonics left out of a waveform can do.

With x = lowest frequency / frequency, determinant and numerators times x^degree are polynomials in x on [0, 1], and the
corner rule serves as it does over a band. A response H that has the same value c at endless frequency everywhere in the
box stays within k x of it: N - cD then vanishes at x = 0 and (N - cD)/x is a polynomial too.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Complexes, Floats
from stresscheck.circuit.corner_rule import MARGIN, corner_rule
from stresscheck.circuit.corners import Pieces, flat
from stresscheck.circuit.entries import entries
from stresscheck.circuit.laws import TAU
from stresscheck.circuit.network import Line, Network
from stresscheck.circuit.output_groups import OutputGroup, degree_of, output_groups

ENDLESS = 1e18
"""Frequency [Hz] up to which loss curves are read: beyond their points they are held."""
VANISHES = 1e-7
"""Control values at x = 0 below this part of the largest count as zero: rounding of the change of basis."""


@dataclass(frozen=True, slots=True)
class Tail:
    """Per unit of each drive, [outputs and terminals, sources]: `size` >= |H - c| and `fall` >= |H - c| f / f_lowest
    at every frequency above the lowest; infinite where none is found."""

    size: Floats
    fall: Floats


def tail(network: Network, line: Line, lowest: float, low: Floats, high: Floats, constant: Floats) -> Tail:
    """Bound |H - c| over one box [low, high], each [axes], above `lowest` [Hz].

    constant: c, [outputs and terminals of the line's drives, sources of the line]. line: says which drives act.
    """
    pieces = Pieces.beyond(np.array([TAU * lowest]), degree_of(network))
    count = pieces.count
    rows = np.repeat(low[None], count, axis=0), np.repeat(high[None], count, axis=0)
    band = np.full(count, lowest), np.full(count, ENDLESS)
    found = entries(network, *rows, pieces.omega.reshape(-1), band)
    size = np.full(constant.shape, np.inf)
    fall = np.full(constant.shape, np.inf)
    everything = list(range(len(constant)))
    for group in output_groups(network, line, found, pieces, low[None], high[None], everything):
        below = group.corners.denominator.reshape(1, count, -1)
        for place in range(len(line.sources)):
            away = _numerator(network, line, group, place) - constant[group.rows, place] * below[..., None]
            size[group.rows, place] = _rule(away, below)
            fall[group.rows, place] = _rule(_divided(away, below), below)
    return Tail(size * (1.0 + MARGIN), fall * (1.0 + MARGIN))


def _numerator(network: Network, line: Line, group: OutputGroup, place: int) -> Complexes:
    """Numerators of a group's outputs for one drive, [1, frequencies, corners, outputs]."""
    below = group.corners.denominator
    numerator = group.corners.numerator[..., place].reshape(*below.shape, len(group.rows)).copy()
    first = len(network.nodes) + 2 * len(network.branches)
    if network.sources[line.sources[place]].branch is None:
        numerator[..., np.flatnonzero(group.rows == first + place)] += below[..., None]
    return numerator.reshape(1, below.shape[1], -1, len(group.rows))


def _divided(away: Complexes, below: Complexes) -> Complexes:
    """Control values of p/x from those of p, which must vanish at x = 0; NaN for outputs where it doesn't.

    b_k + b_(k+1) (d - k)/(k + 1): division lowers the degree d by one, and raising it again makes it comparable.
    """
    degree = away.shape[1] - 1
    scale = np.abs(away).max(axis=(1, 2), keepdims=True) + np.abs(below).max(axis=(1, 2))[:, None, None, None] * 1e-9
    zero = (np.abs(away[:, :1]) <= VANISHES * scale).all(axis=2, keepdims=True)
    first = away.copy()
    first[:, 0] = 0.0
    k = np.arange(degree)[None, :, None, None]
    out = first.copy()
    out[:, :-1] += first[:, 1:] * (degree - k) / (k + 1)
    return np.where(zero, out, np.nan)


def _rule(numerator: Complexes, below: Complexes) -> Floats:
    bound: Floats = corner_rule(np.abs(flat(numerator, 1)), flat(below, 0))
    return np.asarray(bound[0])

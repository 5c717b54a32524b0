"""Flux density of a core, two ways, and its loss for a sine (Steinmetz) and for other courses (iGSE)."""

from __future__ import annotations

import math

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.physics.flux_loops import Piece, split_loops
from stresscheck.physics.ranges import Size, above_zero, finite, zero_or_more


def flux_from_current(henry: Size, ampere_peak: Size, turns: Size, area: Size) -> Floats:
    """Peak flux density, L I_pk/(N A) [T]; any shapes that broadcast.

    Inductance [H], peak current with its direct part [A], turns N, area of the core [m^2]. Valid while L is constant,
    below saturation. Source: circuit theory (L2).
    """
    zero_or_more(henry=henry, ampere_peak=ampere_peak)
    above_zero(turns=turns, area=area)
    return np.asarray(np.asarray(henry) * np.asarray(ampere_peak) / (np.asarray(turns) * np.asarray(area)))


def flux_from_voltage(volt_rms: Size, hertz: Size, turns: Size, area: Size) -> Floats:
    """Peak flux density, V_rms/(sqrt(2) pi f N A) = V_rms/(4.443 f N A) [T]; any shapes that broadcast.

    Voltage [V] and frequency [Hz] of a sine, turns N, area of the core [m^2]. Valid for the alternating part of a sine,
    where the winding's resistance takes little of the voltage. Source: circuit theory (L2).
    """
    zero_or_more(volt_rms=volt_rms)
    above_zero(hertz=hertz, turns=turns, area=area)
    swing = math.sqrt(2.0) * math.pi * np.asarray(hertz) * np.asarray(turns) * np.asarray(area)
    return np.asarray(np.asarray(volt_rms) / swing)


def disagreement(first: Size, second: Size) -> Floats:
    """How far two sizes differ, as a share of the larger: 0 where equal, 1 where only one is zero; shapes broadcast.

    For the two flux densities of one sine: they differ only where L, N or A isn't the core's. Valid for sizes of zero
    or more. Source: derived (L2).
    """
    zero_or_more(first=first, second=second)
    finite(first=first, second=second)
    one, two = np.asarray(first, dtype=np.float64), np.asarray(second, dtype=np.float64)
    larger = np.maximum(one, two)
    return np.asarray(np.abs(one - two) / np.where(larger == 0.0, 1.0, larger))


def steinmetz(hertz: Size, tesla_peak: Size, k: float, a: float, b: float) -> Floats:
    """Mean loss of a core in a sine of flux, k f^a B^b, in the unit of k (W/m^3 for k in SI); shapes broadcast.

    Frequency [Hz], peak of the alternating flux density [T]; k, a, b are the material's and hold at its temperature,
    within the frequencies and flux densities they were fitted to, without direct flux. Published mean deviation of such
    figures is 36 to 39 %, so they want a margin. Source: Steinmetz's equation (L3).
    """
    above_zero(k=k, a=a, b=b)
    zero_or_more(hertz=hertz, tesla_peak=tesla_peak)
    return np.asarray(k * np.asarray(hertz) ** a * np.asarray(tesla_peak) ** b)


def igse_coefficient(k: float, a: float, b: float) -> float:
    """k_i = k/((2 pi)^(a-1) 2^(b-a) integral of |cos|^a over a turn), with which a sine gives Steinmetz's loss.

    The integral is 2 sqrt(pi) Gamma((a+1)/2)/Gamma(a/2+1). Valid for all k, a, b above zero; k_i has the unit of k.
    Source: improved generalised Steinmetz equation; the integral: derived.
    """
    above_zero(k=k, a=a, b=b)
    turn = 2.0 * math.sqrt(math.pi) * math.exp(math.lgamma(0.5 * (a + 1.0)) - math.lgamma(0.5 * a + 1.0))
    return k / (math.pow(2.0 * math.pi, a - 1.0) * math.pow(2.0, b - a) * turn)


def igse(seconds: Size, tesla: Size, k: float, a: float, b: float) -> Floats:
    """Mean loss for flux made of straight pieces, (1/T) sum of k_i |dB/dt|^a H^(b-a) dt, in the unit of k.

    Corners of one whole period on the last axis: `seconds` grow, `tesla` ends where it began (else ValueError); shapes
    broadcast, the result has that shape without the last axis. H is the height from lowest to highest flux of the loop
    that a piece belongs to, minor loops each on their own. Valid as far as Steinmetz's equation; direct flux and the
    loss that goes on while the flux stands still are left out. Check: a triangle takes 0.93 of a sine of the same peak
    at a = 1.4. Source: improved generalised Steinmetz equation (L3).
    """
    finite(seconds=seconds, tesla=tesla)
    time, flux = np.broadcast_arrays(np.asarray(seconds, dtype=np.float64), np.asarray(tesla, dtype=np.float64))
    lasting, moved = np.diff(time, axis=-1), np.diff(flux, axis=-1)
    if time.shape[-1] < 2 or not np.all(lasting > 0.0):
        raise ValueError("the times of a period have to grow from corner to corner")
    height = np.ptp(flux, axis=-1)
    if not np.all(np.abs(flux[..., -1] - flux[..., 0]) <= 1e-9 * height):
        raise ValueError("the flux has to end a period where it began")
    total = np.atleast_1d(_power(lasting, moved, height, a, b))
    several = np.atleast_1d(np.abs(moved).sum(axis=-1) > 2.0 * height * (1.0 + 1e-9))
    rows = lasting.reshape(-1, lasting.shape[-1]), flux.reshape(-1, flux.shape[-1])
    for row in np.flatnonzero(several):
        total.flat[row] = _looped(rows[0][row], rows[1][row], a, b)
    return np.asarray(igse_coefficient(k, a, b) * total.reshape(height.shape) / (time[..., -1] - time[..., 0]))


def _power(lasting: Floats, moved: Floats, height: Floats, a: float, b: float) -> Floats:
    """Sum of |dB/dt|^a H^(b-a) dt over the last axis; nothing where the flux stands still."""
    steep = ((np.abs(moved) / lasting) ** a * lasting).sum(axis=-1)
    moving = height > 0.0
    return np.where(moving, np.where(moving, height, 1.0) ** (b - a) * steep, 0.0)


def _looped(lasting: Floats, flux: Floats, a: float, b: float) -> float:
    """The same sum for one period with minor loops, each loop with its own height."""
    ends = [*flux[:-1], flux[0]]
    pieces = [Piece(float(s), float(u), float(v)) for s, u, v in zip(lasting, ends[:-1], ends[1:], strict=True)]
    total = 0.0
    for loop in split_loops(pieces):
        height = max(piece.start for piece in loop) - min(piece.start for piece in loop)
        for seconds, start, end in loop:
            if end != start:
                total += float((abs(end - start) / seconds) ** a * seconds * height ** (b - a))
    return total

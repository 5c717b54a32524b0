"""What the worst waveform inside given rails can do: the integral of the size of the impulse response.

|y(t)| = |integral h(t - x) u(x) dx| <= max|u| * integral |h|, and the waveform that switches between the rails with the
sign of h reaches it. h is a sum of c e^{lambda t}, so its integral is known and only its zeros are sought.
Source: derived; bound of linear systems for bounded inputs, circuit theory.
"""

from __future__ import annotations

import numpy as np

from stresscheck.arrays import Complexes, Floats
from stresscheck.stress.rests import terminal_feed
from stresscheck.transient.events import Stage

PER_PERIOD = 24
MOST = 400_000
"""Instants at which zeros are sought; what lies beyond is summed lobe by lobe or mode by mode."""
GONE = 1e-12
"""Part of its largest size at which a mode has died away."""
NEGLIGIBLE = 1e-13


def absolute_integrals(stage: Stage, rows: list[int]) -> Floats:
    """|D| + integral |h| of each response per unit of each drive, [rows, drives]; infinite where it has no end.

    Exact to 1e-6, except where several slow modes ring for more than some 10,000 periods together: there the modes'
    own integrals are added, which is never below the true value.
    """
    system, ring = stage.ring.motion, stage.ring
    count = system.d.shape[1]
    out = np.zeros((len(rows), len(stage.network.sources)))
    for column in range(out.shape[1]):
        direct = np.abs(np.concatenate([system.d[0, :, column], _own(stage, column)]))
        ends = np.abs(np.concatenate([system.e[0, :, column], np.zeros(len(stage.out) - count)]))
        for place, row in enumerate(rows):
            coefficient = stage.out[row] * ring.into[0, :, column]
            total = _integral(coefficient, ring.pole[0])
            out[place, column] = np.inf if ends[row] > 0.0 else direct[row] + total
    return out


def _own(stage: Stage, column: int) -> Floats:
    """Direct part of the drives' terminal currents."""
    return np.asarray(terminal_feed(stage.network, stage.ring.motion.d, column)[0])


def _integral(coefficient: Complexes, pole: Complexes) -> float:
    """Integral of |sum c e^{lambda t}| from zero on."""
    size = np.abs(coefficient)
    kept = size > NEGLIGIBLE * size.max(initial=0.0)
    c, pole = coefficient[kept], pole[kept]
    if not c.size:
        return 0.0
    if (pole.real >= 0.0).any():
        return float("inf")
    total, start = 0.0, 0.0
    while True:
        alive = np.abs(c) * np.exp(pole.real * start) > GONE * np.abs(c).max()
        if not alive.any():
            return total
        c, pole = c[alive], pole[alive]
        shortest = float((-np.log(GONE) / -pole.real).min())
        fastest = float(np.abs(pole).max())
        count = int(PER_PERIOD * (shortest - start) * fastest / (2.0 * np.pi)) + 2
        if count > MOST:
            return total + _rest(c, pole, start)
        end = max(shortest, start * (1.0 + 1e-12))
        total += _between(c, pole, np.linspace(start, end, max(count, 64)))
        start = end
        if len(c) == 1 or (len(c) == 2 and abs(pole[0] - pole[1].conj()) <= 1e-9 * abs(pole[0])):
            return total


def _between(c: Complexes, pole: Complexes, time: Floats) -> float:
    """Integral over an interval: differences of the antiderivative between the zeros."""
    value = (c @ np.exp(pole[:, None] * time)).real
    left = np.flatnonzero(np.sign(value[:-1]) * np.sign(value[1:]) < 0.0)
    part = value[left] / (value[left] - value[left + 1])
    zero = time[left] + part * (time[left + 1] - time[left])
    for _ in range(2):
        e = np.exp(pole[:, None] * zero)
        slope = ((c * pole) @ e).real
        with np.errstate(all="ignore"):
            step = np.where(slope != 0.0, (c @ e).real / slope, 0.0)
        zero = np.clip(zero - step, time[left], time[left + 1])
    marks = np.concatenate([time[:1], zero, time[-1:]])
    primitive = ((c / pole) @ np.exp(pole[:, None] * marks)).real
    return float(np.abs(np.diff(primitive)).sum())


def _rest(c: Complexes, pole: Complexes, start: float) -> float:
    """From an instant on: of one pair lobe by lobe, exactly; of several the sum of each."""
    total = 0.0
    for place in np.flatnonzero(pole.imag >= 0.0):
        lam = complex(pole[place])
        now = complex(c[place] * np.exp(lam * start))
        if lam.imag == 0.0:
            total += abs(now) / -lam.real
            continue
        # 2 |now| e^{-a t} |cos(w t + phase)|: up to the first zero, then lobes in geometric order.
        phase = float(np.angle(now))
        first = ((0.5 * np.pi - phase) % np.pi) / lam.imag
        marks = np.array([0.0, first, first + np.pi / lam.imag])
        primitive = (2.0 * now / lam * np.exp(lam * marks)).real
        ratio = float(np.exp(np.pi * lam.real / lam.imag))
        total += abs(primitive[1] - primitive[0]) + abs(primitive[2] - primitive[1]) / (1.0 - ratio)
    return total

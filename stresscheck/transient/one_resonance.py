"""Tight bounds in time for networks with one resonance (two free charges or fluxes) or none, anywhere in the box.

Such a response is H(s) = D + (c1 s + c0)/(s^2 + 2 a s + w0^2), with c0 = w0^2 (H(0) - D). Over a piece of the box,
each of D, H(0), 2a and w0^2 is in every value by itself a ratio of straight lines without a pole (values in 1/L, 1/C
and R), so it lies between its values at the corners; c1 is bounded factor by factor. With w^2 = w0^2 - a^2 and
h0 = e^{-at} sin(wt)/w the impulse response is D delta + c0 h0 + c1 h0', and

    any waveform inside +-1:    |D| + |c0| coth(x/2)/w0^2 + |c1| 2 e^{-a t1}/(w0 (1 - e^{-x})),   x = pi a/w,
                                t1 = atan(w/a)/w (the first top of h0);
    a sine of size 1 at wd, switched on at any phase:   |D| + |r| (1/a + 2/(wd + w)),   |r| <= (|c1| w0 + |c0|)/(2w);
    a step of size 1:           |H(0)| + 2 |r|/w0.

Check: series tank, capacitor, any waveform: coth(pi zeta/(2 sqrt(1 - zeta^2))), zeta = 1/(2Q).
Source: derived from circuit theory.
"""

from __future__ import annotations

import itertools
from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.circuit.laws import CapacitorLaw, ResistorLaw
from stresscheck.circuit.motion import instant, motion, roles_for
from stresscheck.circuit.network import Network
from stresscheck.circuit.nodal import branch_ohm
from stresscheck.circuit.tableau import readings
from stresscheck.stress.rests import terminal_feed

MOST_POINTS = 4096
"""Points of the grid whose cells are the pieces of the box."""
MARGIN = 1e-3
"""A loss that moves with its part's value (a declared Q or loss factor) follows a curve inside a cell, not a straight
line; its bend over a cell, a few per cent of a few per cent, is covered by this."""


@dataclass(frozen=True, slots=True)
class OneResonance:
    """Bounds over the whole box per unit of each drive, [responses, drives]: responses are branch currents, branch
    voltages, nodes, terminals. Infinite where the network isn't of this kind or not oscillating everywhere."""

    any_waveform: Floats
    sine: Floats
    step: Floats
    any_frequency: Floats
    """Largest |H| at any frequency at all."""


def one_resonance(network: Network) -> OneResonance | None:
    """The three bounds; None where the network has another number of free charges and fluxes, coupled coils, or more
    varying values than the grid allows for."""
    roles = roles_for(network)
    axes = [n for n, a in enumerate(network.axes.items) if a.varies and _acts(network, n)]
    pieces = int(MOST_POINTS ** (1.0 / max(1, len(axes)))) - 1
    if len(roles.free) not in (0, 1, 2) or roles.tied or network.couplings or network.transformers or pieces < 1:
        return None
    bands = [network.band_of(line) for line in network.lines]
    omega = 2.0 * np.pi * np.array([min(b[0] for b in bands), max(b[1] for b in bands)])
    if len(roles.free) < 2:
        return _without_resonance(network, _Cells.of(network, axes, min(pieces, 12), np.unique(omega)))
    ends = _Cells.of(network, axes, 1, omega)
    own_square = _determinant(motion(network, ends.points, ends.omega, roles).a)
    if not (own_square > 0.0).all():
        return None
    own = np.sqrt(own_square)
    span = np.unique([min(omega[0], own.min()), max(omega[1], own.max())])
    cells = _Cells.of(network, axes, min(pieces, 12), span)
    system = motion(network, cells.points, cells.omega, roles)
    trace = -(system.a[:, 0, 0] + system.a[:, 1, 1])
    product = _determinant(system.a)
    if not (product > 0.0).all():
        return None
    still = system.d - system.c @ np.linalg.solve(system.a, system.b)
    damping, square = cells.ends(0.5 * trace), cells.ends(product)
    direct, at_rest = cells.ends(_all(network, system.d)), cells.ends(_all(network, still))
    first = _first(network, cells)
    with np.errstate(all="ignore"):
        return _bounds(network, damping, square, direct, at_rest, first)


def _without_resonance(network: Network, cells: _Cells) -> OneResonance | None:
    """One free charge or flux, or none: every response goes from D to H(0) along one exponential and never beyond."""
    system = motion(network, cells.points, cells.omega, roles_for(network))
    still = system.d
    if system.a.shape[1]:
        if not (system.a < 0.0).all():
            return None
        still = system.d - system.c @ (system.b / system.a)
    direct, at_rest = cells.ends(_all(network, system.d)), cells.ends(_all(network, still))
    d = np.maximum(np.abs(direct[0]), np.abs(direct[1]))
    rest = np.maximum(np.abs(at_rest[0]), np.abs(at_rest[1]))
    gap = np.maximum(np.abs(at_rest[1] - direct[0]), np.abs(at_rest[0] - direct[1]))
    gap = np.where((rest == 0.0) & (d == 0.0), 0.0, gap)
    grow = 1.0 + MARGIN
    every, most = (d + gap).max(axis=0) * grow, np.maximum(d, rest).max(axis=0) * grow
    return OneResonance(every, every, most, most)


def _determinant(a: Floats) -> Floats:
    return np.asarray(a[:, 0, 0] * a[:, 1, 1] - a[:, 0, 1] * a[:, 1, 0])


def _bounds(
    network: Network,
    damping: tuple[Floats, Floats],
    square: tuple[Floats, Floats],
    direct: tuple[Floats, Floats],
    at_rest: tuple[Floats, Floats],
    first: Floats,
) -> OneResonance | None:
    """The formulas at the top of this file, cell by cell; the largest over all cells."""
    ring_low = square[0] - damping[1] ** 2
    if not (ring_low > 0.0).all() or not (damping[0] > 0.0).all():
        return None

    def wide(values: Floats) -> Floats:
        return values[:, None, None]

    w_low, w_high = np.sqrt(ring_low), np.sqrt(square[1] - damping[0] ** 2)
    w0_low, w0_high = np.sqrt(square[0]), np.sqrt(square[1])
    a_low = damping[0]
    d = np.maximum(np.abs(direct[0]), np.abs(direct[1]))
    rest = np.maximum(np.abs(at_rest[0]), np.abs(at_rest[1]))
    gap = np.maximum(np.abs(at_rest[1] - direct[0]), np.abs(at_rest[0] - direct[1]))
    gap = np.where((rest == 0.0) & (d == 0.0), 0.0, gap)
    x = np.pi * a_low / w_high
    top = np.arctan(w_low / damping[1]) / w_high
    slope = 2.0 * np.exp(-a_low * top) / (w0_low * (1.0 - np.exp(-x)))
    # |c0| h0: c0 = w0^2 gap, so w0^2 cancels.
    every = d + gap / wide(np.tanh(0.5 * x)) + first * wide(slope)
    residue = (first * wide(w0_high) + gap * wide(square[1])) / wide(2.0 * w_low)
    lowest = np.full(direct[0].shape[2], np.inf)
    for line in network.lines:
        for index in line.sources:
            lowest[index] = min(lowest[index], 2.0 * np.pi * network.band_of(line)[0])
    sine = d + residue * (1.0 / wide(a_low) + 2.0 / (lowest + wide(w_low)))
    step = rest + 2.0 * residue / wide(w0_low)
    anywhere = d + residue * (1.0 / wide(a_low) + 1.0 / wide(w_low))
    grow = 1.0 + MARGIN
    return OneResonance(
        every.max(axis=0) * grow, sine.max(axis=0) * grow, step.max(axis=0) * grow, anywhere.max(axis=0) * grow
    )


def _acts(network: Network, axis: int) -> bool:
    """Is it the value of a part, rather than a frequency or a level?"""
    return any(branch.axis == axis for branch in network.branches)


@dataclass(frozen=True, slots=True)
class _Cells:
    """A grid over the varying values and, last, over the frequency at which losses are read: `points` [P, axes]
    and `omega` [P] row by row; `shape` of the grid."""

    points: Floats
    omega: Floats
    shape: tuple[int, ...]

    @staticmethod
    def of(network: Network, axes: list[int], pieces: int, omega: Floats) -> _Cells:
        lines = []
        for axis in axes:
            item = network.axes.items[axis]
            lines.append(np.geomspace(item.low, item.high, pieces + 1) if item.low > 0.0 else np.linspace(
                item.low, item.high, pieces + 1
            ))  # fmt: skip
        rows = list(itertools.product(*lines, omega))
        points = np.repeat(network.axes.nominal[None], len(rows), axis=0)
        values = np.array(rows)
        points[:, axes] = values[:, :-1]
        return _Cells(points, values[:, -1], (*[pieces + 1] * len(axes), len(omega)))

    def ends(self, values: Floats) -> tuple[Floats, Floats]:
        """Smallest and largest value at the corners of each cell, [cells, ...]."""
        low = high = values.reshape(*self.shape, *values.shape[1:])
        for dimension in range(len(self.shape) - 1):
            ahead, behind = _shifted(low, dimension)
            low = np.minimum(ahead, behind)
            ahead, behind = _shifted(high, dimension)
            high = np.maximum(ahead, behind)
        dimension = len(self.shape) - 1
        low, high = low.min(axis=dimension), high.max(axis=dimension)
        return low.reshape(-1, *values.shape[1:]), high.reshape(-1, *values.shape[1:])


def _shifted(values: Floats, dimension: int) -> tuple[Floats, Floats]:
    moved = np.moveaxis(values, dimension, 0)
    return np.moveaxis(moved[1:], 0, dimension), np.moveaxis(moved[:-1], 0, dimension)


def _all(network: Network, rows: Floats) -> Floats:
    """Branch currents, voltages and nodes, and behind them the terminals of the drives, [P, responses, drives]."""
    ends = np.stack([terminal_feed(network, rows, s) for s in range(len(network.sources))], axis=2)
    return np.concatenate([rows, ends], axis=1)


def _first(network: Network, cells: _Cells) -> Floats:
    """Largest |c1| of each cell: sum over both charges or fluxes of |g| |j| / (C or L), factor by factor."""
    roles = roles_for(network)
    loss = np.asarray(branch_ohm(network, cells.points, cells.omega).real, dtype=np.float64)
    x = instant(network, roles, loss)
    read = readings(roles.form) @ x
    count, n = len(network.branches), 2
    total = np.zeros((1, 1, 1))
    for place, index in enumerate(roles.free):
        branch = network.branches[index]
        assert not isinstance(branch.law, ResistorLaw)
        capacitor = isinstance(branch.law, CapacitorLaw)
        push = read[:, index] if capacitor else read[:, count + index] - loss[:, index, None] * read[:, index]
        value = cells.points[:, branch.axis] if branch.axis is not None else np.full(len(cells.points), branch.fixed)
        value = branch.law.scale * value if isinstance(branch.law, CapacitorLaw) else value
        out = cells.ends(np.abs(_ends_of(network, read[:, :, place])))[1]
        into = cells.ends(np.abs(push[:, n:]))[1]
        total = total + out[:, :, None] * into[:, None, :] / cells.ends(value)[0][:, None, None]
    return np.asarray(total)


def _ends_of(network: Network, column: Floats) -> Floats:
    """Factors of all responses, terminals included, [P, responses]."""
    ends = np.zeros((len(column), len(network.sources)))
    for index, source in enumerate(network.sources):
        behind = source.branch if source.branch is not None else network.branch_of(source.name, "source")
        if behind is not None:
            ends[:, index] = column[:, behind]
    return np.concatenate([column, ends], axis=1)

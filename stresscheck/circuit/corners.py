"""Numerators and denominator of all responses at all corners of many boxes, by doubling.

The tableau is factored once per box and frequency; each varying entry then changes it by rank one (a mutual
impedance by two), and each corner so far has as many children as the entry has control values. A corner costs a few
products of small matrices, most of them at the last levels where the matrices are smallest.

Frequency is a dimension of its own: with the rows of capacitors multiplied by omega every entry is a straight line
in omega, so determinant and numerators are polynomials in omega of a degree of at most the number of reactive branches;
their values at that many frequencies and one more give their Bernstein control values over the piece of the band.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from math import comb

import numpy as np

from stresscheck.arrays import Complexes, Floats
from stresscheck.circuit.elimination import solve_batch
from stresscheck.circuit.entries import Entry
from stresscheck.circuit.tableau import Frame

BASE = 0.41
"""Where along each entry the tableau is factored: off the middle, where a lossless resonance often sits."""
LEAST_PIVOT = 1e-8
"""Smallest pivot against its terms: below it rounding could exceed the margin that bounds carry (1e-6)."""
MOST_NUMBERS = 20_000_000
"""Numerators of one box beyond which no bound is tried: seconds of work and 320 MB."""
MOST_DEGREE = 16
"""Highest degree in omega: Bernstein values lose some 2^degree of precision."""


@dataclass(frozen=True, slots=True)
class Pieces:
    """Pieces of the band of many boxes and where the tableau is evaluated in each: `omega` [boxes, degree + 1].

    `degree`: that of the polynomials where the piece has no upper end; x = lowest omega / omega in (0, 1] then takes
    the place of omega, and everything is multiplied by x^degree.
    """

    omega: Floats
    degree: int | None = None

    @staticmethod
    def of(low: Floats, high: Floats, degree: int) -> Pieces:
        """Ends low, high [rad/s], [boxes]. A single frequency needs a single point."""
        points = 0 if np.array_equal(low, high) else degree
        return Pieces(low[:, None] + (high - low)[:, None] * nodes(points))

    @staticmethod
    def beyond(low: Floats, degree: int) -> Pieces:
        """Everything above low [rad/s], [boxes]; control values from x = 0 (endless frequency) to x = 1."""
        return Pieces(low[:, None] / inner_nodes(degree), degree)

    @property
    def control(self) -> Floats:
        """Turns values at the frequencies into control values."""
        return control_matrix(self.count - 1) if self.degree is None else inner_control_matrix(self.degree)

    @property
    def count(self) -> int:
        return int(self.omega.shape[1])

    def rows(self, values: Floats) -> Floats:
        """Repeat box values [boxes, ...] for each frequency: [boxes * count, ...]."""
        return np.repeat(values, self.count, axis=0)


@dataclass(frozen=True, slots=True)
class Corners:
    """Bernstein values of responses over boxes.

    `denominator`: determinant, shape [boxes, frequencies, *fans], scaled per box; `numerator`: response times
    denominator, shape [boxes, frequencies, *fans, outputs, columns]; `moving`: the entries that vary, one dimension
    each from dimension 2 on; fans: control values per entry, 2, or 3 where it enters squared.
    """

    denominator: Complexes
    numerator: Complexes
    moving: tuple[Entry, ...]

    def dimension(self, branch: int) -> int | None:
        """Dimension of the first entry that is this branch's own impedance, None where that stands still."""
        for number, entry in enumerate(self.moving):
            if entry.places == ((branch, branch),):
                return number + 2
        return None


def flat(values: Complexes, trailing: int) -> Complexes:
    """Merge all corner dimensions into one: [boxes, ..., *trailing] → [boxes, corners, *trailing]."""
    end = values.ndim - trailing
    return values.reshape(values.shape[0], -1, *values.shape[end:])


def corner_count(moving: tuple[Entry, ...], frequencies: int) -> int:
    """How many corners a box has."""
    count = frequencies
    for entry in moving:
        count *= entry.degree + 1
    return count


def corners(
    form: Frame,
    found: tuple[Entry, ...],
    moving: tuple[Entry, ...],
    rhs: Floats,
    outputs: Floats,
    pieces: Pieces,
    scaled: int,
) -> Corners:
    """Evaluate outputs (rows over the unknowns, shape [outputs, size]) at every corner. rhs: [size, columns].

    Entries have one row per box and frequency. Those of `found` that aren't in `moving` stand at their base value.
    scaled: how many rows count as multiplied by omega (the capacitors). Boxes whose base can't be solved, or where
    a pivot is lost to rounding, come out as NaN.
    """
    base = _base_matrix(form, found)
    grid = _grid(form, base, moving, rhs, outputs)[:, None]
    denominator: Complexes = _base_determinant(base, pieces, scaled)[:, None]
    for entry in moving:
        step = _steps(entry)
        fan = step.shape[1]
        grid = np.repeat(grid, fan, axis=1)
        denominator = np.repeat(denominator, fan, axis=1)
        change = np.tile(step, (1, grid.shape[1] // fan))
        for _ in entry.places:
            grid, pivot = _apply(grid, change)
            denominator = denominator * pivot
    numerator: Complexes = grid * denominator[:, :, None, None]
    fans = tuple(entry.degree + 1 for entry in moving)
    shape = (-1, pieces.count, *fans)
    denominator = denominator.reshape(shape)
    numerator = numerator.reshape(*shape, *numerator.shape[2:])
    for dimension, fan in enumerate((pieces.count, *fans), start=1):
        if fan > 2 or (dimension == 1 and pieces.degree is not None):
            control = pieces.control if dimension == 1 else control_matrix(fan - 1)
            denominator = _to_control_values(denominator, dimension, control)
            numerator = _to_control_values(numerator, dimension, control)
    return Corners(denominator, numerator, moving)


def nodes(degree: int) -> Floats:
    """Points of [0, 1] at which a polynomial is evaluated, both ends included: Chebyshev-Lobatto points."""
    if degree == 0:
        return np.zeros(1)
    return np.asarray(0.5 - 0.5 * np.cos(np.pi * np.arange(degree + 1) / degree))


@lru_cache(maxsize=32)
def control_matrix(degree: int) -> Floats:
    """Turns values at `nodes` into Bernstein control values, [degree + 1, degree + 1]."""
    return _inverse_bernstein(nodes(degree), degree)


def inner_nodes(degree: int) -> Floats:
    """Points of (0, 1) at which a polynomial is evaluated where an end can't be: Chebyshev points."""
    return np.asarray(0.5 - 0.5 * np.cos(np.pi * (np.arange(degree + 1) + 0.5) / (degree + 1)))


@lru_cache(maxsize=32)
def inner_control_matrix(degree: int) -> Floats:
    """Turns values at `inner_nodes` into Bernstein control values, [degree + 1, degree + 1]."""
    return _inverse_bernstein(inner_nodes(degree), degree)


def _inverse_bernstein(at: Floats, degree: int) -> Floats:
    x = at[:, None]
    k = np.arange(degree + 1)
    binomial = np.array([comb(degree, int(i)) for i in k], dtype=np.float64)
    return np.asarray(np.linalg.inv(binomial * x**k * (1.0 - x) ** (degree - k)))


def _to_control_values(values: Complexes, dimension: int, matrix: Floats) -> Complexes:
    return np.moveaxis(np.tensordot(matrix, values, axes=(1, dimension)), 0, dimension)


def _base_matrix(form: Frame, found: tuple[Entry, ...]) -> Complexes:
    """Tableau with every entry at its base value, shape [rows, size, size]."""
    rows = len(found[0].low) if found else 1
    out = np.repeat(form.fixed[None].astype(np.complex128), rows, axis=0)
    position = {branch: n for n, branch in enumerate(form.branches)}
    for entry in found:
        value = entry.low + BASE * (entry.high - entry.low)
        for row, column in entry.places:
            out[:, form.row(position[row]), form.row(position[column])] -= value
    return out


def _base_determinant(base: Complexes, pieces: Pieces, scaled: int) -> Complexes:
    """Determinant of the base at each frequency over that at the first, rows of capacitors multiplied by omega."""
    if pieces.count == 1:
        return np.ones(len(base), dtype=np.complex128)
    sign, size = np.linalg.slogdet(base)
    sign, size = sign.reshape(pieces.omega.shape), size.reshape(pieces.omega.shape)
    ratio = sign / sign[:, :1] * np.exp(size - size[:, :1])
    power = scaled - (pieces.degree or 0)
    return np.asarray((ratio * (pieces.omega / pieces.omega[:, :1]) ** power).reshape(-1))


def _grid(form: Frame, base: Complexes, moving: tuple[Entry, ...], rhs: Floats, outputs: Floats) -> Complexes:
    """Responses of (entry currents, outputs) to (unit excitations of entry rows, sources) at the base."""
    position = {branch: n for n, branch in enumerate(form.branches)}
    places = [place for entry in moving for place in entry.places]
    excite = np.zeros((form.size, len(places) + rhs.shape[1]))
    read = np.zeros((len(places) + len(outputs), form.size))
    for index, (row, column) in enumerate(places):
        excite[form.row(position[row]), index] = 1.0
        read[index, form.row(position[column])] = 1.0
    excite[:, len(places) :] = rhs
    read[len(places) :] = outputs
    x = solve_batch(base, np.repeat(excite[None].astype(np.complex128), len(base), axis=0))
    return read @ x


def _steps(entry: Entry) -> Complexes:
    """Changes of an entry from its base to each of its points, shape [rows, fan]."""
    width = (entry.high - entry.low)[:, None]
    return width * (nodes(entry.degree) - BASE)


def _apply(grid: Complexes, change: Complexes) -> tuple[Complexes, Complexes]:
    """Change the first remaining entry and drop it. Returns the new grid and the factor of the determinant.

    Sherman-Morrison: (A0 - d e_r e_c^T)^-1 = A0^-1 + d A0^-1 e_r e_c^T A0^-1 / (1 - d S), S = e_c^T A0^-1 e_r.
    """
    term = change * grid[:, :, 0, 0]
    pivot = 1.0 - term
    with np.errstate(all="ignore"):
        lost = np.abs(pivot) < LEAST_PIVOT * (1.0 + np.abs(term))
        pivot = np.where(lost, np.nan, pivot)
        factor = change / pivot
        row = grid[:, :, :1, 1:] * factor[:, :, None, None]
        return grid[:, :, 1:, 1:] + grid[:, :, 1:, :1] * row, pivot

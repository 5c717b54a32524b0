"""Natural modes: poles of the undriven network by shift and invert, with the energy that each part stores in them.

With (G + sC) x = 0 and K = (G + s0 C)^-1 C the eigenvalues mu of K give the poles s = s0 - 1/mu; C may be singular.
Drives are at rest: a voltage drive is its source resistance, a current drive is open.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Complexes, Floats
from stresscheck.circuit.laws import TAU, CapacitorLaw, InductorLaw
from stresscheck.circuit.network import Network
from stresscheck.circuit.nodal import mutual_henry
from stresscheck.circuit.tableau import all_branches, frame

ROUNDS = 4
"""Times a loss that moves with frequency is read again at the mode's own frequency."""
LEAST = 1e-12
"""Eigenvalues below this part of the largest are modes at infinity: no state stands behind them."""


@dataclass(frozen=True, slots=True)
class Mode:
    """One oscillating mode: pole s = `decay` + j omega (decay <= 0, per second), Q = |s|/(2 |decay|).

    `energy`: (part, share), largest first, shares adding to 1.
    """

    pole: complex
    hertz: float
    energy: tuple[tuple[str, float], ...]

    @property
    def q(self) -> float | None:
        """Quality factor, None without loss."""
        return abs(self.pole) / (-2.0 * self.pole.real) if self.pole.real < 0.0 else None


def natural_modes(network: Network, point: Floats) -> tuple[Mode, ...]:
    """Oscillating modes at one point [axes], lowest frequency first.

    f = |Im s| / 2 pi. Losses that move with frequency are read at the mode's own frequency.
    Source: shift-and-invert eigenvalues, common practice.
    """
    guess = _reference(network, point)
    found = []
    start = _poles(network, point, guess)[0]
    for pole in start[start.imag > 1e-9 * np.abs(start)]:
        for _ in range(ROUNDS):
            poles, vectors = _poles(network, point, abs(pole))
            near = int(np.abs(poles - pole).argmin())
            pole = poles[near]
        if pole.imag > 1e-9 * abs(pole):
            share = _energy(network, point, vectors[:, near])
            found.append(Mode(complex(pole), float(pole.imag / TAU), share))
    return tuple(sorted(found, key=lambda mode: mode.hertz))


def mode_hertz(network: Network, points: Floats) -> Floats:
    """Mode frequencies at many points [Hz], shape [points, most modes], NaN where a point has fewer.

    Losses are read at the middle of the drives' bands: good enough to start a search from.
    """
    rows = []
    for point in points:
        poles = _poles(network, point, _reference(network, point))[0]
        rows.append(np.sort(poles.imag[poles.imag > 1e-9 * np.abs(poles)] / TAU))
    out = np.full((len(rows), max((len(row) for row in rows), default=0)), np.nan)
    for index, row in enumerate(rows):
        out[index, : len(row)] = row
    return out


def _reference(network: Network, point: Floats) -> float:
    """A frequency to scale by [rad/s]: the first drive's."""
    return float(TAU * point[network.lines[0].frequency_axis])


def _poles(network: Network, point: Floats, omega: float) -> tuple[Complexes, Complexes]:
    """Poles and eigenvectors, frequency-dependent losses read at omega. s is scaled by omega inside."""
    g, c = _matrices(network, point, omega)
    c = c * omega
    with np.errstate(all="ignore"):
        try:
            k = np.linalg.solve(g + c, c)
            mu, vectors = np.linalg.eig(k)
        except np.linalg.LinAlgError:
            return np.empty(0, dtype=np.complex128), np.empty((len(g), 0), dtype=np.complex128)
    kept = np.abs(mu) > LEAST * np.abs(mu).max()
    poles = omega * (1.0 - 1.0 / mu[kept])
    return poles.astype(np.complex128), vectors[:, kept].astype(np.complex128)


def _matrices(network: Network, point: Floats, omega: float) -> tuple[Floats, Floats]:
    """G and C of the tableau (G + sC) x = 0, losses frozen at omega."""
    form = frame(network, all_branches(network))
    g, c = form.fixed.copy(), np.zeros_like(form.fixed)
    w = np.array([omega])
    for index, branch in enumerate(network.branches):
        row = form.row(index)
        value = float(point[branch.axis]) if branch.axis is not None else branch.fixed
        law = branch.law
        loss = float(law.ohm(np.array([value]), w)[0].real)
        if isinstance(law, CapacitorLaw):
            farad = law.scale * value
            c[row, : len(network.nodes)] = farad * g[row, : len(network.nodes)]
            c[row, row] -= farad * loss
            g[row, : len(network.nodes)] = 0.0
            g[row, row] = -1.0
            continue
        g[row, row] -= loss
        if isinstance(law, InductorLaw):
            c[row, row] -= value
    mutual = mutual_henry(network, point[None])[0]
    for coupling, henry in zip(network.couplings, mutual, strict=True):
        one, two = form.row(coupling.first), form.row(coupling.second)
        c[one, two] -= henry
        c[two, one] -= henry
    return g, c


def _energy(network: Network, point: Floats, vector: Complexes) -> tuple[tuple[str, float], ...]:
    """Share of each part in a mode's stored energy: C |v|^2 / 2, and each coil's half of its linkages."""
    current = vector[len(network.nodes) : len(network.nodes) + len(network.branches)]
    node = np.append(vector[: len(network.nodes)], 0.0)
    flux: dict[int, complex] = {}
    total: dict[str, float] = {}
    for index, branch in enumerate(network.branches):
        value = float(point[branch.axis]) if branch.axis is not None else branch.fixed
        if isinstance(branch.law, CapacitorLaw):
            volt = node[branch.first] - node[branch.second]
            joule = branch.law.scale * value * abs(volt) ** 2
            total[branch.part] = total.get(branch.part, 0.0) + float(joule)
        elif isinstance(branch.law, InductorLaw):
            flux[index] = value * current[index]
    for coupling, henry in zip(network.couplings, mutual_henry(network, point[None])[0], strict=True):
        flux[coupling.first] += henry * current[coupling.second]
        flux[coupling.second] += henry * current[coupling.first]
    for index, linkage in flux.items():
        part = network.branches[index].part
        total[part] = total.get(part, 0.0) + float((linkage * current[index].conj()).real)
    everything = sum(total.values()) or 1.0
    ranked = sorted(total.items(), key=lambda item: -item[1])
    return tuple((part, joule / everything) for part, joule in ranked)

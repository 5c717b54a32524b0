"""The rules that bound a response over a box from values at its corners; each is valid by itself."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from stresscheck.arrays import Complexes, Flags, Floats, Indices
from stresscheck.circuit.corner_rule import corner_rule
from stresscheck.circuit.corners import flat
from stresscheck.circuit.entries import Entry
from stresscheck.circuit.laws import ResistorLaw
from stresscheck.circuit.network import Network

if TYPE_CHECKING:
    from stresscheck.circuit.output_groups import OutputGroup


LOOSE = 1.01
"""A bound above its largest corner by more than this is tried again around the middle of the box."""
VERY_LOOSE = 1.3
"""And by more than this with one reactive element taken out."""


def driven_bound(combined: Complexes, denominator: Complexes) -> Floats:
    """The corner rule, on each response and, where that is loose, on its distance from its middle value c.

    |N/D| <= |c| + |(N - cD)/D|, and N - cD is of the same kind as N. It serves responses that hardly move, such as
    the voltage of a node that a drive holds: there N and D swing through resonance together.
    combined: [boxes, frequencies, *fans, outputs]; denominator: the same less the last. Returns [boxes, outputs].
    """
    numerator, below = flat(combined, 1), flat(np.broadcast_to(denominator, combined.shape[:-1]), 0)
    size = np.abs(numerator)
    bound = corner_rule(size, below)
    with np.errstate(all="ignore"):
        at_corners = (size / np.abs(below)[:, :, None]).max(axis=1)
        middle = numerator.sum(axis=1) / below.sum(axis=1)[:, None]
        loose = np.flatnonzero((bound > LOOSE * at_corners).any(axis=0))
        if loose.size:
            c = middle[:, loose]
            away = np.abs(numerator[:, :, loose] - c[:, None, :] * below[:, :, None])
            around = np.abs(c) + corner_rule(away, below)
            bound[:, loose] = np.fmin(bound[:, loose], around)
    return bound


def tuned_bound(network: Network, group: OutputGroup, bound: Floats, wanted: Flags) -> None:
    """Tighten `bound` [boxes, all outputs] in place by taking out one reactive element t at a time,
    for the `wanted` outputs.

    With t open the response is H0, and per unit current through t it changes by H1, so that
    |response| <= |H0| + |H1| |I_t|, I_t bounded already. H0 and H1 don't know of the resonance that t carries: where
    a response hardly takes part in that resonance, this is tight while the corner rule isn't.
    With D = D_a + z_t D_b, N likewise: H0 = N_b/D_b, and H1 = N_ot/N_tt, numerators of the responses of output and of
    t itself to a unit voltage in series with t, which don't depend on z_t.
    """
    corners = group.corners
    with np.errstate(all="ignore"):
        size = np.abs(flat(group.combined, 1))
        below = np.abs(flat(np.broadcast_to(corners.denominator, group.combined.shape[:-1]), 0))
        at_corners = (size / below[:, :, None]).max(axis=1)
    loose = np.flatnonzero((bound[:, group.rows] > VERY_LOOSE * at_corners).any(axis=0) & wanted[group.rows])
    if not loose.size or len(group.ports) < 2:
        return
    rows = group.rows[loose]
    sources = corners.numerator.shape[-1] - len(group.ports)
    for column, branch in enumerate(group.ports):
        dimension = corners.dimension(branch)
        own = np.flatnonzero(group.rows == branch)
        if dimension is None or not own.size:
            continue
        d_b = np.diff(np.broadcast_to(corners.denominator, group.combined.shape[:-1]), axis=dimension)
        n_b = np.diff(group.combined[..., loose], axis=dimension)
        port = np.take(corners.numerator[..., sources + column], [0], axis=dimension)
        h0 = corner_rule(np.abs(flat(n_b, 1)), flat(d_b, 0))
        h1 = corner_rule(np.abs(flat(port[..., loose], 1)), flat(port[..., own[0]], 0))
        with np.errstate(all="ignore"):
            bound[:, rows] = np.fmin(bound[:, rows], h0 + h1 * bound[:, branch, None])


def by_power(network: Network, source: int, bound: Floats, ohm: tuple[Floats, Floats]) -> None:
    """Tighten currents in place by the power that a single voltage drive of unit size can give, passivity alone.

    Every loss is at most the drive's power: R_k I_k^2 <= E I_s, with E = 1. So I_s <= 1/R for the resistance R in
    series with the drive, and I_k <= sqrt(I_s / R_k). It serves where a tank in series with a resistance is near its
    parallel resonance, which no rule on corners sees. ohm: (smallest, largest) of each branch, [boxes, branches].
    """
    chain = series_with(network, source)
    with np.errstate(divide="ignore", invalid="ignore"):
        most = 1.0 / ohm[0][:, chain].sum(axis=1)
        current = np.fmin(bound[:, chain].min(axis=1), most)
        for branch in range(len(network.branches)):
            limit = current if branch in chain else np.sqrt(current / ohm[0][:, branch])
            bound[:, branch] = np.fmin(bound[:, branch], limit)
    for branch in chain:
        if isinstance(network.branches[branch].law, ResistorLaw):
            others = ohm[0][:, [n for n in chain if n != branch]].sum(axis=1)
            column = len(network.branches) + branch
            if network.branches[branch].drive is None:
                high = ohm[1][:, branch]
                bound[:, column] = np.fmin(bound[:, column], high / (high + others))


def chain_root(chain: list[int], branch: int, ohm: tuple[Floats, Floats]) -> Floats:
    """Bound of sqrt(R) I of a resistance in series with a unit drive: largest sqrt(R)/(R + other R) on its interval."""
    others = ohm[0][:, [n for n in chain if n != branch]].sum(axis=1)
    r = np.clip(others, ohm[0][:, branch], ohm[1][:, branch])
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.asarray(np.sqrt(r) / (r + others))


def series_with(network: Network, branch: int) -> list[int]:
    """Branches that carry the same current as this one because nothing else joins the nodes between them."""
    degree: dict[int, list[int]] = {}
    for index, other in enumerate(network.branches):
        for node in {other.first, other.second}:
            degree.setdefault(node, []).append(index)
    crowded = {node for part in network.transformers for node in (*part.primary, *part.secondary)}
    crowded |= {node for s in network.sources if s.branch is None for node in (s.first, s.second)}
    chain, open_ = [branch], [branch]
    while open_:
        here = network.branches[open_.pop()]
        for node in (here.first, here.second):
            joined = degree[node]
            if node in crowded or len(joined) != 2:
                continue
            for index in joined:
                if index not in chain:
                    chain.append(index)
                    open_.append(index)
    return chain


def per_watt(combined: Complexes, rows: Indices, ohm: Floats, own: int | None) -> Floats:
    """Bound of |response| / sqrt(sum of R_k |I_k|^2) over every loss k behind the drive's own resistance.

    The power delivered is half that sum (Tellegen), so the response at a set power doesn't depend on the common
    denominator: with c_k the corner rule's bound of |N| / |N_k|, it is at most 1 / sqrt(sum of R_k / c_k^2).
    Losses whose current isn't among the group's outputs are left out, which only loosens the bound.
    """
    numerator = flat(combined, 1)
    size = np.abs(numerator)
    total = np.zeros((size.shape[0], size.shape[2]))
    for place, row in enumerate(rows):
        if row >= ohm.shape[1] or row == own or not np.any(ohm[:, row] > 0.0):
            continue
        ratio = corner_rule(size, numerator[:, :, place])
        with np.errstate(divide="ignore"):
            total += ohm[:, row, None] / (ratio * ratio)
    with np.errstate(divide="ignore"):
        return np.asarray(1.0 / np.sqrt(total))


def root_bound(group: OutputGroup, branch: int, entry: Entry, ends: tuple[Floats, Floats]) -> Floats:
    """Bound of sqrt(w) I over boxes, w going from ends[0] to ends[1] along the branch's own entry (1/C, L or R).

    N_I doesn't depend on the branch's own impedance, and D is linear in w. In s = sqrt(w), response = N s / D with D
    quadratic in s, whose middle Bernstein value is D at w = s0 s1. So power is bounded as tightly as current.
    """
    corners = group.corners
    dimension = None
    for number, moving in enumerate(corners.moving, start=2):
        if moving is entry:
            dimension = number
    own = np.flatnonzero(group.rows == branch)
    if dimension is None or not own.size:
        return np.full(len(ends[0]), np.inf)
    current = np.take(group.combined[..., own[0]], [0], axis=dimension)
    below = np.broadcast_to(corners.denominator, group.combined.shape[:-1])
    shape = (len(ends[0]), *[1] * (below.ndim - 1))
    low, high = ends[0].reshape(shape), ends[1].reshape(shape)
    s0, s1 = np.sqrt(low), np.sqrt(high)
    with np.errstate(all="ignore"):
        part = np.where(high != low, (s0 * s1 - low) / (high - low), 0.5)
    d0, d1 = np.take(below, [0], axis=dimension), np.take(below, [1], axis=dimension)
    denominator = np.concatenate([d0, d0 + (d1 - d0) * part, d1], axis=dimension)
    numerator = np.concatenate([current * s0, current * 0.5 * (s0 + s1), current * s1], axis=dimension)
    return corner_rule(np.abs(flat(numerator, 0))[:, :, None], flat(denominator, 0))[:, 0]

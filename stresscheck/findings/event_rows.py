"""Which steady checks an event is compared with, how their stress follows from a response, and where to look."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.circuit.laws import CapacitorLaw
from stresscheck.circuit.network import Network
from stresscheck.findings.assemble import Steady
from stresscheck.findings.checks import Check
from stresscheck.search.box import Box, corner_points
from stresscheck.stress.sizes import only_sines

PEAKS = ("voltage_peak", "current_peak", "slew_rate", "flux_density")
"""Quantities whose ratings a moment can exceed."""
CORNERS, INNER, SEED = 24, 8, 29
MOST_POINTS = 8
"""Points of the box at which an event is looked at in full."""


@dataclass(frozen=True, slots=True)
class Row:
    """A check that an event is compared with: its number among the steady checks, its response and its factor."""

    number: int
    check: Check
    response: int


def rows_of(network: Network, steady: Steady) -> list[Row]:
    """Checks of peak quantities that have limits and whose steady stress is known."""
    rows = []
    for number, check in enumerate(steady.checks):
        column = steady.column[number]
        if check.quantity not in PEAKS or column < 0 or not check.limits.limits:
            continue
        if np.isfinite(steady.worst.peaks.value[column]):
            rows.append(Row(number, check, response_of(network, check)))
    return rows


def response_of(network: Network, check: Check) -> int:
    """Number of the response that carries a stress: branch currents, branch voltages, nodes, terminals."""
    count = len(network.branches)
    if check.kind == "drive":
        names = [source.name for source in network.sources]
        return 2 * count + len(network.nodes) + names.index(check.part)
    branch = network.branch_of(check.part)
    assert branch is not None
    return branch + count if check.quantity == "voltage_peak" else branch


def factor_of(network: Network, steady: Steady, check: Check, values: Floats, *, largest_value: bool) -> float:
    """Stress of the worst unit per volt or ampere of the whole part. values: [axes], or [2, axes] ends of the box."""
    note = steady.notes[check.part]
    if check.kind == "drive":
        return 1.0
    if check.quantity == "voltage_peak":
        return note.share.volt
    if check.quantity == "current_peak":
        return note.share.ampere
    place = network.branch_of(check.part)
    assert place is not None
    branch = network.branches[place]
    assert branch.axis is not None
    low, high = (values[0], values[1]) if largest_value else (values, values)
    if check.quantity == "slew_rate":
        assert isinstance(branch.law, CapacitorLaw)
        return note.share.volt / (float(low[branch.axis]) * branch.law.scale)
    assert note.turns is not None
    assert note.core_area is not None
    return float(high[branch.axis]) / (note.turns * note.core_area)


def spread_points(network: Network) -> Floats:
    """Corners and inner points of the box, seeded: where an event may be larger than at the steady state's worst."""
    axes = network.axes
    box = Box(axes.low, axes.nominal, axes.high)
    if not box.varying:
        return np.empty((0, len(axes.items)))
    inner = np.random.default_rng(SEED).random((INNER, len(axes.items)))
    return np.concatenate([corner_points(box, CORNERS), axes.low + (axes.high - axes.low) * inner])


def points_of(network: Network, steady: Steady, rows: list[Row]) -> Floats:
    """Worst points of the steady state that are looked at: of these checks and of the energy, and the nominal point."""
    columns = [steady.energy, *(steady.column[row.number] for row in rows)]
    points = [network.axes.nominal, *(steady.worst.peaks.point[c] for c in columns)]
    kept: list[Floats] = []
    for point in points:
        if np.isfinite(point).all() and not any(np.allclose(point, other, rtol=1e-4, atol=0.0) for other in kept):
            kept.append(point)
    return np.array(kept[: MOST_POINTS if only_sines(network) else MOST_POINTS // 2])

"""What the harmonics left out of a square or triangle add to RMS figures, as the sine of the same RMS."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.circuit.motion import motion, roles_for
from stresscheck.circuit.network import Network


@dataclass(frozen=True, slots=True)
class Rest:
    """Peak sizes [points, n] of sines that have the RMS of what is left out."""

    ampere: Floats
    volt: Floats
    node: Floats
    terminal: Floats


def rests_at(network: Network, course: tuple[int, ...], points: Floats) -> Rest:
    """At points [points, axes]: what passes at once, through the direct feed-through, of each drive's rest.

    Everything else of the rest is below the cut-off of the harmonics. Rests of several drives add up, whatever their
    phases.
    """
    count, nodes = len(network.branches), len(network.nodes)
    total = np.zeros((len(points), 2 * count + nodes))
    terminal = np.zeros((len(points), len(network.sources)))
    direct = motion(network, points, network.lines[course[0]].omega(points), roles_for(network)).d
    for index, orders in drives_of(network, course).items():
        source = network.sources[index]
        size = math.sqrt(2.0) * source.waveform.rest_rms(orders) * source.level_scale * points[:, source.level_axis]
        total += np.abs(direct[:, :, index]) * size[:, None]
        terminal += np.abs(terminal_feed(network, direct, index)) * size[:, None]
    return Rest(total[:, :count], total[:, count : 2 * count], total[:, 2 * count :], terminal)


def drives_of(network: Network, course: tuple[int, ...]) -> dict[int, tuple[int, ...]]:
    """Drives of a course with endless harmonics, and the orders that have a line."""
    found: dict[int, tuple[int, ...]] = {}
    for number in course:
        for index in network.lines[number].sources:
            if network.sources[index].waveform.endless:
                found[index] = (*found.get(index, ()), network.lines[number].order)
    return found


def terminal_feed(network: Network, direct: Floats, index: int, own: float = 1.0) -> Floats:
    """Currents of all drives at their terminals per unit of one drive, from those of the branches: [points, sources].

    direct: [points, responses, sources], branch currents first. own: what a current drive gives of itself.
    """
    out = np.zeros((len(direct), len(network.sources)))
    for place, source in enumerate(network.sources):
        behind = source.branch if source.branch is not None else network.branch_of(source.name, "source")
        if behind is not None:
            out[:, place] = -direct[:, behind, index]
        if source.branch is None and place == index:
            out[:, place] += own
    return out

"""From the worst points of a state to what the cautions look at."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import TYPE_CHECKING

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.cautions.facts import CapacitorFact, NodeFact
from stresscheck.circuit.direct import groups
from stresscheck.circuit.laws import ResistorLaw
from stresscheck.circuit.modes import natural_modes
from stresscheck.circuit.network import Network
from stresscheck.circuit.phasors import phasors
from stresscheck.errors import CheckError
from stresscheck.findings.assemble import StateFindings
from stresscheck.findings.explain import distance
from stresscheck.stress.seen import peak
from stresscheck.stress.sizes import sizes_at
from stresscheck.stress.stresses import stresses
from stresscheck.transient.discharge import seconds_until

if TYPE_CHECKING:
    from stresscheck.design.model import Design

NEAR = 3.0
LEVELS = (60.0, 50.0, 75.0)
"""Voltages to which discharge times are given [V]; the documents that ask for them are data of the cautions."""


def node_facts(design: Design, found: StateFindings) -> list[NodeFact]:
    """Worst voltage of every node to the reference, at the point where its peak is largest."""
    network = found.network
    if network is None:
        return []
    facts = []
    reachable = design.site.reachable
    for node in network.nodes:
        value, point = found.worst[f"node:{node}", "voltage_peak"]
        if not math.isfinite(value):
            facts.append(_unknown(node, found.state, reachable is None or node in reachable))
            continue
        part = f"node:{node}"
        here = stresses(network, {}, sizes_at(network, point[None]))
        drive, volt, resonance = _reason(network, point)
        facts.append(
            NodeFact(
                node,
                found.state,
                float(here[part, "voltage_rms"][0]),
                value,
                float(here[part, "voltage_dc"][0]),
                _loudest(network, point, network.nodes.index(node)),
                drive,
                volt,
                None if not volt else value / volt,
                resonance,
                reachable is None or node in reachable,
            )
        )
    return facts


def _unknown(node: str, state: str, reachable: bool) -> NodeFact:
    nan = math.nan
    return NodeFact(node, state, nan, nan, nan, nan, "", None, None, None, reachable)


def _loudest(network: Network, point: Floats, node: int) -> float:
    """Frequency that contributes most to a node's voltage [Hz]."""
    sizes = sizes_at(network, point[None])
    number = int(sizes.node[: len(network.lines), 0, node].argmax())
    return float(network.lines[number].hertz(point[None])[0])


def _reason(network: Network, point: Floats) -> tuple[str, float | None, float | None]:
    """Name and peak voltage of the drive where there is one voltage drive, and the resonance that it meets."""
    source = network.sources[0]
    if len(network.sources) != 1 or source.branch is None:
        return source.name, None, None
    hertz = float(network.lines[0].hertz(point[None])[0])
    level = float(abs(phasors(network, point[None], network.lines[0]).level[0, 0]))
    near = [m for m in natural_modes(network, point) if distance(m, hertz) <= NEAR]
    resonance = min(near, key=lambda m: abs(m.hertz - hertz)).hertz if near else None
    return source.name, level, resonance


def capacitor_facts(design: Design, found: StateFindings) -> list[CapacitorFact]:
    """Largest voltage and capacitance of every capacitor (whole bank), and whether anything discharges it.

    With all drives open, a path for direct current must join its two nodes; a drive that is switched off may leave
    them open.
    """
    network = found.network
    if network is None:
        return []
    facts = []
    absent = design.opened | design.shorted
    group = groups(_without_sources(network))
    discharge = _Discharge(network)
    for name, part in design.capacitor.items():
        place = network.branch_of(name)
        if name in absent or place is None:
            continue
        branch = network.branches[place]
        scale = (part.in_parallel or 1) / (part.in_series or 1)
        value, point = _worst_volt(network, found.worst, name, place)
        tied = group[branch.first] == group[branch.second] or network.branch_of(name, "leakage") is not None
        trapped = None
        if not tied and point is not None:
            trapped = abs(float(sizes_at(network, point[None]).direct.volt[0, place]))
        drive, volt, resonance = _reason(network, point if point is not None else network.axes.nominal)
        facts.append(
            CapacitorFact(
                name,
                found.state,
                float(part.span().high) * scale,
                value,
                trapped or None,
                tied,
                _bleeding_ohm(network, branch.first, branch.second),
                str(part.family or ""),
                drive,
                volt,
                value / volt if volt else None,
                resonance,
                discharge.seconds(place, point) if tied else (),
            )
        )
    return facts


class _Discharge:
    """Discharge times of every capacitor of a network, each point worked out once."""

    def __init__(self, network: Network) -> None:
        self.network = network
        self.known: dict[bytes, Floats | None] = {}

    def seconds(self, place: int, point: Floats | None) -> tuple[tuple[float, float], ...]:
        """Longest times found for one capacitor: at its worst point, and with values at the ends of their tolerances.

        Empty where one of them can't be computed.
        """
        axes = self.network.axes
        points = [axes.nominal, axes.low, axes.high]
        if point is not None:
            slow = point.copy()
            kinds = ("capacitor", "resistor")
            parts = [n for n, axis in enumerate(axes.items) if axis.path.split(".")[0] in kinds]
            slow[parts] = axes.high[parts]
            points += [point, slow]
        longest = np.zeros(len(LEVELS))
        for at in points:
            found = self._at(at)
            if found is None:
                return ()
            longest = np.maximum(longest, found[place])
        return tuple(zip(LEVELS, (float(s) for s in longest), strict=True))

    def _at(self, point: Floats) -> Floats | None:
        key = point.tobytes()
        if key not in self.known:
            try:
                both = [seconds_until(self.network, point, LEVELS, drives_open=o) for o in (False, True)]
                self.known[key] = np.maximum(*both)
            except CheckError:
                self.known[key] = None
        return self.known[key]


def _bleeding_ohm(network: Network, first: int, second: int) -> float | None:
    """Largest resistance between two nodes through resistors alone, drives open; None without such a path.

    Coils are left out: what discharges through a coil rings, and takes as long as the ringing.
    """
    size = len(network.nodes)
    laplace = np.zeros((size + 1, size + 1))
    for branch in network.branches:
        if branch.role == "source" or not isinstance(branch.law, ResistorLaw) or branch.first == branch.second:
            continue
        value = branch.fixed if branch.axis is None else network.axes.items[branch.axis].high
        siemens = 1.0 / (branch.law.scale * value)
        for one, two in ((branch.first, branch.second), (branch.second, branch.first)):
            laplace[one, one] += siemens
            laplace[one, two] -= siemens
    push = np.zeros(size + 1)
    push[first], push[second] = 1.0, -1.0
    volt, *_ = np.linalg.lstsq(laplace, push, rcond=None)
    if not np.allclose(laplace @ volt, push, atol=1e-6):
        return None
    return float(volt[first] - volt[second])


def _worst_volt(
    network: Network, worst: Mapping[tuple[str, str], tuple[float, Floats]], name: str, place: int
) -> tuple[float, Floats | None]:
    """Largest voltage of the whole bank, and where: the searched stress is that of a unit."""
    if (name, "voltage_peak") not in worst:
        return math.nan, None
    value, point = worst[name, "voltage_peak"]
    if not math.isfinite(value):
        return math.nan, None
    seen = sizes_at(network, point[None]).branch(place)
    return float(peak(seen.dc_volt, seen.volt_extremes)[0]), point


def _without_sources(network: Network) -> Network:
    """The network with every drive taken out: what is left to discharge through."""
    kept = tuple(b for b in network.branches if b.role != "source")
    return Network(network.axes, network.nodes, kept, (), network.transformers, (), ())

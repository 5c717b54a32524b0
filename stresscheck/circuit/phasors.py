"""Phasors of the driven circuit: unit responses times what the drives give, line by line."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Complexes, Floats
from stresscheck.circuit.network import Line, Network, Source
from stresscheck.circuit.nodal import Responses, respond
from stresscheck.errors import CheckError


@dataclass(frozen=True, slots=True)
class Phasors:
    """Peak phasors at one line. `volt`, `ampere`: [points, branches]; `node`: [points, nodes]; `omega`: [points];
    `ohm`: branch impedances [points, branches]; `level`: complex drive per source of the line [points, sources]."""

    volt: Complexes
    ampere: Complexes
    node: Complexes
    ohm: Complexes
    omega: Floats
    level: Complexes


def phasors(network: Network, points: Floats, line: Line) -> Phasors:
    """Solve the network at every point, with its drives at their levels.

    Drive by available power P from source resistance R: E = sqrt(8 P R), peak. By delivered power: E is set so
    that P enters the circuit behind the source resistance. NaN where a point can't be solved.
    """
    unit = respond(network, points, line)
    level = np.stack([amplitude(network, line, points, unit, column) for column in range(len(line.sources))], axis=1)
    return Phasors(
        _combine(unit.volt, level),
        _combine(unit.ampere, level),
        _combine(unit.node, level),
        unit.ohm,
        unit.omega,
        level,
    )


def weight_of(network: Network, line: Line, place: int) -> complex:
    """Complex size of a line's place-th source relative to its level, its phase included."""
    if line.weights:
        return line.weights[place]
    return complex(np.exp(1j * network.sources[line.sources[place]].phase))


def amplitude(network: Network, line: Line, points: Floats, unit: Responses, column: int) -> Complexes:
    """Complex peak level of a line's source at each point [V or A], shape [points]."""
    source = network.sources[line.sources[column]]
    level = points[:, source.level_axis]
    if source.basis == "peak":
        return np.asarray(level * source.level_scale * weight_of(network, line, column))
    if source.basis == "available_power":
        return np.sqrt(8.0 * level * source.ohm) + 0j
    return np.sqrt(level / _unit_watt(source, unit, column)) + 0j


def check_levels(network: Network) -> None:
    """Raise CheckError for drives by power that share a frequency with another drive: their level isn't defined."""
    for line in network.lines:
        by_power = [i for i in line.sources if network.sources[i].basis != "peak"]
        if by_power and len(line.sources) > 1:
            raise CheckError(
                f"{network.sources[by_power[0]].name} is set by power and shares its frequency with another "
                "drive, so its level isn't defined"
            )


def _unit_watt(source: Source, unit: Responses, column: int) -> Floats:
    """Real power that a unit drive brings into the circuit behind its own resistance [W]."""
    assert source.branch is not None
    volt = unit.volt[:, source.branch, column]
    ampere = -unit.ampere[:, source.branch, column]
    watt = 0.5 * (volt * ampere.conj()).real
    return np.where(watt > 0.0, watt, np.nan)


def _combine(unit: Complexes, level: Complexes) -> Complexes:
    """Sum over the line's sources: [points, rows, sources] times [points, sources]."""
    return np.asarray(np.einsum("prs,ps->pr", unit[:, :, : level.shape[1]], level))

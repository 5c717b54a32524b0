"""Findings on drives that may take any waveform inside plus and minus their peak."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.circuit.network import Network
from stresscheck.circuit.phasors import phasors
from stresscheck.errors import CheckError
from stresscheck.findings.assemble import Steady, lost
from stresscheck.findings.event_rows import Row, factor_of, points_of
from stresscheck.findings.finding import Finding, Place, Proof
from stresscheck.findings.judge import judge
from stresscheck.stress.sizes import terminal_ampere
from stresscheck.transient.events import Stage, stage
from stresscheck.transient.impulse import absolute_integrals
from stresscheck.transient.one_resonance import OneResonance
from stresscheck.working import Step

METHOD = "integral of the size of the impulse response"
SOURCE = "derived; bound of linear systems for bounded inputs"


def every_waveform(
    state: str, network: Network, steady: Steady, rows: list[Row], one: OneResonance | None, drives: frozenset[str]
) -> list[Finding]:
    """One finding per check: the largest stress that any waveform of these drives can bring, from rest or running.

    Found at the worst points of the steady state; bounded over the box where nothing varies or where the network has
    one resonance. Other drives count with their own largest response.
    """
    checks = [replace(row.check, event="any-waveform") for row in rows]
    try:
        points = points_of(network, steady, rows)
        values = np.stack([_stress(network, steady, rows, point, drives) for point in points])
    except CheckError as error:
        return [lost(check, state, steady.kind, str(error)) for check in checks]
    varies = any(axis.varies for axis in network.axes.items)
    bounds = _bounds(network, steady, rows, one, drives) if varies else values[0] * (1.0 + 1e-6)
    out = []
    for index, (row, check) in enumerate(zip(rows, checks, strict=True)):
        best = int(values[:, index].argmax())
        value = float(values[best, index])
        if not math.isfinite(value):
            why = "some waveform inside the rails drives it without limit: nothing damps it, or an edge isn't limited"
            out.append(lost(check, state, steady.kind, why))
            continue
        bound = float(bounds[index]) if math.isfinite(bounds[index]) else None
        out.append(_finding(state, network, steady, row, value, float(values[0, index]), points[best], bound))
    return out


def _finding(
    state: str, network: Network, steady: Steady, row: Row, value: float, nominal: float, point: Floats,
    bound: float | None,
) -> Finding:  # fmt: skip
    made = replace(row.check, event="any-waveform")
    hertz = float(network.lines[0].hertz(point[None])[0])
    smallest = steady.smallest[row.number]
    use = bound / smallest if bound is not None and smallest > 0.0 else None
    result = judge(made.limits, steady.silent[row.number], value, use, hertz, "")
    limit = result.limit
    why = result.why.replace("; allow the search more time (--budget)", "")
    step = Step(made.quantity, "sum over drives of peak x (|D| + integral |h|), + direct part", "poles and residues",
                value, made.unit, SOURCE)  # fmt: skip
    return Finding(
        id=made.id(state), state=state, state_kind=steady.kind, event=made.event, part=made.part, kind=made.kind,
        quantity=made.quantity, unit=made.unit, verdict=result.verdict, nominal=nominal, worst=value, bound=bound,
        rated=result.rated, allowed_fraction=None if limit is None else limit.allowed_fraction,
        allowed=result.allowed, ratio=result.ratio,
        at=Place(hertz, tuple((a.path, float(v)) for a, v in zip(network.axes.items, point, strict=True))),
        working=(step,) + (() if limit is None else limit.steps(hertz)),
        rating_source="" if limit is None else limit.rating_source,
        derating_source="" if limit is None else limit.derating_source, why=why, ratio_bound=use,
        proof=Proof(1, None if bound is None or value <= 0.0 else max(0.0, bound / value - 1.0), METHOD, None),
        reason="the worst waveform switches between the rails with the sign of the impulse response",
    )  # fmt: skip


def _stress(network: Network, steady: Steady, rows: list[Row], point: Floats, drives: frozenset[str]) -> Floats:
    """Stress of every row at a point."""
    here = stage(network, point)
    responses = [row.response for row in rows]
    integral = absolute_integrals(here, responses)
    total = np.zeros(len(rows))
    for index, source in enumerate(network.sources):
        level = float(point[source.level_axis]) * source.level_scale
        if source.name in drives or source.waveform.endless:
            total += _times(integral[:, index], level) + _times(integral[:, index], abs(source.dc))
        else:
            total += _running(here, index, responses) + _times(integral[:, index], abs(source.dc))
    factors = [factor_of(network, steady, row.check, point, largest_value=False) for row in rows]
    return np.asarray(total * factors)


def _times(size: Floats, level: float) -> Floats:
    return size * level if level > 0.0 else np.zeros_like(size)


def _running(here: Stage, index: int, responses: list[int]) -> Floats:
    """Steady peak that one drive alone brings: of a line that it shares, the whole."""
    network, point = here.network, here.point
    total = np.zeros(len(responses))
    for line in network.lines:
        if index in line.sources:
            at = phasors(network, point[None], line)
            flow = terminal_ampere(network, line, at)[0]
            total += np.abs(np.concatenate([at.ampere[0], at.volt[0], at.node[0], flow]))[responses]
    return total


def _bounds(
    network: Network, steady: Steady, rows: list[Row], one: OneResonance | None, drives: frozenset[str]
) -> Floats:
    """Bound of every row over the box; infinite without one."""
    if one is None or any(source.basis != "peak" for source in network.sources):
        return np.full(len(rows), np.inf)
    ends = np.stack([network.axes.low, network.axes.high])
    out = np.zeros(len(rows))
    for place, row in enumerate(rows):
        for index, source in enumerate(network.sources):
            level = network.axes.items[source.level_axis].high * source.level_scale
            out[place] += one.any_waveform[row.response, index] * (level + abs(source.dc))
        out[place] *= factor_of(network, steady, row.check, ends, largest_value=True)
    return out

"""Findings on switch-on, switch-off and change: peak ratings, from the worst points of the steady states.

Found: the largest value over time and phase at the worst points of the box. Proved, anywhere in the box: the steady
state's bound plus what a free swing with the energy of the steady states can reach.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.circuit.motion import roles_for
from stresscheck.circuit.network import Network
from stresscheck.circuit.roles import Roles
from stresscheck.errors import CheckError
from stresscheck.findings.any_waveform import every_waveform
from stresscheck.findings.assemble import StateFindings, Steady, lost
from stresscheck.findings.checks import Check
from stresscheck.findings.event_bounds import Reaches, bounds_of
from stresscheck.findings.event_rows import Row, factor_of, points_of, rows_of, spread_points
from stresscheck.findings.event_working import steps_of, when
from stresscheck.findings.finding import Finding, Place, Proof
from stresscheck.findings.judge import judge
from stresscheck.stress.sizes import only_sines
from stresscheck.transient.carried import Carried, carried
from stresscheck.transient.events import happening, stage
from stresscheck.transient.one_resonance import one_resonance
from stresscheck.transient.reach import reach
from stresscheck.transient.swing import Happening, Largest, glance, largest


@dataclass(slots=True)
class _Seen:
    """Largest values of one event so far, per row; `bound` is NaN where an event isn't known to be bounded."""

    value: Floats
    time: Floats
    point: Floats
    unlimited: list[bool]
    bound: Floats
    nominal: Floats
    before: list[str]


def find_events(
    found: StateFindings,
    others: Sequence[StateFindings],
    interrupted: Callable[[], bool] = lambda: False,
    any_waveform: frozenset[str] = frozenset(),
) -> tuple[Finding, ...]:
    """Findings on all events of a state. others: states from which it can be reached while running; any_waveform: drives
    for which every waveform inside their rails is asked for."""
    network, steady = found.network, found.steady
    if network is None or steady is None:
        return ()
    rows = rows_of(network, steady)
    limits = Reaches(reach(network), one_resonance(network)) if rows else None
    out: list[Finding] = []
    for event in ("switch-on", "switch-off", "change"):
        if limits is None or (event == "change" and not others):
            continue
        if interrupted():
            out.extend(_not_reached(event, found, steady, rows))
        else:
            out.extend(_event(event, found, network, steady, others, rows, limits))
    if limits is not None and any_waveform:
        if interrupted():
            out.extend(_not_reached("any-waveform", found, steady, rows))
        else:
            out.extend(every_waveform(found.state, network, steady, rows, limits.one, any_waveform))
    return tuple(out)


def _not_reached(event: str, found: StateFindings, steady: Steady, rows: list[Row]) -> list[Finding]:
    """Findings of an event that an interruption left out: said, for what isn't there would read as a pass."""
    why = "the review was interrupted before this event was looked at"
    return [lost(replace(row.check, event=event), found.state, steady.kind, why) for row in rows]


def _event(
    event: str,
    found: StateFindings,
    network: Network,
    steady: Steady,
    others: Sequence[StateFindings],
    rows: list[Row],
    limits: Reaches,
) -> list[Finding]:
    befores = [o for o in others if o.network is not None and o.steady is not None] if event == "change" else [found]
    if not befores:
        return []
    checks = [replace(row.check, event=event) for row in rows]
    try:
        seen = _look(event, network, steady, befores, rows, limits)
    except CheckError as error:
        return [lost(check, found.state, steady.kind, str(error)) for check in checks]
    return [
        _finding(found.state, network, steady, row, check, seen, index)
        for index, (row, check) in enumerate(zip(rows, checks, strict=True))
    ]


def _look(
    event: str, network: Network, steady: Steady, befores: list[StateFindings], rows: list[Row], limits: Reaches
) -> _Seen:
    """Largest values of an event over all points and all states before it, and a bound that holds for all of them."""
    count = len(rows)
    seen = _Seen(
        np.full(count, -np.inf), np.zeros(count), np.zeros((count, len(network.axes.items))), [False] * count,
        np.full(count, -np.inf), np.full(count, -np.inf), [""] * count,
    )  # fmt: skip
    roles = roles_for(network)
    for before in befores:
        bound = bounds_of(event, network, steady, before, rows, limits)
        for point in _promising(event, network, roles, steady, before, rows):
            result = largest(_happening(event, network, roles, before, point, rows))
            _keep(seen, network, steady, rows, point, result, before.state if event == "change" else "")
            if not any(axis.varies for axis in network.axes.items):
                factors = [factor_of(network, steady, row.check, point, largest_value=False) for row in rows]
                bound = np.fmin(bound, result.ceiling * factors * (1.0 + 1e-9))
        seen.bound = np.maximum(seen.bound, bound)
    # A square's harmonics are cut off: what is found may lie above the exact bound by a part of what they leave out.
    seen.bound = np.maximum(seen.bound, seen.value)
    return seen


def _happening(
    event: str, network: Network, roles: Roles, before: StateFindings, point: Floats, rows: list[Row]
) -> Happening:
    """An event at a point, for the responses of the rows."""
    new = stage(network, point, running=event != "switch-off", roles=roles)
    held = Carried.nothing() if event == "switch-on" else _held(event, network, before, point)
    return happening(new, held).only([row.response for row in rows])


def _promising(
    event: str, network: Network, roles: Roles, steady: Steady, before: StateFindings, rows: list[Row]
) -> list[Floats]:
    """Points at which an event is worked out in full: the worst of the steady state, and of points spread over the box
    those that look largest at a glance, after a climb along each axis."""
    known = points_of(network, steady, rows)
    spread = spread_points(network)
    if not only_sines(network):
        spread = spread[::4]
    if not len(spread):
        return list(known)

    def look(point: Floats) -> Floats:
        seen = glance(_happening(event, network, roles, before, point, rows))
        return seen * [factor_of(network, steady, row.check, point, largest_value=False) for row in rows]

    points = [*known, *spread]
    values = [look(point) for point in points]
    chosen = list(known)
    for row in range(len(rows)):
        best = int(np.argmax([value[row] for value in values]))
        top = points[best]
        if only_sines(network):
            top = _climbed(top, float(values[best][row]), network, lambda p, r=row: float(look(p)[r]))  # type: ignore[misc]
        if not any(np.allclose(top, other, rtol=1e-6, atol=0.0) for other in chosen):
            chosen.append(top)
    return chosen


def _climbed(point: Floats, value: float, network: Network, look: Callable[[Floats], float]) -> Floats:
    """One round of the axes: each to its ends and half way to them, as long as that looks larger."""
    low, high = network.axes.low, network.axes.high
    for axis in np.flatnonzero(high > low):
        for end in (low[axis], high[axis], 0.5 * (low[axis] + point[axis]), 0.5 * (high[axis] + point[axis])):
            trial = point.copy()
            trial[axis] = end
            seen = look(trial)
            if seen > value:
                point, value = trial, seen
    return point


def _keep(
    seen: _Seen, network: Network, steady: Steady, rows: list[Row], point: Floats, result: Largest, before: str
) -> None:
    for index, row in enumerate(rows):
        factor = factor_of(network, steady, row.check, point, largest_value=False)
        value = factor * float(result.value[index])
        seen.unlimited[index] |= math.isinf(value)
        if np.array_equal(point, network.axes.nominal):
            seen.nominal[index] = max(seen.nominal[index], value)
        if value > seen.value[index]:
            seen.value[index], seen.time[index], seen.point[index] = value, result.time[index], point
            seen.before[index] = before


def _held(event: str, network: Network, before: StateFindings, point: Floats) -> Carried:
    """What the circuit before the event holds, at the same values of its parts."""
    old = before.network
    assert old is not None
    return carried(old, point if old is network else _same_values(network, old, point))


def _same_values(network: Network, old: Network, point: Floats) -> Floats:
    """The point of another state's box: the same place within each interval, so that one part stays one part."""
    place = {axis.path: n for n, axis in enumerate(network.axes.items)}
    out = old.axes.nominal.copy()
    for n, axis in enumerate(old.axes.items):
        here = place.get(axis.path)
        if here is None:
            continue
        mine = network.axes.items[here]
        if (mine.low, mine.high) == (axis.low, axis.high):
            out[n] = point[here]
        elif mine.varies:
            out[n] = axis.low + (axis.high - axis.low) * (point[here] - mine.low) / (mine.high - mine.low)
    return out


def _finding(state: str, network: Network, steady: Steady, row: Row, check: Check, seen: _Seen, index: int) -> Finding:
    if seen.unlimited[index]:
        start = f" when it comes from state {seen.before[index]}" if seen.before[index] else ""
        why = (
            f"nothing in the circuit as drawn limits it at this instant{start}: a charge or a current has to change at "
            "once; declare what limits it (source resistance, stray capacitance or inductance)"
        )
        return lost(check, state, steady.kind, why)
    stress, point = float(seen.value[index]), seen.point[index]
    bound = float(seen.bound[index]) if math.isfinite(seen.bound[index]) else None
    hertz = float(network.lines[0].hertz(point[None])[0])
    smallest, silent = steady.smallest[row.number], steady.silent[row.number]
    use = bound / smallest if bound is not None and smallest > 0.0 else None
    result = judge(check.limits, silent, stress, use, hertz, "")
    why = result.why.replace("; allow the search more time (--budget)", f" ({METHOD})")
    limit = result.limit
    return Finding(
        id=check.id(state), state=state, state_kind=steady.kind, event=check.event,
        part=check.part, kind=check.kind, quantity=check.quantity, unit=check.unit, verdict=result.verdict,
        nominal=float(seen.nominal[index]), worst=stress, bound=bound, rated=result.rated,
        allowed_fraction=None if limit is None else limit.allowed_fraction, allowed=result.allowed,
        ratio=result.ratio,
        at=Place(hertz, tuple((a.path, float(v)) for a, v in zip(network.axes.items, point, strict=True))),
        working=steps_of(network, steady, row.number, check, point, stress, float(seen.time[index]), bound)
        + (() if limit is None else limit.steps(hertz)),
        rating_source="" if limit is None else limit.rating_source,
        derating_source="" if limit is None else limit.derating_source, why=why, ratio_bound=use,
        proof=Proof(1, None if bound is None or stress <= 0.0 else max(0.0, bound / stress - 1.0), METHOD, None),
        reason=when(
            float(seen.time[index]), check.event, seen.before[index], stress,
            float(steady.worst.peaks.value[steady.column[row.number]]),
        ),
    )  # fmt: skip


METHOD = "bound of the drives' response, plus the largest free swing of the stored energy"

"""All findings of one state: what is asked is searched and bounded together, then judged one by one."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.circuit.build import build
from stresscheck.circuit.network import Network
from stresscheck.circuit.phasors import check_levels
from stresscheck.errors import CheckError
from stresscheck.findings.checks import Check, checks_of, part_notes
from stresscheck.findings.drift import drifted
from stresscheck.findings.explain import carriers_of, reason_for, steps_for
from stresscheck.findings.finding import Finding, Place, Proof
from stresscheck.findings.gated import gate_of, gated_worst
from stresscheck.findings.judge import judge
from stresscheck.findings.self_resonance import remark
from stresscheck.findings.worst import Asked, Limiting, Problem, Worst, worst_case
from stresscheck.findings.zones import zone_remark
from stresscheck.limits.limit import Limit
from stresscheck.limits.policy import Policy
from stresscheck.search.box import corner_points
from stresscheck.stress.energy import CIRCUIT, QUANTITY
from stresscheck.stress.stresses import PartNotes
from stresscheck.transient.gated import Gate, check_gated

if TYPE_CHECKING:
    from stresscheck.design.model import Design

Stop = Callable[[bool], bool]
RUNAWAY = "thermal runaway: its loss grows faster with temperature than its thermal resistance carries it away"
NOT_SET = "the voltage or current isn't set by the circuit, or no solution is vouched for"
WARM = 300.0
"""Any temperature [K]: only asked whether knowing one makes a difference."""


@dataclass(frozen=True, slots=True)
class StateFindings:
    """Findings of one state, and what the cautions need: the network, and each node's worst point.

    `network` None where the state couldn't be built; `why` says so then. `steady`: what the search of the steady state
    found, for the events that start from it or end in it.
    """

    state: str
    findings: tuple[Finding, ...]
    network: Network | None
    worst: Mapping[tuple[str, str], tuple[float, Floats]]
    why: str = ""
    steady: Steady | None = None


@dataclass(frozen=True, slots=True)
class Steady:
    """Checks of a state, their functions and what was found. `column`: function of each check, -1 without;
    `smallest`: smallest allowed value over the band, NaN without; `silent`: where a rating says nothing."""

    kind: str
    checks: tuple[Check, ...]
    notes: Mapping[str, PartNotes]
    column: tuple[int, ...]
    worst: Worst
    smallest: tuple[float, ...]
    silent: tuple[str, ...]
    energy: int


@dataclass(slots=True)
class _Plan:
    """Functions to search for a list of checks: the column of each check's stress, and of its use of a moving limit."""

    asked: list[Asked] = field(default_factory=list)
    limits: list[float] = field(default_factory=list)
    stress: list[int] = field(default_factory=list)
    use: list[int] = field(default_factory=list)
    energy: int = -1

    def add(self, ask: Asked, limit: float) -> int:
        self.asked.append(ask)
        self.limits.append(limit)
        return len(self.asked) - 1


def find_all(design: Design, state: str, kind: str, policy: Policy, gap: float, stop: Stop) -> StateFindings:
    """Search, bound and judge every check of a state. `kind`: "operating", or "fault" (full ratings)."""
    full = kind == "fault"
    try:
        network, gate = _built(design, gap, stop)
    except CheckError as error:
        checks = checks_of(design, policy, {}, full=full)
        none = tuple(lost(check, state, kind, str(error)) for check in checks)
        return StateFindings(state, none, None, {}, str(error))
    notes = part_notes(design)
    checks = checks_of(design, policy, {}, full=full)
    warm = _need_temperature(design, policy, checks, notes, full=full)
    if warm:
        kelvin = _upper_temperatures(network, notes, warm, gap, stop)
        checks = checks_of(design, policy, kelvin, full=full)
    plan = _plan(network, checks)
    problem = Problem(network, notes, plan.asked)
    # Nothing to decide where there is no limit: such a stress only has its gap narrowed, with the others' patience.
    limits = np.array([limit if math.isfinite(limit) else math.inf for limit in plan.limits])
    worst = worst_case(problem, gap, limits, stop) if gate is None else gated_worst(problem, gate, gap, limits, stop)
    findings = tuple(
        _finding(design, network, check, state, kind, plan, worst, index, gap) for index, check in enumerate(checks)
    )
    seen = {
        (ask.part, ask.quantity): (float(worst.peaks.value[n]), worst.peaks.point[n])
        for n, ask in enumerate(plan.asked)
        if ask.limit is None
    }
    steady = None if gate is not None else _steady(network, kind, checks, notes, plan, worst)
    return StateFindings(state, findings, network, seen, steady=steady)


def _built(design: Design, gap: float, stop: Stop) -> tuple[Network, Gate | None]:
    """The network of a state, its values drifting with temperature, and its gating; CheckError where it can't be
    solved."""
    network = build(design)
    check_levels(network)
    _check_solvable(network)
    network = drifted(design, network, gap, stop)
    gate = gate_of(design, network)
    if gate is not None:
        check_gated(network)
        if any(design.drive[source.name].any_waveform for source in network.sources):
            raise CheckError("any_waveform of a gated drive isn't computed; declare one of the two")
    return network, gate


def _steady(
    network: Network, kind: str, checks: list[Check], notes: Mapping[str, PartNotes], plan: _Plan, worst: Worst
) -> Steady:
    """What events need of the steady search."""
    bands = network.weighty_bands()
    return Steady(
        kind, tuple(checks), notes, tuple(plan.stress), worst,
        tuple(_smallest(check.limits.limits, bands) for check in checks),
        tuple(_silent(check, network) for check in checks), plan.energy,
    )  # fmt: skip


def _check_solvable(network: Network) -> None:
    """Raise CheckError where the nominal circuit has no solution: the state as drawn can't exist."""
    problem = Problem(network, {}, [Asked(f"node:{node}", "voltage_peak") for node in network.nodes])
    if not network.nodes:
        raise CheckError("nothing is left of the circuit: every node is joined to ground")
    values = problem.values(network.axes.nominal[None])
    if not np.isfinite(values).all():
        raise CheckError("the nominal circuit has no unique solution at the drive frequency or at DC")


def _need_temperature(
    design: Design, policy: Policy, checks: list[Check], notes: Mapping[str, PartNotes], *, full: bool
) -> list[str]:
    """Parts whose limits can't be formed without their own temperature, and that declare what it takes."""
    known = {
        name: WARM for name, note in notes.items() if note.thermal_resistance is not None and note.ambient is not None
    }
    given = checks_of(design, policy, known, full=full)
    return list(
        dict.fromkeys(
            check.part
            for check, other in zip(checks, given, strict=True)
            if check.limits.outcome != other.limits.outcome and check.part in known
        )
    )


def _upper_temperatures(
    network: Network, notes: Mapping[str, PartNotes], parts: list[str], gap: float, stop: Stop
) -> dict[str, float]:
    """Proved upper temperature [K] of these parts, where one can be proved."""
    asked = [Asked(name, "temperature") for name in parts]
    none = np.full(len(asked), np.nan)
    worst = worst_case(Problem(network, notes, asked), gap, none, stop)
    return {
        ask.part: float(bound) for ask, bound in zip(asked, worst.bounds.bound, strict=True) if math.isfinite(bound)
    }


def _plan(network: Network, checks: list[Check]) -> _Plan:
    """One function per computable check, one more where its limit moves over the band; and every node's voltage."""
    plan = _Plan()
    bands = network.weighty_bands()
    for check in checks:
        if check.obstacle:
            plan.stress.append(-1)
            plan.use.append(-1)
            continue
        constant = all(limit.constant for limit in check.limits.limits) or (
            len(bands) == 1 and bands[0][0] == bands[0][1]
        )
        limit = _smallest(check.limits.limits, bands) if constant else math.nan
        plan.stress.append(plan.add(Asked(check.part, check.quantity), limit))
        if constant or not math.isfinite(_smallest(check.limits.limits, bands)):
            plan.use.append(-1)
        else:
            moving = Limiting(_at(check.limits.limits), _over(check.limits.limits))
            plan.use.append(plan.add(Asked(check.part, check.quantity, moving), 1.0))
    for node in network.nodes:
        plan.add(Asked(f"node:{node}", "voltage_peak", prove=False), math.nan)
    plan.energy = plan.add(Asked(CIRCUIT, QUANTITY), math.nan)
    return plan


def _smallest(limits: tuple[Limit, ...], bands: list[tuple[float, float]]) -> float:
    """Smallest allowed value over the bands of all lines; NaN where a limit is silent, or there is none."""
    values = [float(limit.allowed_smallest(np.array([b[0]]), np.array([b[1]]))[0]) for limit in limits for b in bands]
    return min(values) if values and all(math.isfinite(v) for v in values) else math.nan


def _at(limits: tuple[Limit, ...]) -> Callable[[Floats], Floats]:
    return lambda hertz: np.min([limit.allowed(hertz) for limit in limits], axis=0)


def _over(limits: tuple[Limit, ...]) -> Callable[[Floats, Floats], Floats]:
    return lambda low, high: np.min([limit.allowed_smallest(low, high) for limit in limits], axis=0)


def _silent(check: Check, network: Network) -> str:
    """Where a rating of the check says nothing within the drives' bands."""
    texts = []
    for limit in check.limits.limits:
        for low, high in network.weighty_bands():
            value = limit.allowed_smallest(np.array([low]), np.array([high]))
            if not np.isfinite(value).all() and limit.silent_text() not in texts:
                texts.append(limit.silent_text())
    return "; ".join(texts)


def _finding(
    design: Design,
    network: Network,
    check: Check,
    state: str,
    kind: str,
    plan: _Plan,
    worst: Worst,
    index: int,
    gap: float,
) -> Finding:
    column = plan.stress[index]
    if column < 0:
        return lost(check, state, kind, check.obstacle)
    use = plan.use[index]
    point = worst.peaks.point[use if use >= 0 else column]
    problem = Problem(network, part_notes(design), [Asked(check.part, check.quantity)])
    if check.kind == "inductor" and check.quantity in ("dissipation", "temperature") and _runs_away(problem):
        return lost(check, state, kind, RUNAWAY)
    if not np.isfinite(worst.peaks.value[column]):
        return lost(check, state, kind, NOT_SET)
    gated = gate_of(design, network) is not None
    if gated:
        point, stress = worst.peaks.point[column], float(worst.peaks.value[column])
    else:
        stress = float(worst.peaks.value[column]) if use < 0 else float(problem.values(point[None])[0, 0])
    hertz = float(network.lines[0].hertz(point[None])[0])
    bound = worst.bounds.bound[column] if math.isfinite(worst.bounds.bound[column]) else None
    silent = _silent(check, network)
    bound_use = _bound_use(worst, plan, index, use, column)
    result = judge(check.limits, silent, stress, bound_use, hertz, "")
    limit = result.limit
    place = Place(hertz, tuple((a.path, float(v)) for a, v in zip(network.axes.items, point, strict=True)))
    dead = stress <= float(worst.noise[column])
    proof = _proof(network, worst, column, None if bound is None or dead else max(0.0, float(bound) / stress - 1.0))
    return Finding(
        id=check.id(state), state=state, state_kind=kind, event=check.event,
        part=check.part, kind=check.kind, quantity=check.quantity, unit=check.unit, verdict=result.verdict,
        nominal=float(worst.nominal[column]) if math.isfinite(worst.nominal[column]) else None,
        worst=stress, bound=None if bound is None else float(bound), rated=result.rated,
        allowed_fraction=None if limit is None else limit.allowed_fraction, allowed=result.allowed,
        ratio=result.ratio, at=place,
        working=steps_for(network, check, point, stress, gated=gated) + (() if limit is None else limit.steps(hertz)),
        rating_source="" if limit is None else limit.rating_source,
        derating_source="" if limit is None else limit.derating_source,
        why=result.why, ratio_bound=bound_use, proof=proof, reason="" if dead else reason_for(network, check, point),
        remarks=_remarks(design, network, check, point) if not dead else (),
    )  # fmt: skip


def _proof(network: Network, worst: Worst, column: int, gap: float | None) -> Proof:
    corners = float(worst.corners[column]) if math.isfinite(worst.corners[column]) else None
    return Proof(worst.bounds.boxes, gap, _method(network, worst), corners)


def _runs_away(problem: Problem) -> bool:
    """Does the heat of a winding not settle somewhere at the corners of the box or in its middle?"""
    points = np.concatenate([problem.box.nominal[None], corner_points(problem.box)])
    return bool(np.isposinf(problem.values(points)).any())


def _remarks(design: Design, network: Network, check: Check, point: Floats) -> tuple[str, ...]:
    """Which parts carry the resonance, a word where a part is driven near its own, and which rating binds."""
    near = remark(design, check.kind, check.part, design.part(check.part))
    told = carriers_of(network, point) + ((near,) if near else ())
    if check.kind == "capacitor" and check.quantity == "voltage_rms":
        zone = zone_remark(network, check.part, design.part(check.part), point)
        told += (zone,) if zone else ()
    return told


def _bound_use(worst: Worst, plan: _Plan, index: int, use: int, column: int) -> float | None:
    """Proved bound of stress over allowed value; None where there is none."""
    if use >= 0:
        value = float(worst.bounds.bound[use])
    else:
        limit = plan.limits[column]
        value = float(worst.bounds.bound[column]) / limit if limit > 0.0 else math.inf
    return value if math.isfinite(value) else None


def _method(network: Network, worst: Worst) -> str:
    if not any(axis.varies for axis in network.axes.items):
        return "nothing varies: the bound is the value itself"
    if worst.too_many:
        return "none: too many values vary at once for the corner rule"
    if worst.bounds.spent:
        return "corner rule over boxes, ended before every gap was closed"
    return "corner rule over boxes, split until every gap was closed"


def lost(check: Check, state: str, kind: str, why: str) -> Finding:
    """A check that can't be made."""
    result = judge(check.limits, "", None, None, 0.0, why)
    limit = result.limit
    return Finding(
        id=check.id(state), state=state, state_kind=kind, event=check.event,
        part=check.part, kind=check.kind, quantity=check.quantity, unit=check.unit, verdict=result.verdict,
        rated=result.rated, allowed=result.allowed,
        allowed_fraction=None if limit is None else limit.allowed_fraction,
        rating_source="" if limit is None else limit.rating_source,
        derating_source="" if limit is None else limit.derating_source, why=result.why,
    )  # fmt: skip

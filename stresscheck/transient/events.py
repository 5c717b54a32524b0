"""Switch-on, switch-off and change at one point of the box, as swings of every response.

Charges and flux linkages are what they were just before the event; everything else follows the new circuit at once.
The new circuit's steady state is known, so what is left is a free swing from the difference of what the parts hold.

switch-on: from rest, all drives at once, at the worst phase. switch-off: voltage drives go to zero volt behind their
resistance, current drives to zero ampere. change: from one running circuit to another at the worst instant.
Source: circuit theory (superposition, continuity of charge and flux).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Complexes, Flags, Floats
from stresscheck.circuit.motion import roles_for
from stresscheck.circuit.network import Network
from stresscheck.circuit.phasors import phasors
from stresscheck.circuit.roles import Roles
from stresscheck.errors import CheckError
from stresscheck.stress.rests import terminal_feed
from stresscheck.stress.sizes import terminal_ampere
from stresscheck.transient.carried import Carried, line_charge, vector
from stresscheck.transient.ringing import Ringing, ringing
from stresscheck.transient.swing import Happening, Swing, Terms

SURGE = 1e-7
"""A charge or flux that has to move at once counts as none below this part of what the circuit holds."""
STANDS = 1e-9
"""A drive that pushes a mode without decay by less than this part of its largest push leaves it at rest."""


@dataclass(frozen=True, slots=True)
class Stage:
    """A network at one point, ready for events: its poles and residues, and whether its drives run."""

    network: Network
    point: Floats
    ring: Ringing
    out: Complexes
    running: bool = True


def stage(
    network: Network, point: Floats, *, running: bool = True, roles: Roles | None = None, omega: Floats | None = None
) -> Stage:
    """Poles and residues of a network at a point [axes]; CheckError where it has no solution in time.

    omega: where losses are read [1, rad/s]; the first drive's without it.
    """
    at = network.lines[0].omega(point[None]) if omega is None else omega
    ring = ringing(network, point[None], at, roles or roles_for(network))
    return Stage(network, point, ring, _with_terminals(network, ring), running)


def _with_terminals(network: Network, ring: Ringing) -> Complexes:
    """Rows of all responses to the modes: branch currents and voltages, nodes, terminals of drives, [o, n]."""
    rows = ring.out[0]
    ends = np.zeros((len(network.sources), rows.shape[1]), dtype=np.complex128)
    for index, source in enumerate(network.sources):
        behind = source.branch if source.branch is not None else network.branch_of(source.name, "source")
        if behind is not None:
            ends[index] = -rows[behind]
    return np.concatenate([rows, ends])


def happening(new: Stage, before: Carried) -> Happening:
    """What follows in `new` when its parts hold what `before` says at the instant of the event."""
    network, point = new.network, new.point
    unlimited = np.zeros(len(new.out), dtype=np.bool_)
    swings: list[Swing] = []
    seen: set[tuple[float, int]] = set()
    for course in network.courses() if new.running else ():
        harmonics = []
        course = _telling(network, course)
        for number in course:
            line = network.lines[number]
            key = (float(point[line.frequency_axis]), line.order)
            seen.add(key)
            at = phasors(network, point[None], line)
            flow = terminal_ampere(network, line, at)[0]
            driven = np.concatenate([at.ampere[0], at.volt[0], at.node[0], flow])
            own = vector(network, new.ring.motion.reactive, line_charge(network, point, line, at))
            old = vector(network, new.ring.motion.reactive, before.lines.get(key, {}))
            free, surge = _free(new, old - own, np.abs(old) + np.abs(own))
            unlimited |= surge
            rate = np.concatenate([[1j * float(at.omega[0])], new.ring.pole[0]])
            harmonics.append((line.order, Terms(np.concatenate([driven[:, None], free], axis=1), rate)))
        swings.append(_swing(new, course, tuple(harmonics)))
    lost: dict[float, list[tuple[int, Terms]]] = {}
    for (hertz, order), held in before.lines.items():
        if (hertz, order) not in seen:
            old = vector(network, new.ring.motion.reactive, held)
            free, surge = _free(new, old, np.abs(old))
            unlimited |= surge
            lost.setdefault(hertz, []).append((order, Terms(free, new.ring.pole[0])))
    swings += [Swing(tuple(parts), 2.0 * np.pi * hertz) for hertz, parts in lost.items()]
    direct, surge = _direct(new, before)
    return Happening(tuple(swings), direct, unlimited | surge)


def _telling(network: Network, course: tuple[int, ...]) -> tuple[int, ...]:
    """Lines of a course that are followed in time: of endless harmonics those that carry a noticeable part of some
    stress; the others pass at once, with what has no line."""
    if not any(network.sources[s].waveform.endless for n in course for s in network.lines[n].sources):
        return course
    return tuple(n for n in course if network.lines[n].weighty) or course


def _free(new: Stage, held: Complexes, size: Floats) -> tuple[Complexes, Flags]:
    """Free swing [responses, modes] of what is held too much at the start, and responses that surge without limit."""
    system = new.ring.motion
    state = system.settle[0] @ held
    free = new.out * (new.ring.inverse[0] @ state)
    after = system.momentum[0] @ (system.spread[0] @ state)
    moved = held - after
    if not moved.size:
        return free, np.zeros(len(new.out), dtype=np.bool_)
    moved = np.where(np.abs(moved) > SURGE * np.maximum(size, np.abs(after)), moved, 0.0)
    surge = np.abs(system.impulse[0]) @ np.abs(moved)
    ends = np.zeros(len(new.network.sources))
    for index, source in enumerate(new.network.sources):
        behind = source.branch if source.branch is not None else new.network.branch_of(source.name, "source")
        if behind is not None:
            ends[index] = surge[behind]
    return free, np.concatenate([surge, ends]) > 0.0


def _swing(new: Stage, course: tuple[int, ...], harmonics: tuple[tuple[int, Terms], ...]) -> Swing:
    """A course's swing, with what its harmonics leave out of squares and triangles passing at once."""
    network, point = new.network, new.point
    line = network.lines[course[0]]
    omega = float(line.omega(point[None])[0]) / line.order
    members = sorted({s for n in course for s in network.lines[n].sources if network.sources[s].waveform.endless})
    if not members:
        return Swing(harmonics, omega)
    direct = new.ring.motion.d
    feed = np.zeros((len(new.out), len(members)))
    shapes = []
    edges: list[float] = []
    largest = np.zeros(len(members))
    for column, index in enumerate(members):
        source = network.sources[index]
        level = float(point[source.level_axis]) * source.level_scale
        orders = tuple(network.lines[n].order for n in course if index in network.lines[n].sources)
        feed[:, column] = level * np.concatenate([direct[0, :, index], terminal_feed(network, direct, index)[0]])
        shapes.append((source.waveform, source.phase, orders))
        edges += [e - source.phase for e in source.waveform.edges()]
        largest[column] = source.waveform.rest_peak(orders)

    def rest(angle: Floats) -> Floats:
        return np.tensordot(feed, np.stack([w.rest(angle + p, n) for w, p, n in shapes]), axes=1)

    return Swing(harmonics, omega, tuple(edges), np.abs(feed) @ largest, rest)


def _direct(new: Stage, before: Carried) -> tuple[Terms, Flags]:
    """Direct parts: a step of all offsets onto what is held, as real sums of modes; and what grows without limit."""
    network, ring = new.network, new.ring
    responses = len(new.out)
    level = np.zeros(len(network.sources))
    if new.running:
        level = np.array([s.direct_level(new.point[[s.level_axis]])[0] for s in network.sources])
    held = vector(network, ring.motion.reactive, before.direct)
    if not level.any() and not held.any():
        none = np.zeros((responses, 0), dtype=np.complex128)
        return Terms(none, none.reshape(-1)[:0]), np.zeros(responses, dtype=np.bool_)
    if np.isnan(held).any():
        raise CheckError("a direct voltage before the event isn't set by the circuit")
    start = ring.inverse[0] @ (ring.motion.settle[0] @ held)
    push = ring.into[0] @ level
    still = ring.pole[0] == 0.0
    final = np.where(still, 0.0, -push / np.where(still, 1.0, ring.pole[0]))
    grows = still & (np.abs(push) > STANDS * np.abs(push).max(initial=0.0))
    at_once = np.concatenate([ring.motion.d[0] @ level, _own(network, ring.motion.d, level)])
    constant = at_once + (new.out @ final)
    coefficient = np.concatenate([constant[:, None], new.out * np.where(still, start, start - final)], axis=1)
    given = ring.motion.momentum[0] @ (ring.motion.given[0] @ level)
    _, surge = _free(new, held - given, np.abs(held) + np.abs(given))
    unlimited = (np.abs(new.out[:, grows]) > 0.0).any(axis=1) | surge
    return Terms(coefficient, np.append(0.0, ring.pole[0])), unlimited


def _own(network: Network, direct: Floats, level: Floats) -> Floats:
    """Terminal currents that direct levels make at once, [drives]."""
    total = np.zeros(len(level))
    for s in range(len(level)):
        total += terminal_feed(network, direct, s)[0] * level[s]
    return total

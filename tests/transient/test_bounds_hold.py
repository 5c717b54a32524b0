"""Bounds in time and beyond the last harmonic against random points of the box: none above, and not far above."""

from __future__ import annotations

import numpy as np
import pytest
from courses import circuit

from stresscheck.circuit.build import build
from stresscheck.circuit.motion import motion, roles_for
from stresscheck.circuit.network import Network
from stresscheck.circuit.nodal import respond
from stresscheck.circuit.tail import tail
from stresscheck.design.load import read_design
from stresscheck.stress.course_bounds import endings_of
from stresscheck.stress.energy import root_energy
from stresscheck.stress.sizes import sizes_at, sizes_over
from stresscheck.transient.carried import Carried, carried
from stresscheck.transient.events import happening, stage
from stresscheck.transient.impulse import absolute_integrals
from stresscheck.transient.one_resonance import one_resonance
from stresscheck.transient.reach import reach
from stresscheck.transient.swing import largest

SHAPES = {
    "series": "resistor R in a {r}\ninductor L a c {henry} resistance={loss}_ohm\ncapacitor C c ground {farad} "
    "dissipation_factor=0.002\nresistor Rp c ground {rp}",
    "parallel": "resistor R in c {rp}\ninductor L c ground {henry} resistance={loss}_ohm\ncapacitor C c ground {farad}",
    "tapped": "resistor R in a {r}\ninductor L a c {henry} resistance={loss}_ohm\nresistor Rt a ground {rp}\n"
    "capacitor C c ground {farad}\nresistor Rs c ground {rp2}",
}


def random_network(seed: int, extra: str = "") -> Network:
    """One resonance of Q 3 to 300, every part with a tolerance of up to 10 %, driven near it."""
    rng = np.random.default_rng(seed)
    shape = sorted(SHAPES)[seed % len(SHAPES)]
    z, q = float(10 ** rng.uniform(1, 3)), float(10 ** rng.uniform(0.5, 2.5))
    hertz = float(10 ** rng.uniform(4, 6))
    figures = {
        "r": z / q, "loss": 0.3 * z / q, "rp": z * q, "rp2": 3.0 * z * q, "henry": z / (2.0 * np.pi * hertz),
        "farad": 1.0 / (z * 2.0 * np.pi * hertz),
    }  # fmt: skip
    text = circuit(
        SHAPES[shape].format(**{k: repr(v) for k, v in figures.items()}), hertz=hertz * rng.uniform(0.8, 1.2),
        peak=10.0, extra=extra,
    )  # fmt: skip
    slack = f"{rng.uniform(1.0, 10.0):.2f} %"
    lines = []
    for line in text.splitlines():
        lines.append(line)
        if line.startswith("value = "):
            lines.append(f'tolerance = "{slack}"')
    return build(read_design("\n".join(lines)))


def points_of(network: Network, seed: int, count: int) -> np.ndarray:
    rng = np.random.default_rng(seed)
    low, high = network.axes.low, network.axes.high
    inside = low + (high - low) * rng.random((count, len(low)))
    ends = np.where(rng.random((count, len(low))) < 0.5, low, high)
    return np.concatenate([inside, ends])


@pytest.mark.parametrize("seed", range(18))
def test_one_resonance_bounds_hold_and_are_near(seed: int) -> None:
    network = random_network(seed)
    bounds = one_resonance(network)
    assert bounds is not None
    rows = list(range(2 * len(network.branches) + len(network.nodes) + 1))
    best = np.zeros(len(rows))
    level = network.sources[0].level_scale * network.axes.nominal[network.sources[0].level_axis]
    for point in points_of(network, seed, 12):
        here = stage(network, point)
        whole = absolute_integrals(here, rows)[:, 0]
        best = np.maximum(best, whole)
        assert (whole <= bounds.any_waveform[:, 0] * (1.0 + 1e-9)).all()
        on = largest(happening(here, Carried.nothing())).value / level
        assert (on <= bounds.sine[:, 0] * (1.0 + 1e-9)).all()
        for ratio in (0.0, 0.5, 0.9, 1.0, 1.1, 3.0):
            omega = ratio * float(np.abs(here.ring.pole[0]).max())
            h = (here.out / (1j * omega - here.ring.pole[0])) @ here.ring.into[0, :, 0]
            h[: here.ring.motion.d.shape[1]] += here.ring.motion.d[0, :, 0]
            assert (np.abs(h) <= bounds.any_frequency[:, 0] * (1.0 + 1e-9)).all()
    used = best > 1e-9 * best.max()
    assert np.median(bounds.any_waveform[used, 0] / best[used]) < 1.35


@pytest.mark.parametrize("seed", range(12))
def test_free_swing_never_exceeds_its_reach(seed: int) -> None:
    """Switch-off at random points: every response below sqrt(2 W) times its reach, W bounded over the box."""
    network = random_network(seed)
    far = reach(network)
    sizes, _ = sizes_over(network, network.axes.low[None], network.axes.high[None])
    energy = float(root_energy(network, sizes)[0])
    for point in points_of(network, seed, 8):
        seen = largest(happening(stage(network, point, running=False), carried(network, point))).value
        own = float(root_energy(network, sizes_at(network, point[None]))[0])
        assert own <= energy * (1.0 + 1e-9)
        assert (seen <= far * own * (1.0 + 1e-6) + 1e-12 * seen.max()).all()


@pytest.mark.parametrize("seed", range(12))
def test_tail_bounds_hold_at_every_frequency_above_the_last_line(seed: int) -> None:
    network = random_network(seed, 'waveform = "square"')
    line = network.lines[0]
    (course, ending), *_ = endings_of(network).items()
    top = max(network.lines[n].order for n in course)
    lowest = (top + 1) * network.band_of(line)[0]
    rng = np.random.default_rng(seed)
    points = points_of(network, seed, 40)
    count = 2 * len(network.branches) + len(network.nodes)
    for factor in (1.0, 1.3, 4.0, 50.0):
        shifted = points.copy()
        shifted[:, line.frequency_axis] = lowest * factor * (1.0 if factor == 1.0 else rng.uniform(1.0, 1.2))
        unit = respond(network, shifted, line)
        h = np.concatenate([unit.ampere, unit.volt, unit.node], axis=1)[:, :, 0]
        away = np.abs(h - ending.feed[:count, 0])
        ratio = shifted[:, line.frequency_axis] / lowest
        assert (away <= ending.size[:count, 0] * (1.0 + 1e-6) + 1e-12).all()
        assert (away * ratio[:, None] <= ending.fall[:count, 0] * (1.0 + 1e-6) + 1e-12).all()


def test_tail_of_a_response_without_a_common_end_has_no_falling_bound() -> None:
    """A divider of two toleranced resistances ends at another value at every corner of the box."""
    text = circuit(
        "resistor R1 in a 100\nresistor R2 a ground 100\ncapacitor C a b 1e-9\nresistor R3 b ground 50", peak=1.0
    )
    text = text.replace('value = "100.0 ohm"', 'value = "100.0 ohm"\ntolerance = "10 %"')
    network = build(read_design(text))
    number = 2 * len(network.branches) + network.nodes.index("a")
    system = motion(
        network, network.axes.nominal[None], network.lines[0].omega(network.axes.nominal[None]), roles_for(network)
    )
    feed = np.zeros((2 * len(network.branches) + len(network.nodes) + 1, 1))
    feed[:-1, 0] = system.d[0, :, 0]
    found = tail(network, network.lines[0], 1e4, network.axes.low, network.axes.high, feed)
    assert np.isfinite(found.size[number, 0])
    assert found.fall[number, 0] == np.inf


@pytest.mark.parametrize("seed", [0, 3])
def test_worst_of_an_event_is_found_away_from_the_steady_state_s_worst(seed: int) -> None:
    """Circuits of several resonances, 10 % on every part: 40 random points find no more than 1.5 % above the search."""
    from dataclasses import replace

    from node_circuits import random_nodes

    from stresscheck.chain import review

    design = read_design(replace(random_nodes(seed), tolerance="10 %").text())
    found = {f.id: f for f in review(design).findings}
    network = build(design)
    on = np.zeros(2 * len(network.branches))
    for point in points_of(network, seed, 20):
        on = np.maximum(on, largest(happening(stage(network, point), Carried.nothing())).value[: len(on)])
    compared = 0
    for index, branch in enumerate(network.branches):
        for quantity, row in (("voltage_peak", index + len(network.branches)), ("current_peak", index)):
            finding = found.get(f"{branch.part}.{quantity}@normal/switch-on")
            if finding is not None and finding.kind != "drive":
                compared += 1
                assert on[row] <= 1.015 * finding.worst
                assert finding.bound is None or on[row] <= finding.bound
    assert compared >= 6

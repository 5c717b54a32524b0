"""Natural modes against closed forms."""

from __future__ import annotations

import math

import numpy as np
import pytest

from stresscheck.circuit.axes import Axes, Axis
from stresscheck.circuit.curves import LossCurve
from stresscheck.circuit.laws import TAU, CapacitorLaw, InductorLaw, ResistorLaw
from stresscheck.circuit.modes import natural_modes
from stresscheck.circuit.network import Branch, Coupling, Line, Network, Source

NONE = LossCurve("", None, np.zeros(1))


def _pair(k: float, q: float) -> Network:
    """Two equal tanks of 10 uH and 1 nF, coupled; the first with an ideal drive in series."""
    henry, farad = 10e-6, 1e-9
    omega = 1.0 / math.sqrt(henry * farad)
    kappa = omega / q
    values = [henry, farad, henry, farad, k, 1.0, omega / TAU]
    axes = Axes(tuple(Axis(f"a{i}", v, v, v) for i, v in enumerate(values)))
    branches = (
        Branch("L1", "main", 0, 1, InductorLaw(NONE, kappa), 0),
        Branch("C1", "main", 1, -1, CapacitorLaw(NONE, NONE), 1),
        Branch("L2", "main", 2, -1, InductorLaw(NONE, kappa), 2),
        Branch("C2", "main", 2, -1, CapacitorLaw(NONE, NONE), 3),
        Branch("D", "source", 0, -1, ResistorLaw(), None, 0.0, drive=0),
    )
    source = Source("D", "voltage", "peak", 0, -1, 4, 0.0, 5, 1.0, 0.0, 0, 0.0)
    return Network(axes, ("a", "b", "c"), branches, (Coupling("k", 0, 2, 4),), (), (source,), (Line(6, (0,), 0),))


@pytest.mark.parametrize("k", [0.01, 0.3, 0.6])
def test_natural_modes_equal_coupled_tanks_split_by_one_plus_minus_k(k: float) -> None:
    """f = f0/sqrt(1 +- k) for lossless equal tanks (figures T6, circuit theory)."""
    modes = natural_modes(_pair(k, 1e9), _pair(k, 1e9).axes.nominal)
    f0 = 1.0 / (TAU * math.sqrt(10e-6 * 1e-9))
    assert [m.hertz for m in modes] == pytest.approx([f0 / math.sqrt(1 + k), f0 / math.sqrt(1 - k)], rel=1e-9)


def test_natural_modes_mode_ratio_one_to_two_means_k_point_six() -> None:
    """k = (b^2 - a^2)/(b^2 + a^2) for mode ratio a:b: 1:2 -> 0.6 (published rule for two equal coupled resonators)."""
    low, high = natural_modes(_pair(0.6, 1e9), _pair(0.6, 1e9).axes.nominal)
    assert high.hertz / low.hertz == pytest.approx(2.0, rel=1e-9)


@pytest.mark.parametrize("q", [0.6, 2.0, 100.0, 1e5])
def test_natural_modes_single_tank_has_its_q_and_frequency(q: float) -> None:
    """Series tank: |s| = w0, Re s = -w0/(2Q) (circuit theory)."""
    network = _pair(1e-9, q)
    modes = natural_modes(network, network.axes.nominal)
    omega = 1.0 / math.sqrt(10e-6 * 1e-9)
    for mode in modes:
        assert abs(mode.pole) == pytest.approx(omega, rel=1e-6)
        assert mode.q == pytest.approx(q, rel=1e-6)
        assert sum(share for _, share in mode.energy) == pytest.approx(1.0)


def test_natural_modes_overdamped_tank_has_no_oscillating_mode() -> None:
    network = _pair(1e-9, 0.4)
    assert natural_modes(network, network.axes.nominal) == ()

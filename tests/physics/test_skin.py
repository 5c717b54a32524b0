"""Skin depth and the Bessel form: reference by mpmath, published figures, and the printed approximations."""

from __future__ import annotations

import math
import subprocess
import sys

import mpmath
import numpy as np
import pytest

from stresscheck.physics.coils import awg_diameter
from stresscheck.physics.copper import COPPER_RESISTIVITY
from stresscheck.physics.skin import round_wire_ratio, skin_depth


def _exact(ratio: float) -> float:
    """Re{(ka/2) J0(ka)/J1(ka)} in 40 digits; scaling of both by the growing exponential needs none in mpmath."""
    with mpmath.workdps(40):
        z = (1 - 1j) * mpmath.mpf(ratio)
        return float(mpmath.re(z / 2 * mpmath.besselj(0, z) / mpmath.besselj(1, z)))


@pytest.mark.parametrize(
    ("hertz", "depth", "unit"),
    [(60.0, 8.53e-3, 1e-5), (1e3, 2.09e-3, 1e-5), (1e4, 0.661e-3, 1e-6), (1e5, 0.209e-3, 1e-6), (1e6, 66.1e-6, 1e-7)],
)
def test_skin_depth_of_copper_meets_the_relations(hertz: float, depth: float, unit: float) -> None:
    assert float(skin_depth(COPPER_RESISTIVITY, hertz)) == pytest.approx(depth, abs=0.51 * unit)


@pytest.mark.parametrize(
    ("siemens", "printed", "recomputed"),
    [(3.816e7, 0.815, 0.8147), (5.813e7, 0.660, 0.6601), (4.098e7, 0.786, 0.7862), (6.173e7, 0.641, 0.6406)],
)
def test_skin_depth_of_metals_at_10_gigahertz_meets_o61(siemens: float, printed: float, recomputed: float) -> None:
    micro = 1e6 * float(skin_depth(1.0 / siemens, 10e9))
    assert micro == pytest.approx(printed, abs=5.1e-4)
    assert micro == pytest.approx(recomputed, abs=5.1e-5)


def test_skin_depth_of_copper_at_1_gigahertz_meets_o61() -> None:
    assert 1e6 * float(skin_depth(1.0 / 5.813e7, 1e9)) == pytest.approx(2.087, abs=5.1e-4)


def test_skin_depth_over_arrays_broadcasts_and_falls_with_permeability() -> None:
    depth = skin_depth(np.array([[1e-8], [4e-8]]), np.array([1e3, 4e3, 16e3]), 100.0)
    assert depth.shape == (2, 3)
    assert depth[1, 1] == pytest.approx(depth[0, 0])
    assert depth == pytest.approx(0.1 * skin_depth(np.array([[1e-8], [4e-8]]), np.array([1e3, 4e3, 16e3])))


def test_skin_depth_at_0_hertz_is_infinite_and_the_ratio_1() -> None:
    depth = skin_depth(COPPER_RESISTIVITY, 0.0)
    assert depth == math.inf
    assert round_wire_ratio(1e-3, depth) == 1.0


@pytest.mark.parametrize(("resistivity", "hertz"), [(0.0, 1.0), (-1.0, 1.0), (math.nan, 1.0), (1.0, -1.0)])
def test_skin_depth_of_impossible_sizes_is_refused(resistivity: float, hertz: float) -> None:
    with pytest.raises(ValueError, match=r"resistivity|hertz"):
        skin_depth(resistivity, hertz)


def test_round_wire_ratio_over_six_decades_meets_mpmath() -> None:
    ratios = np.concatenate([np.geomspace(1e-3, 1e3, 241), [19.9, 20.0, 20.1]])
    exact = np.array([_exact(float(r)) for r in ratios])
    found = round_wire_ratio(ratios, 1.0)
    assert np.max(np.abs(found / exact - 1.0)) < 1e-12


@pytest.mark.parametrize("radius", [1e-9, 1e4, 1e8])
def test_round_wire_ratio_far_outside_stays_on_its_asymptotes(radius: float) -> None:
    expected = 1.0 if radius < 1.0 else 0.5 * radius + 0.25
    assert float(round_wire_ratio(radius, 1.0)) == pytest.approx(expected, rel=1e-8)


def test_round_wire_ratio_of_half_a_millimetre_at_10_kilohertz_meets_the_relations() -> None:
    """The printed 1.006822 belongs to 1.72e-8 ohm m; with 1.724e-8 it is 1.006791."""
    found = round_wire_ratio(0.5e-3, skin_depth(np.array([1.72e-8, COPPER_RESISTIVITY]), 1e4))
    assert found == pytest.approx([1.006822, 1.006791], abs=5.1e-7)


def test_round_wire_ratio_of_thin_wire_is_the_printed_series() -> None:
    """1 + (a/d)^4/48 below 1.5: never below, and 0.75 % above at most."""
    ratios = np.linspace(0.05, 1.5, 30)
    series = 1.0 + ratios**4 / 48.0
    found = round_wire_ratio(ratios, 1.0)
    assert np.all(series >= found)
    assert np.all(series <= found * 1.0075)


def test_round_wire_ratio_of_thick_wire_is_the_printed_series() -> None:
    """a/(2d) + 1/4 + 3 d/(32 a) above 3: within 0.75 % at 3, 0.05 % from 4 on."""
    ratios = np.geomspace(3.0, 300.0, 30)
    error = np.abs((ratios / 2.0 + 0.25 + 3.0 / (32.0 * ratios)) / round_wire_ratio(ratios, 1.0) - 1.0)
    assert error[0] < 7.5e-3
    assert np.all(error[ratios > 4.0] < 5e-4)
    assert np.all(error[ratios > 10.0] < 5e-5)


@pytest.mark.parametrize(
    ("gauge", "factor", "unit"),
    [(-3, 44.5, 0.1), (0, 31.5, 0.1), (10, 10.05, 0.01), (14, 6.42, 0.01), (18, 4.13, 0.01), (22, 2.70, 0.01)],
)
def test_round_wire_ratio_at_1_megahertz_meets_the_exact_factors_of_o63(gauge: int, factor: float, unit: float) -> None:
    """The printed table of the source (124.5 for 0000 and so on) is 2.5 to 2.8 times too high."""
    found = float(round_wire_ratio(0.5 * awg_diameter(gauge), skin_depth(COPPER_RESISTIVITY, 1e6)))
    assert found == pytest.approx(factor, abs=0.51 * unit)


def test_round_wire_of_25_ohm_gauge_10_at_10_megahertz_meets_the_exact_figure_of_o63() -> None:
    """780 ohm; the source prints 2.182 kilohm."""
    ratio = float(round_wire_ratio(0.5 * awg_diameter(10), skin_depth(COPPER_RESISTIVITY, 10e6)))
    assert 25.0 * ratio == pytest.approx(780.0, abs=0.51)


def test_round_wire_ratio_over_arrays_broadcasts_and_grows() -> None:
    found = round_wire_ratio(np.array([[1e-4], [1e-3]]), np.geomspace(1e-3, 1e-6, 50))
    assert found.shape == (2, 50)
    assert np.all(np.diff(found, axis=1) > 0.0)
    assert np.all(found[1] >= found[0])


@pytest.mark.parametrize(("radius", "depth"), [(0.0, 1.0), (1.0, 0.0), (1.0, math.nan), (math.inf, 1.0)])
def test_round_wire_ratio_of_impossible_sizes_is_refused(radius: float, depth: float) -> None:
    with pytest.raises(ValueError, match=r"radius|depth"):
        round_wire_ratio(radius, depth)


def test_physics_imports_no_scientific_library_but_numpy() -> None:
    code = (
        "import importlib, pkgutil, sys, stresscheck.physics as p\n"
        "for m in pkgutil.iter_modules(p.__path__): importlib.import_module('stresscheck.physics.' + m.name)\n"
        "print([m for m in ('scipy', 'mpmath', 'pint', 'pydantic') if m in sys.modules])\n"
        "print(sorted(m for m in sys.modules if m.startswith('stresscheck.') and '.physics' not in m))"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    heavy, own = done.stdout.splitlines()
    assert heavy == "[]"
    assert own == "['stresscheck.arrays']"

"""Copper over temperature, and the wire examples of the published table."""

from __future__ import annotations

import math

import numpy as np
import pytest

from stresscheck.physics.coils import awg_diameter
from stresscheck.physics.copper import (
    COPPER_RESISTIVITY,
    copper_resistance,
    copper_resistivity,
    dc_resistance,
    winding_length,
    wire_area,
)

FOOT = 0.3048
MIL_AREA = math.pi / 4.0 * (0.0254e-3) ** 2
OHM_MIL_FOOT = 10.09 * MIL_AREA / FOOT
"""The resistivity that the published examples use [ohm m]."""


def test_copper_at_20_degrees_is_as_given() -> None:
    assert float(copper_resistance(2.5, 293.15)) == 2.5
    assert float(copper_resistivity(293.15)) == COPPER_RESISTIVITY == 1.724e-8


def test_copper_100_kelvin_hotter_has_39_per_cent_more() -> None:
    assert float(copper_resistance(1.0, 393.15)) == pytest.approx(1.393, rel=1e-12)


def test_copper_over_arrays_broadcasts_and_grows() -> None:
    found = copper_resistance(np.array([[1.0], [3.0]]), np.array([233.15, 293.15, 423.15]))
    assert found.shape == (2, 3)
    assert np.all(np.diff(found, axis=1) > 0.0)
    assert found[1] == pytest.approx(3.0 * found[0])


@pytest.mark.parametrize("kelvin", [4.2, 20.0, 600.0, math.nan])
def test_copper_outside_the_line_is_refused(kelvin: float) -> None:
    with pytest.raises(ValueError, match="-100 to 300"):
        copper_resistance(1.0, kelvin)


def test_published_resistivity_in_mil_feet_is_that_of_o62() -> None:
    """Cu 10.09 ohm cmil/ft is 1.678 uohm cm to the printed digits."""
    micro_ohm_cm = 1e8 * OHM_MIL_FOOT
    assert micro_ohm_cm == pytest.approx(1.678, abs=1e-3)


def test_wire_of_2300_feet_gauge_14_meets_o62() -> None:
    one_way = float(dc_resistance(2300.0 * FOOT, 4107.0 * MIL_AREA, OHM_MIL_FOOT))
    assert one_way == pytest.approx(5.6506, abs=5.1e-5)
    assert 2.0 * one_way == pytest.approx(11.3012, abs=5.1e-5)
    assert 230.0 / (2.0 * one_way) == pytest.approx(20.3518, abs=5.1e-4)
    exact = float(dc_resistance(2300.0 * FOOT, wire_area(awg_diameter(14)), OHM_MIL_FOOT))
    assert exact == pytest.approx(5.651, abs=1.1e-3)


def test_area_for_two_tenths_of_an_ohm_meets_o62() -> None:
    """2300 ft there and alone at 0.2 ohm: 116 035 circular mils."""
    assert float(dc_resistance(2300.0 * FOOT, 116035.0 * MIL_AREA, OHM_MIL_FOOT)) == pytest.approx(0.2, rel=1e-6)


def test_winding_length_of_round_turns_is_helix_length() -> None:
    angle = np.linspace(0.0, 2.0 * math.pi * 5, 20_001)
    course = np.stack([0.02 * np.cos(angle), 0.02 * np.sin(angle), 3e-3 * angle / (2.0 * math.pi)])
    assert float(winding_length(5, 0.04, 3e-3)) == pytest.approx(
        float(np.sqrt((np.diff(course, axis=1) ** 2).sum(axis=0)).sum()), rel=1e-6
    )
    assert float(winding_length(5, 0.04)) == pytest.approx(5 * math.pi * 0.04, rel=1e-12)


def test_wire_area_of_strands_adds() -> None:
    assert float(wire_area(0.1e-3, 7)) == pytest.approx(7 * math.pi * (0.05e-3) ** 2, rel=1e-12)


@pytest.mark.parametrize(("length", "area"), [(-1.0, 1.0), (1.0, 0.0), (math.nan, 1.0), (math.inf, 1.0)])
def test_dc_resistance_of_impossible_wire_is_refused(length: float, area: float) -> None:
    with pytest.raises(ValueError, match=r"length|area"):
        dc_resistance(length, area)

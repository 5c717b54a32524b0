"""Coils described by their winding: resistance from geometry and skin effect, heat left open."""

from __future__ import annotations

import math

import mpmath
import numpy as np
import pytest

from stresscheck.chain import review
from stresscheck.circuit.build import build
from stresscheck.circuit.direct import direct
from stresscheck.design.load import read_design

TEXT = """
title = "coil"
derating = "as-rated"
[drive.D]
between = ["a", "ground"]
peak = "1 V"
OFFSET
frequency = "100 kHz"
rating = { current_peak = "90 A" }
[inductor.L]
between = ["a", "ground"]
value = "20 uH"
turns = 20
winding = { WIRE, coil_diameter = "40 mm", length = "60 mm" }
family = "air core"
rating = { current_rms = "90 A", voltage_peak = "900 V", dissipation = "9 W" }
[resistor.R]
between = ["a", "ground"]
value = "50 ohm"
rating = { dissipation = "90 W" }
"""
SOLID = 'wire_diameter = "1.0 mm"'
LITZ = 'strands = 100, strand_diameter = "0.1 mm"'
LENGTH = 20.0 * math.hypot(math.pi * 0.04, 0.06 / 20.0)


def _network(wire: str, offset: str = ""):
    return build(read_design(TEXT.replace("WIRE", wire).replace("OFFSET", offset)))


def _bessel(radius: float, hertz: float) -> float:
    depth = math.sqrt(1.724e-8 / (math.pi * hertz * 4e-7 * math.pi))
    ka = (1 - 1j) * radius / depth
    return float(mpmath.re(ka / 2 * mpmath.besselj(0, ka) / mpmath.besselj(1, ka)))


@pytest.mark.parametrize(("wire", "radius", "strands"), [(SOLID, 0.5e-3, 1), (LITZ, 0.05e-3, 100)])
def test_resistance_of_a_winding_is_length_section_and_skin_effect(wire: str, radius: float, strands: int) -> None:
    law = _network(wire).branches[0].law
    dc = 1.724e-8 * LENGTH / (strands * math.pi * radius**2)
    for hertz in (50.0, 1e4, 1e5, 3.3e6):
        exact = dc * _bessel(radius, hertz)
        assert 0.996 * exact <= law.resistance.at(np.array([hertz]))[0] <= exact


def test_direct_current_through_a_winding_sees_its_dc_resistance() -> None:
    network = _network(SOLID, 'offset = "10 mV"')
    ohm = 1.724e-8 * LENGTH / (math.pi * 0.5e-3**2)
    assert direct(network, network.axes.nominal[None]).ampere[0, 0] == pytest.approx(0.01 / ohm)


def test_heat_of_a_winding_is_left_open_and_its_current_is_checked() -> None:
    found = {f.id: f for f in review(read_design(TEXT.replace("WIRE", SOLID).replace("OFFSET", ""))).findings}
    assert found["L.current_rms@normal"].verdict == "within"
    heat = found["L.dissipation@normal"]
    assert heat.verdict == "not-checked"
    assert "turns and layers" in heat.why


def test_winding_without_its_diameter_says_what_is_missing() -> None:
    text = TEXT.replace("WIRE", SOLID).replace("OFFSET", "").replace(', coil_diameter = "40 mm"', "")
    found = review(read_design(text)).findings
    assert {f.verdict for f in found} == {"not-checked"}
    assert all("winding.coil_diameter" in f.why for f in found)

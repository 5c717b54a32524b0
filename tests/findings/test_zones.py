"""The zone that sets a capacitor's permissible voltage is named in its finding, at each side of its corners."""

from __future__ import annotations

import math

import pytest

from stresscheck.chain import review
from stresscheck.design.load import read_design

TEXT = """
title = "zones"
derating = "as-rated"
[drive.D]
between = ["a", "ground"]
peak = "1 V"
frequency = "HERTZ Hz"
source_resistance = "1 ohm"
rating = { current_peak = "90 A" }
[capacitor.C]
between = ["a", "ground"]
value = "1 nF"
dissipation_factor = 0.001
rating = { voltage_peak = "9 kV", voltage_rms = "1 kV", LOSS, current_rms = "10 A" }
"""
# f1 = P/(2 pi C tan d V^2) = 159 kHz and f2 = I^2 tan d/(2 pi C P) = 16 MHz for 1 W.


@pytest.mark.parametrize(
    ("hertz", "word", "volt"),
    [(1.5e5, "voltage rating", 1000.0), (1.7e5, "loss or reactive power", math.sqrt(1.0 / (2e-12 * math.pi * 1.7e5))),
     (1.5e7, "loss or reactive power", math.sqrt(1.0 / (2e-12 * math.pi * 1.5e7))),
     (1.7e7, "current rating", 10.0 / (2e-9 * math.pi * 1.7e7))],
)  # fmt: skip
@pytest.mark.parametrize("loss", ['dissipation = "1 W"', 'reactive_power = "1000 var"'])
def test_binding_zone_is_named_on_each_side_of_its_corners(hertz: float, word: str, volt: float, loss: str) -> None:
    text = TEXT.replace("HERTZ", repr(hertz)).replace("LOSS", loss)
    finding = {f.id: f for f in review(read_design(text)).findings}["C.voltage_rms@normal"]
    told = [r for r in finding.remarks if "binds first" in r]
    assert len(told) == 1
    assert word in told[0]
    assert float(told[0].split(": ")[1].split(" V")[0]) == pytest.approx(volt, rel=6e-4)


def test_bank_or_single_rating_names_no_zone() -> None:
    text = TEXT.replace("HERTZ", "1e6").replace(", LOSS, current_rms", ", current_peak")
    found = {f.id: f for f in review(read_design(text)).findings}
    assert not any("binds first" in r for r in found["C.voltage_rms@normal"].remarks)

"""The commented design file to begin with. Its circuit and figures are invented, and say so."""

from __future__ import annotations

_TEXT = """\
# A design file: one circuit, its site, the ratings of its parts and the states it is reviewed in.
# Every figure here is invented: put your own in its place, ratings from the makers' data sheets.
# Every figure with a dimension is text with a unit. The reference node is called "ground".
title = "Series tank to begin with (invented)"
revision = "A"
derating = "uniform-80"          # a policy: see `stresscheck library policies`

[site]
ambient = ["10 degC", "40 degC"] # one temperature or a range
reachable = ["in"]               # nodes a person can touch; left out: all of them

[drive.generator]
between = ["in", "ground"]
peak = "5 V"                     # exactly one of peak, rms, peak_to_peak, available_power, delivered_power
frequency = ["98 kHz", "102 kHz"]
source_resistance = "0.5 ohm"
[drive.generator.rating]
current_peak = "15 A"

[inductor.L1]
between = ["in", "top"]
value = "100 uH"
tolerance = "5 %"
q = 120                          # or resistance = "0.5 ohm"
q_at = "100 kHz"
family = "air core"              # then no saturation_current is needed
[inductor.L1.rating]
current_rms = "8 A"
voltage_peak = "1200 V"
source = "invented"

[capacitor.C1]
between = ["top", "ground"]
value = "25.3 nF"
tolerance = "5 %"
dissipation_factor = 0.0004
family = "polypropylene film"
thermal_resistance = "15 K/W"
[capacitor.C1.rating]
voltage_dc = "1600 V"            # or voltage_peak
voltage_rms = { by = "frequency", points = [["10 kHz", "600 V"], ["100 kHz", "500 V"], ["300 kHz", "170 V"]] }
current_rms = "12 A"
temperature = "100 degC"
source = "invented"

# A state is the same circuit with something changed. Kind "fault" is compared with full ratings.
[state.cold-coil]
change = { "inductor.L1.q" = 150 }

[state.capacitor-shorted]
kind = "fault"
change = { "capacitor.C1" = "short" }
"""


def starter_text() -> str:
    """Text of the starter file: a design that loads as it stands, every figure in it invented."""
    return _TEXT

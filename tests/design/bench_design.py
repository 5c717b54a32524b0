"""The whole example of the format's documentation, and a smaller design to change in tests."""

from __future__ import annotations

WHOLE = """\
title = "Bench induction heater, series tank"
revision = "B"
derating = "src-severe"

[site]
ambient = ["10 degC", "40 degC"]
altitude = "300 m"
pollution_degree = 2
reachable = ["in"]

[drive.bridge]
between = ["in", "ground"]
peak = "12 V"
frequency = ["84 kHz", "92 kHz"]
source_resistance = "50 mohm"
[drive.bridge.rating]
current_peak = "40 A"

[capacitor.Ctank]
between = ["in", "hot"]
value = "150 nF"
tolerance = "5 %"
dissipation_factor = 0.0006
family = "polypropylene film"
thermal_resistance = "9 K/W"
[capacitor.Ctank.rating]
voltage_dc = "1000 V"
voltage_rms = { by = "frequency", points = [["10 kHz", "450 V"], ["85 kHz", "400 V"], ["200 kHz", "170 V"]] }
current_rms = "30 A"
temperature = "105 degC"
source = "maker's data sheet, revision 3, p. 4"

[inductor.Lwork]
between = ["hot", "cold"]
value = "22 uH"
tolerance = "6 %"
resistance = "90 mohm"
family = "air core"
thermal_resistance = "2 K/W"
[inductor.Lwork.rating]
current_rms = "40 A"
voltage_peak = "600 V"
temperature = "130 degC"

[resistor.Rwork]
between = ["cold", "ground"]
value = "0.8 ohm"
tolerance = "25 %"
[resistor.Rwork.rating]
dissipation = "400 W"

[state.cold-workpiece]
kind = "operating"
change = { "resistor.Rwork.value" = "0.6 ohm" }

[state.shorted-turns]
kind = "fault"
change = { "inductor.Lwork.value" = "11 uH" }
"""

HEAD = 'title = "t"\nderating = "uniform-80"\n'


def drive(name: str, first: str, second: str, level: str = 'peak = "1 V"', more: str = "") -> str:
    """A drive between two nodes."""
    return f'[drive.{name}]\nbetween = ["{first}", "{second}"]\n{level}\nfrequency = "1 kHz"\n{more}\n'


def part(kind: str, name: str, first: str, second: str, more: str = "") -> str:
    """A capacitor, inductor or resistor between two nodes."""
    value = {"capacitor": "1 uF", "inductor": "1 mH", "resistor": "1 ohm"}[kind]
    return f'[{kind}.{name}]\nbetween = ["{first}", "{second}"]\nvalue = "{value}"\n{more}\n'


def transformer(name: str, primary: tuple[str, str], secondary: tuple[str, str], turns: str = "[2, 1]") -> str:
    """An ideal transformer."""
    return (
        f'[transformer.{name}]\nprimary = ["{primary[0]}", "{primary[1]}"]\n'
        f'secondary = ["{secondary[0]}", "{secondary[1]}"]\nturns = {turns}\n'
    )


TANK = HEAD + drive("d", "in", "ground") + part("inductor", "L", "in", "top", 'q = 100\nq_at = "1 kHz"')
TANK += part("capacitor", "C", "top", "ground")
"""A drive, a coil and a capacitor in series: valid as it stands."""

"""Least resistance of a copper winding over frequency, from its geometry: wire length, section and skin effect.

The loss that turns and layers cause in each other comes on top and isn't in here, so this damps no more than the real
winding does: it serves voltages and currents, not heat.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from stresscheck.circuit.curves import LossCurve
from stresscheck.physics.copper import COPPER_RESISTIVITY, dc_resistance, winding_length, wire_area
from stresscheck.physics.skin import round_wire_ratio, skin_depth

HERTZ = np.geomspace(1.0, 1e10, 401)
"""Frequencies between which straight lines on log-log axes are drawn."""
CHORD = 2e-3
"""Relative share taken off: between its points the curve lies below the straight line by less than this."""


def missing_for_winding(part: Any) -> list[str]:
    """Keys that are needed for the resistance of a winding and aren't declared."""
    winding = part.winding
    wanted = {"turns": part.turns or winding.turns, "winding.coil_diameter": winding.coil_diameter}
    return [key for key, value in wanted.items() if value is None]


def winding_curve(owner: str, part: Any, factor: float = 1.0) -> LossCurve:
    """Resistance over frequency [ohm] times a factor (its temperature), of the winding declared in an inductor.

    rho l/(n A) times the Bessel form of a round wire, of each strand where there are several. l: turns times the mean
    circumference, with the pitch where a length is declared. Source: circuit theory; L4 and L5 of the relations.
    """
    winding = part.winding
    turns = float(part.turns or winding.turns)
    diameter = float(winding.wire_diameter if winding.wire_diameter is not None else winding.strand_diameter)
    pitch = 0.0 if winding.length is None else float(winding.length) * (winding.layers or 1) / turns
    wire = winding_length(turns, float(winding.coil_diameter), pitch)
    ohm = float(dc_resistance(wire, wire_area(diameter, float(winding.strands or 1))))
    ratio = round_wire_ratio(0.5 * diameter, skin_depth(COPPER_RESISTIVITY, HERTZ))
    return LossCurve(owner, HERTZ, factor * (1.0 - CHORD) * ohm * ratio, factor * ohm)

"""All stresses of all parts of a network, from the sizes of everything in it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.circuit.network import Network
from stresscheck.stress.capacitor import capacitor_stress
from stresscheck.stress.drive import drive_stress
from stresscheck.stress.inductor import inductor_stress
from stresscheck.stress.resistor import resistor_stress
from stresscheck.stress.seen import PartSeen, peak, rms
from stresscheck.stress.sharing import SINGLE, Share
from stresscheck.stress.sizes import Sizes

Key = tuple[str, str]
"""(part, quantity); nodes as parts named "node:NAME" with voltage_peak, voltage_rms, voltage_dc."""


@dataclass(frozen=True, slots=True)
class PartNotes:
    """What the stress functions need of a part besides its branches.

    `share`: the worst unit's share in a bank; `thermal_resistance` [K/W] and `ambient` [K], None where not declared.
    """

    kind: str
    share: Share = SINGLE
    turns: float | None = None
    core_area: float | None = None
    thermal_resistance: float | None = None
    ambient: float | None = None


def stresses(network: Network, notes: Mapping[str, PartNotes], sizes: Sizes) -> dict[Key, Floats]:
    """(part, quantity) → stress, each of shape [points]: exact from exact sizes, a bound from bounds.

    temperature [K] = ambient + R_th * dissipation, where both are declared.
    """
    groups = tuple(line.group for line in network.lines)
    places: dict[str, dict[str, int]] = {}
    for index, branch in enumerate(network.branches):
        places.setdefault(branch.part, {})[branch.role] = index
    out: dict[Key, Floats] = {}
    for name, note in notes.items():
        if note.kind == "drive":
            found = _drive(network, name, places.get(name, {}), sizes)
        else:
            found = _part(network, note, places[name], sizes, groups)
        if note.thermal_resistance is not None and note.ambient is not None:
            found["temperature"] = note.ambient + note.thermal_resistance * found["dissipation"]
        out.update({(name, quantity): value for quantity, value in found.items()})
    for index, node in enumerate(network.nodes):
        volt, dc = sizes.node[:, :, index], sizes.direct.node[:, index]
        part = f"node:{node}"
        out[(part, "voltage_peak")] = peak(dc, volt)
        out[(part, "voltage_rms")] = rms(np.zeros_like(dc), volt, groups)
        out[(part, "voltage_dc")] = dc
    return out


def _part(
    network: Network, note: PartNotes, places: dict[str, int], sizes: Sizes, groups: tuple[int, ...]
) -> dict[str, Floats]:
    axis = network.branches[places["main"]].axis
    assert axis is not None
    seen = PartSeen(
        {role: sizes.branch(index) for role, index in places.items()},
        (sizes.values[0][:, axis], sizes.values[1][:, axis]),
        sizes.omega,
        groups,
    )
    if note.kind == "capacitor":
        return capacitor_stress(seen, note.share)
    if note.kind == "inductor":
        return inductor_stress(seen, note.turns, note.core_area)
    return resistor_stress(seen, note.share)


def _drive(network: Network, name: str, places: dict[str, int], sizes: Sizes) -> dict[str, Floats]:
    """Current at the terminals: at every line for a voltage drive, at its own for a current drive."""
    index = next(i for i, source in enumerate(network.sources) if source.name == name)
    source = network.sources[index]
    lines, points = sizes.ampere.shape[0], sizes.ampere.shape[1]
    ampere = np.zeros((lines, points))
    dc = sizes.direct.terminal[:, index]
    if source.branch is not None:
        ampere = sizes.ampere[:, :, source.branch].copy()
    elif "source" in places:
        ampere = sizes.ampere[:, :, places["source"]].copy()
    ampere[source.line] = sizes.terminal[index]
    groups = tuple(line.group for line in network.lines)
    return drive_stress(ampere, dc, groups, np.abs(sizes.watt[index]))

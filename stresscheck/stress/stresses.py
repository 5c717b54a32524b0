"""All stresses of all parts of a network, from the sizes of everything in it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.circuit.laws import CapacitorLaw
from stresscheck.circuit.network import Network
from stresscheck.stress.capacitor import capacitor_stress
from stresscheck.stress.drive import drive_stress
from stresscheck.stress.energy import CIRCUIT, QUANTITY, root_energy
from stresscheck.stress.inductor import inductor_stress
from stresscheck.stress.resistor import resistor_stress
from stresscheck.stress.seen import PartSeen, peak, rms
from stresscheck.stress.sharing import SINGLE, Share
from stresscheck.stress.sizes import Sizes
from stresscheck.stress.winding_heat import Warmth

Key = tuple[str, str]
"""(part, quantity); nodes as parts named "node:NAME" with voltage_peak, voltage_rms, voltage_dc; the whole network as
"circuit" with root_energy."""


@dataclass(frozen=True, slots=True)
class PartNotes:
    """What the stress functions need of a part besides its branches.

    `share`: the worst unit's share in a bank; `thermal_resistance` [K/W] and `ambient` [K], None where not declared;
    `warmth`: surroundings of a winding.
    """

    kind: str
    share: Share = SINGLE
    turns: float | None = None
    core_area: float | None = None
    thermal_resistance: float | None = None
    ambient: float | None = None
    warmth: Warmth | None = None


def stresses(network: Network, notes: Mapping[str, PartNotes], sizes: Sizes) -> dict[Key, Floats]:
    """(part, quantity) → stress, each of shape [points]: exact from exact sizes, a bound from bounds.

    temperature [K] = ambient + R_th * dissipation, where both are declared.
    """
    groups = sizes.groups
    places: dict[str, dict[str, int]] = {}
    for index, branch in enumerate(network.branches):
        places.setdefault(branch.part, {})[branch.role] = index
    out: dict[Key, Floats] = {}
    for name, note in notes.items():
        drive = note.kind == "drive"
        found = _drive(network, name, sizes) if drive else _part(network, note, places[name], sizes, groups)
        if note.thermal_resistance is not None and note.ambient is not None and "temperature" not in found:
            found["temperature"] = note.ambient + note.thermal_resistance * found["dissipation"]
        out.update({(name, quantity): value for quantity, value in found.items()})
    for index, node in enumerate(network.nodes):
        volt, dc = sizes.node[:, :, index], sizes.direct.node[:, index]
        part = f"node:{node}"
        out[(part, "voltage_peak")] = peak(dc, sizes.node_extremes(index))
        out[(part, "voltage_rms")] = rms(np.zeros_like(dc), volt, groups)
        out[(part, "voltage_dc")] = np.abs(dc)
    out[(CIRCUIT, QUANTITY)] = root_energy(network, sizes)
    return out


def _part(
    network: Network, note: PartNotes, places: dict[str, int], sizes: Sizes, groups: tuple[int, ...]
) -> dict[str, Floats]:
    branch = network.branches[places["main"]]
    axis = branch.axis
    assert axis is not None
    seen = PartSeen(
        {role: sizes.branch(index) for role, index in places.items()},
        (sizes.values[0][:, axis], sizes.values[1][:, axis]),
        sizes.omega,
        groups,
        sizes.sines,
        branch.law.scale if isinstance(branch.law, CapacitorLaw) else 1.0,
    )
    if note.kind == "capacitor":
        return capacitor_stress(seen, note.share)
    if note.kind == "inductor":
        return inductor_stress(seen, note.turns, note.core_area, note.warmth)
    return resistor_stress(seen, note.share)


def _drive(network: Network, name: str, sizes: Sizes) -> dict[str, Floats]:
    """Current and power at a drive's terminals."""
    index = next(i for i, source in enumerate(network.sources) if source.name == name)
    return drive_stress(
        sizes.terminal[:, :, index],
        sizes.terminal_extremes(index),
        sizes.direct.terminal[:, index],
        sizes.groups,
        np.abs(sizes.watt[:, index]),
    )

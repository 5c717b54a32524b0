"""Which charges and fluxes of a network move freely, and which follow from others at every instant.

A capacitor without loss that closes a loop of such capacitors and ideal voltage drives has no voltage of its own; an
inductor that closes a cutset of inductors and current drives has no current of its own. They are `tied`; the others
are `free` and make up the state. Asked of the same network with every resistance replaced by a random one near 1 ohm,
so that the answer rests on how parts are joined and not on how large they are.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.circuit.laws import CapacitorLaw, InductorLaw, ResistorLaw
from stresscheck.circuit.network import Network
from stresscheck.circuit.tableau import Frame, all_branches, frame

SEED = 11
SINGULAR = 1e-9
"""Smallest over largest singular value below which the network of random resistances has no unique solution."""


@dataclass(frozen=True, slots=True)
class Roles:
    """Numbers of the reactive branches: `free` in the state, `tied` given by the others. `form`: their tableau."""

    form: Frame
    free: tuple[int, ...]
    tied: tuple[int, ...]

    @property
    def reactive(self) -> tuple[int, ...]:
        """Free ones, then tied ones: the order of all matrices of charge and flux."""
        return self.free + self.tied


def roles_of(network: Network, lossless: tuple[bool, ...]) -> Roles:
    """Sort the reactive branches. lossless: for each branch whether its series resistance is zero."""
    form = frame(network, all_branches(network))
    rng = np.random.default_rng(SEED)
    ohm = np.where(lossless, 0.0, rng.uniform(0.5, 1.5, len(network.branches)))
    reactive = [i for i, branch in enumerate(network.branches) if not isinstance(branch.law, ResistorLaw)]
    stand_in = dict(zip(reactive, rng.uniform(0.5, 1.5, len(reactive)), strict=True))
    free: list[int] = []
    for kind in (CapacitorLaw, InductorLaw):
        for index in (i for i in reactive if isinstance(network.branches[i].law, kind)):
            if _solvable(form, network, ohm, stand_in, [*free, index]):
                free.append(index)
    order = sorted(free)
    return Roles(form, tuple(order), tuple(i for i in reactive if i not in free))


def _solvable(form: Frame, network: Network, ohm: Floats, stand_in: dict[int, float], held: list[int]) -> bool:
    """Does the network keep a unique solution with these capacitors as voltages and inductors as currents?"""
    matrix = form.fixed.copy()
    for index, branch in enumerate(network.branches):
        row = form.row(index)
        if index in held and isinstance(branch.law, InductorLaw):
            matrix[row, :] = 0.0
            matrix[row, row] = 1.0
            continue
        matrix[row, row] -= ohm[index] if index in held or index not in stand_in else stand_in[index]
    size = np.linalg.svd(matrix, compute_uv=False)
    return bool(size[-1] > SINGULAR * size[0])

"""Which impedances a response depends on at all, by the way the network is connected.

Two branches across an ideal drive don't know of each other; a bound of one that carries the other's resonance is loose
for nothing. Whether an entry matters is asked of the same network with every impedance replaced by a random one:
what is zero there is zero for every value (with probability one), what isn't counts as mattering.
"""

from __future__ import annotations

import numpy as np

from stresscheck.arrays import Flags, Floats
from stresscheck.circuit.entries import Entry
from stresscheck.circuit.tableau import Frame

SEED = 5
ZERO = 1e-9
"""Sensitivities of the random network below this are rounding: its impedances are all near 1."""


def influence(form: Frame, found: tuple[Entry, ...], rhs: Floats, outputs: Floats) -> Flags:
    """For each output (row over the unknowns) and entry: does the response to any column of rhs depend on it?

    Shape [outputs, entries]. Sensitivity of a response to an entry at (row, column): (response to a unit excitation
    of the row) times (current of the column).
    """
    rng = np.random.default_rng(SEED)
    position = {branch: n for n, branch in enumerate(form.branches)}
    matrix = form.fixed.astype(np.complex128)
    for entry in found:
        value = rng.uniform(0.5, 1.5) + 1j * rng.uniform(-1.0, 1.0)
        if not np.any(entry.low) and not np.any(entry.high):
            value = 0.0  # an ideal drive stays one
        if entry.degree > 1:
            value *= 0.3
        for row, column in entry.places:
            matrix[form.row(position[row]), form.row(position[column])] -= value
    try:
        inverse = np.linalg.inv(matrix)
    except np.linalg.LinAlgError:
        return np.ones((len(outputs), len(found)), dtype=np.bool_)
    read, driven = outputs @ inverse, inverse @ rhs
    flags = np.zeros((len(outputs), len(found)), dtype=np.bool_)
    for number, entry in enumerate(found):
        for row, column in entry.places:
            to_output = np.abs(read[:, form.row(position[row])])
            from_drive = np.abs(driven[form.row(position[column])]).max()
            flags[:, number] |= to_output * from_drive > ZERO
    return flags

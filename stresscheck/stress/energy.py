"""Energy that the capacitors and coils of a network hold together, as the root of twice its largest value."""

from __future__ import annotations

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.circuit.laws import CapacitorLaw, ResistorLaw
from stresscheck.circuit.network import Network
from stresscheck.stress.sizes import Sizes

CIRCUIT = "circuit"
"""The name under which the whole network is asked for."""
QUANTITY = "root_energy"


def root_energy(network: Network, sizes: Sizes) -> Floats:
    """Upper bound of sqrt(2 W), W the largest stored energy in the steady state [J], shape [points].

    At one frequency W = S/4 + |sum C V^2 + L I^2|/4 at most, S = sum C |V|^2 + L |I|^2, and the second sum is at most
    S, and at most 2 sum |V||I| of the drives over omega (Tellegen's theorem). Roots of different frequencies and of the
    direct part add. Never below the true value. Source: derived.
    """
    if len(sizes.groups) > len(network.lines):
        return _by_peaks(network, sizes)
    low = sizes.omega[0]
    total = np.sqrt(2.0 * _direct(network, sizes))
    for number, line in enumerate(network.lines):
        stored = (sizes.root_var[number] ** 2).sum(axis=1) / low[number] + _mutual(network, sizes, sizes.ampere[number])
        drawn = np.zeros(len(stored))
        for index in line.sources:
            across = sizes.volt[number][:, _branch(network, index)] if _branch(network, index) is not None else np.inf
            drawn = drawn + across * sizes.terminal[number][:, index]
        if any(index not in line.sources for index in range(len(network.sources))) or network.transformers:
            drawn = np.full(len(stored), np.inf)
        total = total + np.sqrt(2.0 * (0.25 * stored + 0.25 * np.fmin(stored, 2.0 * drawn / low[number])))
    return np.asarray(total)


def _branch(network: Network, index: int) -> int | None:
    """The branch whose voltage is that of a drive's terminals."""
    source = network.sources[index]
    return source.branch if source.branch is not None else network.branch_of(source.name, "source")


def _by_peaks(network: Network, sizes: Sizes) -> Floats:
    """From the largest voltage of every capacitor and current of every coil, direct parts included."""
    count = len(network.branches)
    total = np.zeros(len(sizes.high))
    peaks = np.maximum(sizes.high, sizes.low)
    ampere = peaks[:, :count] + np.abs(sizes.direct.ampere)
    volt = peaks[:, count : 2 * count] + np.abs(sizes.direct.volt)
    for index in range(count):
        value = _value(network, sizes, index)
        if value is not None:
            capacitor = isinstance(network.branches[index].law, CapacitorLaw)
            total = total + value * (volt if capacitor else ampere)[:, index] ** 2
    return np.sqrt(total + _mutual(network, sizes, ampere))


def _direct(network: Network, sizes: Sizes) -> Floats:
    """Energy of the direct part, C V^2/2 and L I^2/2 [J]; nothing for voltages that nothing sets."""
    total = np.zeros(len(sizes.high))
    for index, branch in enumerate(network.branches):
        value = _value(network, sizes, index)
        if value is None:
            continue
        still = sizes.direct.volt if isinstance(branch.law, CapacitorLaw) else sizes.direct.ampere
        total = total + 0.5 * value * np.nan_to_num(still[:, index], posinf=np.inf) ** 2
    return np.asarray(total + 0.5 * _mutual(network, sizes, np.abs(sizes.direct.ampere)))


def _value(network: Network, sizes: Sizes, index: int) -> Floats | None:
    """Largest capacitance of the whole bank, or inductance; None for resistances."""
    branch = network.branches[index]
    if isinstance(branch.law, ResistorLaw):
        return None
    value = sizes.values[1][:, branch.axis] if branch.axis is not None else np.full(len(sizes.high), branch.fixed)
    return np.asarray(branch.law.scale * value if isinstance(branch.law, CapacitorLaw) else value)


def _mutual(network: Network, sizes: Sizes, ampere: Floats) -> Floats:
    """2 |M| |I1| |I2| of coupled coils, [points]."""
    total = np.zeros(len(ampere))
    for coupling in network.couplings:
        one, two = _value(network, sizes, coupling.first), _value(network, sizes, coupling.second)
        assert one is not None
        assert two is not None
        ends = [np.abs(values[:, coupling.axis]) for values in sizes.values]
        factor = np.maximum(*ends)
        total = total + 2.0 * factor * np.sqrt(one * two) * ampere[:, coupling.first] * ampere[:, coupling.second]
    return total

"""Which bounds of responses a list of stresses builds on, so that no others are worked out."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Protocol

import numpy as np

from stresscheck.circuit.enclosure import Need
from stresscheck.circuit.network import Network


class Stress(Protocol):
    """A stress by part and quantity."""

    @property
    def part(self) -> str: ...
    @property
    def quantity(self) -> str: ...


def needs_of(network: Network, asked: Iterable[Stress]) -> Need:
    """Rows of responses, and powers, that the stresses in `asked` are made of."""
    count, nodes = len(network.branches), len(network.nodes)
    outputs = np.zeros(2 * count + nodes + len(network.sources), dtype=np.bool_)
    watt, var = np.zeros(count, dtype=np.bool_), np.zeros(count, dtype=np.bool_)
    for stress in asked:
        if stress.part == "circuit":
            outputs[:] = watt[:] = var[:] = True
            continue
        if stress.part.startswith("node:"):
            outputs[2 * count + network.nodes.index(stress.part[5:])] = True
            continue
        for index, branch in enumerate(network.branches):
            if branch.part != stress.part and stress.quantity != "power":
                continue
            if stress.quantity in ("dissipation", "temperature", "power"):
                watt[index] = True
            if stress.quantity == "reactive_power":
                var[index] = True
            if branch.part == stress.part:
                outputs[index] = outputs[count + index] = True
    outputs[2 * count + nodes :] = True
    return Need(outputs, watt, var)

"""Nodes of a state as numbers: joined by shorted parts, and with a reference for every island."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import TYPE_CHECKING

from stresscheck.circuit.network import GROUND

if TYPE_CHECKING:
    from stresscheck.design.model import Design

REFERENCE = "ground"


class Joints:
    """Numbering of nodes. Names that mean the same joint (through a short) share a number."""

    def __init__(self, design: Design) -> None:
        self._root: dict[str, str] = {}
        for name in sorted(design.shorted):
            first, second = design.part(name).between
            self._join(first, second)
        self._number: dict[str, int] = {self._find(REFERENCE): GROUND}
        self._names: list[str] = []
        self._join_islands(design)

    @property
    def names(self) -> tuple[str, ...]:
        """Name of each numbered node; of several joined ones the first that was met."""
        return tuple(self._names)

    def pair(self, nodes: Sequence[str]) -> tuple[int, int]:
        """Numbers of a part's two nodes."""
        return self._place(nodes[0]), self._place(nodes[1])

    def inner(self, name: str) -> int:
        """A new node inside a part."""
        return self._place(name)

    def _place(self, name: str) -> int:
        root = self._find(name)
        if root not in self._number:
            self._number[root] = len(self._names)
            self._names.append(name)
        return self._number[root]

    def _find(self, name: str) -> str:
        while name in self._root:
            name = self._root[name]
        return name

    def _join(self, first: str, second: str) -> None:
        a, b = self._find(first), self._find(second)
        if a != b:
            self._root[b] = a

    def _join_islands(self, design: Design) -> None:
        """Give each island that no part connects to `ground` a reference: its first node."""
        pairs = list(_present_pairs(design))
        island: dict[str, str] = {}

        def leader(name: str) -> str:
            while island.get(name, name) != name:
                name = island[name]
            return name

        for first, second in pairs:
            a, b = leader(self._find(first)), leader(self._find(second))
            island[b] = a
        for first, _ in pairs:
            head = leader(self._find(first))
            home = leader(self._find(REFERENCE))
            if head != home:
                self._number[self._find(first)] = GROUND
                island[head] = home


def _present_pairs(design: Design) -> Iterable[tuple[str, str]]:
    """Node pairs that the present parts connect; a transformer's windings are two pairs."""
    absent = design.opened | design.shorted
    for kind in ("capacitor", "inductor", "resistor", "drive"):
        for name, part in getattr(design, kind).items():
            if name not in absent:
                yield part.between[0], part.between[1]
    for name, part in design.transformer.items():
        if name not in absent:
            yield part.primary[0], part.primary[1]
            yield part.secondary[0], part.secondary[1]

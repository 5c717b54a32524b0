"""Network: a state of a design as branches between numbered nodes, ready for the solvers.

Node -1 is the reference node `ground`. A current counts positive from the first to the second node of `between`.
"""

from __future__ import annotations

from dataclasses import dataclass

from stresscheck.circuit.axes import Axes
from stresscheck.circuit.laws import Law

GROUND = -1


@dataclass(frozen=True, slots=True)
class Branch:
    """One impedance between two nodes.

    `role` says which of a part's branches it is: "main" (the part itself), "leakage", "series_inductance",
    "parallel_capacitance", "core_loss", "source" (a drive's own resistance). `axis` is the column of its value,
    None where `fixed` holds its value. `drive` is the index of the voltage drive acting in it, if any.
    """

    part: str
    role: str
    first: int
    second: int
    law: Law
    axis: int | None
    fixed: float = 0.0
    drive: int | None = None


@dataclass(frozen=True, slots=True)
class Coupling:
    """Mutual inductance k * sqrt(L1 L2) between the main branches `first` and `second`."""

    name: str
    first: int
    second: int
    axis: int


@dataclass(frozen=True, slots=True)
class Transformer:
    """Ideal transformer: v1/n1 = v2/n2 and n1 i1 + n2 i2 = 0, each winding a pair of nodes."""

    name: str
    primary: tuple[int, int]
    secondary: tuple[int, int]
    turns: tuple[float, float]


@dataclass(frozen=True, slots=True)
class Source:
    """One drive: a voltage in its branch, or a current into `first` (out of `second`).

    `basis`: "peak" (level is a peak volt or ampere), "available_power" or "delivered_power" (level in watt).
    `phase` in radian. `line` is the index of the spectral line it drives. `dc` is its offset in volt or ampere.
    """

    name: str
    kind: str
    basis: str
    first: int
    second: int
    branch: int | None
    ohm: float
    level_axis: int
    level_scale: float
    phase: float
    line: int
    dc: float


@dataclass(frozen=True, slots=True)
class Line:
    """One frequency at which the circuit is solved: drives of the same frequency and stated phase share it.

    `group`: lines whose frequencies may coincide without a stated phase share a group; their amplitudes add,
    in RMS too, because any phase is possible.
    """

    frequency_axis: int
    sources: tuple[int, ...]
    group: int


@dataclass(frozen=True, slots=True)
class Network:
    """A solvable state of a design. Immutable; all numbers in SI."""

    axes: Axes
    nodes: tuple[str, ...]
    branches: tuple[Branch, ...]
    couplings: tuple[Coupling, ...]
    transformers: tuple[Transformer, ...]
    sources: tuple[Source, ...]
    lines: tuple[Line, ...]

    def branch_of(self, part: str, role: str = "main") -> int | None:
        """Index of a part's branch with this role, None where it has none."""
        for index, branch in enumerate(self.branches):
            if branch.part == part and branch.role == role:
                return index
        return None

    def band(self, line: Line) -> bool:
        """True where the line's frequency is a band rather than one frequency."""
        return self.axes.items[line.frequency_axis].varies

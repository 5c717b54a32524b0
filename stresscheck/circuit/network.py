"""Network: a state of a design as branches between numbered nodes, ready for the solvers.

Node -1 is the reference node `ground`. A current counts positive from the first to the second node of `between`.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Floats
from stresscheck.circuit.axes import Axes
from stresscheck.circuit.laws import TAU, Law
from stresscheck.circuit.waveform import SINE, Waveform

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
    `phase` in radian. `line` is the index of the line of its own frequency, or of its lowest harmonic. Its direct part
    is `dc` (the offset, volt or ampere) and, for a square that isn't even, its level times the waveform's mean.
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
    waveform: Waveform = SINE

    def direct_level(self, level: Floats) -> Floats:
        """Direct part [V or A] at each level of the drive: offset, and the mean of its waveform."""
        mean = self.waveform.mean
        return np.asarray(self.dc + mean * self.level_scale * level if mean else np.full_like(level, self.dc))


@dataclass(frozen=True, slots=True)
class Line:
    """One frequency at which the circuit is solved: drives of the same frequency and stated phase share it.

    `order`: times the frequency of its axis; `weights`: complex size of each source's harmonic, relative to its level
    and with its phase. `weighty`: it carries a noticeable part of some stress, so limits are read at its frequency too.

    `group`: lines whose frequencies may coincide without a stated phase share a group; their amplitudes add,
    in RMS too, because any phase is possible.
    """

    frequency_axis: int
    sources: tuple[int, ...]
    group: int
    order: int = 1
    weights: tuple[complex, ...] = ()
    weighty: bool = True

    def hertz(self, points: Floats) -> Floats:
        """Frequency at points [points, axes], [Hz]."""
        return np.asarray(self.order * points[:, self.frequency_axis])

    def omega(self, points: Floats) -> Floats:
        """Angular frequency at points [points, axes], [rad/s]."""
        return np.asarray(TAU * self.order * points[:, self.frequency_axis])


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
    left_out: float = 0.0
    """Largest part of any stress that the harmonics left out come to, at the points where that was looked at."""

    def band_of(self, line: Line) -> tuple[float, float]:
        """Lowest and highest frequency of a line [Hz]."""
        axis = self.axes.items[line.frequency_axis]
        return line.order * axis.low, line.order * axis.high

    def weighty_bands(self) -> list[tuple[float, float]]:
        """Bands [Hz] of the lines that carry a noticeable part of some stress."""
        return [self.band_of(line) for line in self.lines if line.weighty]

    def leading(self, most: int) -> tuple[Line, ...]:
        """The lowest weighty lines of each frequency, at most so many of each: those that may meet a resonance."""
        return tuple(
            line
            for course in self.courses()
            for line in [self.lines[n] for n in course if self.lines[n].weighty][:most]
        )

    def courses(self) -> tuple[tuple[int, ...], ...]:
        """Numbers of the lines that belong to one frequency: fundamentals with their harmonics."""
        homes: dict[int, list[int]] = {}
        for number, line in enumerate(self.lines):
            homes.setdefault(line.frequency_axis, []).append(number)
        return tuple(tuple(numbers) for numbers in homes.values())

    def branch_of(self, part: str, role: str = "main") -> int | None:
        """Index of a part's branch with this role, None where it has none."""
        for index, branch in enumerate(self.branches):
            if branch.part == part and branch.role == role:
                return index
        return None

    def band(self, line: Line) -> bool:
        """True where the line's frequency is a band rather than one frequency."""
        return self.axes.items[line.frequency_axis].varies

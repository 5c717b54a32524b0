"""Design (in one state) → Network: names become numbers, parts become branches."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import TYPE_CHECKING, Any

import numpy as np

from stresscheck.circuit.axes import Axes, Axis
from stresscheck.circuit.curves import LossCurve
from stresscheck.circuit.drift import drift_factors
from stresscheck.circuit.harmonics import with_harmonics
from stresscheck.circuit.joints import Joints
from stresscheck.circuit.laws import TAU, CapacitorLaw, InductorLaw, Law, ResistorLaw
from stresscheck.circuit.network import Branch, Coupling, Line, Network, Source, Transformer
from stresscheck.circuit.waveform import SINE, Waveform
from stresscheck.circuit.winding_loss import missing_for_winding, winding_curve
from stresscheck.errors import CheckError
from stresscheck.physics.copper import copper_resistance

if TYPE_CHECKING:
    from stresscheck.design.model import Design

LEVEL_SCALE = {"peak": 1.0, "rms": math.sqrt(2.0), "peak_to_peak": 0.5}


def build(design: Design, warm: Mapping[str, float] | None = None) -> Network:
    """Number the nodes, make every present part a set of branches, sort drives into spectral lines.

    warm: upper temperature [K] of parts that heat themselves; the hottest ambient for all others. Values with a
    temperature coefficient drift over what that leaves, down to the coldest ambient.

    Opened parts are left out, shorted ones join their nodes. An island without a reference gets one of its nodes
    as reference: no current flows through that, and stresses of parts don't depend on the choice.
    Raises CheckError where a loss isn't stated over the whole band of a drive.
    """
    return _Builder(design, warm or {}).network()


class _Builder:
    """Collects axes and branches in reading order; lives only inside `build`."""

    def __init__(self, design: Design, warm: Mapping[str, float]) -> None:
        self.design = design
        self.warm = warm
        self.absent = design.opened | design.shorted
        self.joints = Joints(design)
        self.axes: list[Axis] = []
        self.branches: list[Branch] = []
        # Declared losses of windings hold at 20 degC; the coldest copper damps least, so that is what rings.
        self.ambient = design.site.ambient_span()
        self.cold = 1.0 if self.ambient is None else float(copper_resistance(1.0, float(self.ambient.low)))

    def network(self) -> Network:
        for name, capacitor in self._present("capacitor"):
            self._capacitor(name, capacitor)
        for name, inductor in self._present("inductor"):
            self._inductor(name, inductor)
        for name, resistor in self._present("resistor"):
            self._resistor(name, resistor)
        couplings = self._couplings()
        sources, lines = self._drives()
        transformers = tuple(
            Transformer(
                name,
                self.joints.pair(part.primary),
                self.joints.pair(part.secondary),
                (float(part.turns[0]), float(part.turns[1])),
            )
            for name, part in self._present("transformer")
        )
        network = Network(
            Axes(tuple(self.axes)),
            self.joints.names,
            tuple(self.branches),
            couplings,
            transformers,
            sources,
            lines,
        )
        network = with_harmonics(network)
        for line in network.lines:
            for branch in self.branches:
                branch.law.check_band(*network.band_of(line))
        return network

    def _present(self, kind: str) -> list[tuple[str, Any]]:
        table = getattr(self.design, kind)
        return [(name, part) for name, part in table.items() if name not in self.absent]

    def _axis(self, path: str, span: Any) -> int:
        self.axes.append(Axis(path, float(span.low), float(span.nominal), float(span.high)))
        return len(self.axes) - 1

    def _value(self, kind: str, name: str, part: Any) -> int:
        """Axis of a part's value, its interval widened by its drift with temperature."""
        axis = self._axis(f"{kind}.{name}.value", part.span())
        if part.temperature_coefficient is not None and self.ambient is not None:
            hottest = max(float(self.ambient.high), self.warm.get(name, 0.0))
            try:
                least, most = drift_factors(float(part.temperature_coefficient), float(self.ambient.low), hottest)
            except ValueError:
                raise CheckError(f"temperature_coefficient of {name} takes its value to zero") from None
            item = self.axes[axis]
            self.axes[axis] = Axis(item.path, item.low * least, item.nominal, item.high * most)
        return axis

    def _branch(self, part: str, role: str, nodes: tuple[int, int], law: Law, fixed: float) -> None:
        self.branches.append(Branch(part, role, nodes[0], nodes[1], law, None, fixed))

    def _capacitor(self, name: str, part: Any) -> None:
        first, second = self.joints.pair(part.between)
        series, parallel = part.in_series or 1, part.in_parallel or 1
        scale = parallel / series
        factor = 1.0 / part.q if part.q is not None else part.dissipation_factor
        law = CapacitorLaw(_curve(f"dissipation_factor of {name}", factor), _curve(f"esr of {name}", part.esr), scale)
        axis = self._value("capacitor", name, part)
        inductance = part.series_inductance
        if inductance is None and part.self_resonance is not None:
            inductance = 1.0 / ((TAU * part.self_resonance) ** 2 * self.axes[axis].nominal)
        inner = second
        if inductance:
            inner = self.joints.inner(f"{name} (inside)")
            coil = InductorLaw(_curve("", None))
            self._branch(name, "series_inductance", (inner, second), coil, float(inductance) / scale)
        self.branches.append(Branch(name, "main", first, inner, law, axis))
        if part.leakage_resistance is not None:
            leak = float(part.leakage_resistance) / scale
            self._branch(name, "leakage", (first, second), ResistorLaw(), leak)

    def _inductor(self, name: str, part: Any) -> None:
        first, second = self.joints.pair(part.between)
        kappa = TAU * part.q_at / part.q if part.q is not None else 0.0
        owner = f"resistance of {name}"
        computed = part.winding is not None and not missing_for_winding(part)
        curve = winding_curve(owner, part, self.cold) if computed else _curve(owner, part.resistance, self.cold)
        law = InductorLaw(curve, self.cold * kappa)
        axis = self._value("inductor", name, part)
        self.branches.append(Branch(name, "main", first, second, law, axis))
        capacitance = part.parallel_capacitance
        if capacitance is None and part.self_resonance is not None:
            capacitance = 1.0 / ((TAU * part.self_resonance) ** 2 * self.axes[axis].nominal)
        if capacitance:
            lossless = CapacitorLaw(_curve("", None), _curve("", None))
            self._branch(name, "parallel_capacitance", (first, second), lossless, float(capacitance))
        if part.parallel_resistance is not None:
            self._branch(name, "core_loss", (first, second), ResistorLaw(), float(part.parallel_resistance))

    def _resistor(self, name: str, part: Any) -> None:
        first, second = self.joints.pair(part.between)
        scale = (part.in_series or 1) / (part.in_parallel or 1)
        inner = second
        if part.series_inductance is not None:
            inner = self.joints.inner(f"{name} (inside)")
            coil = InductorLaw(_curve("", None))
            self._branch(name, "series_inductance", (inner, second), coil, float(part.series_inductance) * scale)
        axis = self._value("resistor", name, part)
        self.branches.append(Branch(name, "main", first, inner, ResistorLaw(scale), axis))

    def _couplings(self) -> tuple[Coupling, ...]:
        place = {b.part: i for i, b in enumerate(self.branches) if b.role == "main"}
        found = []
        for name, part in self.design.coupling.items():
            if any(coil in self.absent for coil in part.of):
                continue
            axis = self._axis(f"coupling.{name}.factor", part.span())
            found.append(Coupling(name, place[part.of[0]], place[part.of[1]], axis))
        return tuple(found)

    def _drives(self) -> tuple[tuple[Source, ...], tuple[Line, ...]]:
        present = self._present("drive")
        bands = [drive.band() for _, drive in present]
        line_of, members, axes = self._lines(present, bands)
        sources = []
        for index, (name, drive) in enumerate(present):
            sources.append(self._source(index, name, drive, line_of[index]))
        groups = _groups([bands[group[0]] for group in members])
        lines = tuple(Line(axes[number], tuple(group), groups[number]) for number, group in enumerate(members))
        return tuple(sources), lines

    def _lines(self, present: list[tuple[str, Any]], bands: list[Any]) -> tuple[list[int], list[list[int]], list[int]]:
        """Drives with stated phase and the same band share a line; all others get one each."""
        line_of: list[int] = []
        members: list[list[int]] = []
        axes: list[int] = []
        shared: dict[tuple[float, float], int] = {}
        for index, (name, drive) in enumerate(present):
            key = (bands[index].low, bands[index].high)
            if drive.phase is not None and key in shared:
                line_of.append(shared[key])
                members[shared[key]].append(index)
                continue
            axes.append(self._axis(f"drive.{name}.frequency", bands[index]))
            members.append([index])
            line_of.append(len(members) - 1)
            if drive.phase is not None:
                shared[key] = len(members) - 1
        return line_of, members, axes

    def _source(self, index: int, name: str, drive: Any, line: int) -> Source:
        first, second = self.joints.pair(drive.between)
        basis, span = drive.level_span()
        level = self._axis(f"drive.{name}.{basis}", span)
        ohm = float(drive.source_resistance or 0.0)
        kind = drive.source
        branch = None
        if kind == "voltage":
            branch = len(self.branches)
            self.branches.append(Branch(name, "source", first, second, ResistorLaw(), None, ohm, drive=index))
        elif drive.source_resistance is not None:
            self._branch(name, "source", (first, second), ResistorLaw(), ohm)
        waveform = _waveform(drive)
        if waveform is not SINE and basis in ("available_power", "delivered_power"):
            raise CheckError(f"{name} is set by power and isn't a sine, so its level isn't defined")
        known = basis if basis in ("available_power", "delivered_power") else "peak"
        return Source(
            name, kind, known, first, second, branch, ohm, level, _level_scale(basis, waveform),
            math.radians(drive.phase or 0.0), line, float(drive.offset or 0.0), waveform,
        )  # fmt: skip


def _waveform(drive: Any) -> Waveform:
    """Shape of a drive's period as declared."""
    if drive.harmonics is not None:
        return Waveform("listed", listed=tuple((n, size, math.radians(phase)) for n, size, phase in drive.harmonics))
    duty = 0.5 if drive.duty is None else float(drive.duty)
    return Waveform(drive.waveform, duty) if drive.waveform != "sine" else SINE


def _level_scale(basis: str, waveform: Waveform) -> float:
    """Peak over the declared level: sqrt(2) for the rms of a sine, 1 of a square, sqrt(3) of a triangle.

    Listed harmonics are relative to a sine of the declared level.
    """
    if basis == "rms" and waveform.endless:
        return {"square": 1.0, "triangle": math.sqrt(3.0)}[waveform.kind]
    return LEVEL_SCALE.get(basis, 1.0)


def _groups(bands: list[Any]) -> list[int]:
    """Number lines so that those whose bands overlap, directly or through others, share a number."""
    group = list(range(len(bands)))
    for i, one in enumerate(bands):
        for j in range(i):
            if one.low <= bands[j].high and bands[j].low <= one.high:
                old, new = group[i], group[j]
                group = [new if g == old else g for g in group]
    return group


def _curve(owner: str, declared: Any, factor: float = 1.0) -> LossCurve:
    """Loss as declared, times a factor: nothing, one number, or a curve over frequency."""
    if declared is None:
        return LossCurve(owner, None, np.zeros(1))
    if isinstance(declared, (int, float)):
        return LossCurve(owner, None, np.array([factor * float(declared)]))
    hertz = np.array([float(x) for x, _ in declared.points])
    value = np.array([factor * float(y) for _, y in declared.points])
    return LossCurve(owner, hertz, value)

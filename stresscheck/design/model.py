"""Design: everything that one design file says, read, checked and frozen. All figures in SI."""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path
from types import MappingProxyType
from typing import Annotated, Any

from pydantic import AfterValidator, Field, PrivateAttr, model_validator

from stresscheck.design import fields as f
from stresscheck.design import shapes
from stresscheck.design.parts import (
    Capacitor,
    Coupling,
    DriveRating,
    Inductor,
    Probe,
    Resistor,
    Spacing,
    Table,
    Transformer,
)
from stresscheck.design.positions import Lines
from stresscheck.design.quantity import Quantity, Span, span_of

LEVEL = '"12 V" or "2 A"'
LEVELS = ("peak", "rms", "peak_to_peak", "available_power", "delivered_power")
PART_KINDS = ("drive", "capacitor", "inductor", "resistor", "transformer", "coupling", "spacing", "probe")
"""Tables whose names must be unique across kinds, in the order of the file's documentation."""


class Site(Table):
    """Where the circuit runs, and who can reach it."""

    ambient: f.quantity_range("kelvin") | None = None
    altitude: f.quantity("altitude") | None = None
    pollution_degree: f.count(1, 3, "a pollution degree") = 2
    reachable: f.names("nodes") | None = None
    access: f.choice("ordinary", "skilled") = "ordinary"

    def ambient_span(self) -> Span | None:
        """Coldest, middle and hottest ambient temperature [K], None where none is declared."""
        return None if self.ambient is None else span_of(self.ambient, None, None, middle="arithmetic")


class Gating(Table):
    """A drive that is switched on and off periodically."""

    on: f.quantity("second")
    period: f.quantity("second")

    @model_validator(mode="after")
    def _on_within_period(self) -> Gating:
        if not (self.on < self.period):
            raise f.fail("out-of-range", "an on time shorter than the period", "correct one of the two")
        return self


class Drive(Table):
    """A voltage drive (level in V, or by power) or a current drive (level in A)."""

    between: f.node_pair()
    peak: shapes.level("level_volt", "level_ampere", LEVEL) | None = None
    rms: shapes.level("level_volt", "level_ampere", LEVEL) | None = None
    peak_to_peak: shapes.level("level_volt", "level_ampere", LEVEL) | None = None
    available_power: f.quantity("watt") | None = None
    delivered_power: f.quantity("watt") | None = None
    frequency: f.quantity_range("drive_hertz")
    phase: f.number(-360.0, 360.0, "a phase in degrees") | None = None
    waveform: f.choice("sine", "square", "triangle") = "sine"
    harmonics: shapes.harmonics() | None = None
    duty: f.number(0.001, 0.999, "a duty") | None = None
    offset: shapes.level("signed_volt", "signed_ampere", LEVEL) | None = None
    tolerance: f.tolerance(None) | None = None
    source_resistance: f.quantity("ohm") | None = None
    gating: Gating | None = None
    any_waveform: f.flag() = False
    rating: DriveRating | None = None

    @model_validator(mode="after")
    def _one_level(self) -> Drive:
        given = [key for key in LEVELS if getattr(self, key) is not None]
        if len(given) != 1:
            words = ", ".join(LEVELS)
            raise f.fail("conflicting-keys", f"exactly one of {words}", "the basis of a level can't be left out")
        if self.available_power is not None and self.source_resistance is None:
            raise f.fail("missing-key", "source_resistance beside available_power", "add source_resistance")
        if self.offset is not None and self.offset.unit != self.level_unit:
            raise f.fail("wrong-dimension", f"an offset in {self.level_unit}", "give level and offset in one unit")
        if not (self.level_span()[1].low > 0.0):
            raise f.fail("out-of-range", "a level above zero", "a drive without level isn't one: leave it out")
        return self

    @model_validator(mode="after")
    def _one_waveform(self) -> Drive:
        if self.harmonics is not None and "waveform" in self.model_fields_set:
            raise f.fail("conflicting-keys", "either waveform or harmonics", "remove one of the two")
        if self.duty is not None and self.waveform != "square":
            raise f.fail("conflicting-keys", 'duty beside waveform = "square"', "remove duty, or name the waveform")
        return self

    @property
    def level_unit(self) -> str:
        """Unit of the level: V for drives by power too."""
        return next((getattr(self, k).unit for k in LEVELS[:3] if getattr(self, k) is not None), "V")

    @property
    def source(self) -> str:
        """ "voltage" or "current"."""
        return "current" if self.level_unit == "A" else "voltage"

    def level_span(self) -> tuple[str, Span]:
        """Basis of the level, and its smallest, nominal and largest value (V, A or W)."""
        basis = next(key for key in LEVELS if getattr(self, key) is not None)
        level: Quantity = getattr(self, basis)
        return basis, span_of(Quantity(float(level), level.text), None, self.tolerance)

    def band(self) -> Span:
        """Lowest, middle and highest frequency [Hz]."""
        return span_of(self.frequency, None, None, middle="arithmetic")


def _nothing() -> Mapping[str, Any]:
    return MappingProxyType({})


class State(Table):
    """A changed circuit: `change` maps paths to new values, or a part to "open" or "short"."""

    change: shapes.changes() = Field(default_factory=_nothing)
    kind: f.choice("operating", "fault") = "operating"
    frequency: f.quantity_range("drive_hertz") | None = None

    @model_validator(mode="after")
    def _changes_something(self) -> State:
        if not self.change and self.frequency is None:
            raise f.fail("missing-key", 'change = { "PATH" = NEW VALUE }', "say what is different in this state")
        return self


class Accept(Table):
    """A finding that named people take responsibility for until a date."""

    finding: shapes.finding_id()
    reason: f.words(1000, "a reason")
    by: f.words(200, "who takes responsibility")
    until: shapes.date()


def _frozen(value: Mapping[str, Any]) -> Mapping[str, Any]:
    return MappingProxyType(dict(value))


def _tables(model: type[Table]) -> Any:
    return Annotated[Mapping[str, model], AfterValidator(_frozen), Field(default_factory=dict)]


class Design(Table):
    """One design file. `in_state(name)` gives the circuit of a state; the file as written is the state "normal"."""

    title: f.words(200, "a title")
    revision: f.words(40, "a revision") | None = None
    derating: f.words(200, "a derating policy")
    notes: f.words(20000, "notes", lines=True) | None = None
    site: Site = Field(default_factory=Site)
    drive: _tables(Drive)
    capacitor: _tables(Capacitor)
    inductor: _tables(Inductor)
    resistor: _tables(Resistor)
    transformer: _tables(Transformer)
    coupling: _tables(Coupling)
    spacing: _tables(Spacing)
    probe: _tables(Probe)
    state: _tables(State)
    accept: _tables(Accept)

    _file: str = PrivateAttr(default="design.toml")
    _folder: Path | None = PrivateAttr(default=None)
    _sha256: str = PrivateAttr(default="")
    _opened: frozenset[str] = PrivateAttr(default=frozenset())
    _shorted: frozenset[str] = PrivateAttr(default=frozenset())
    _in_state: Mapping[str, Design] = PrivateAttr(default_factory=dict)
    _lines: Lines | None = PrivateAttr(default=None)

    @property
    def file(self) -> str:
        """Name of the file, without folders."""
        return self._file

    @property
    def folder(self) -> Path | None:
        """Folder against which paths in the file are read; None for a design from text."""
        return self._folder

    @property
    def sha256(self) -> str:
        """Hash of the file's bytes."""
        return self._sha256

    @property
    def opened(self) -> frozenset[str]:
        """Parts that are open in this state."""
        return self._opened

    @property
    def shorted(self) -> frozenset[str]:
        """Parts that are shorted in this state."""
        return self._shorted

    def line_of(self, *path: str) -> int | None:
        """Line of the file on which a key stands, or the nearest table around it; None where there is none.

        `line_of("capacitor", "Ctank", "value")`. The positions are looked up at the first call.
        """
        return None if self._lines is None else self._lines.of(path)

    @property
    def states(self) -> tuple[str, ...]:
        """Names of the states, "normal" first."""
        return ("normal", *self.state)

    def in_state(self, name: str) -> Design:
        """The circuit in one state; KeyError for an unknown one."""
        return self if name == "normal" else self._in_state[name]

    def with_fault(self, name: str, how: str) -> Design:
        """The circuit as written with one more part "open" or "short"; the file's states are left behind."""
        other = self.model_copy()
        gone = frozenset({name})
        other._opened = self._opened | gone if how == "open" else self._opened
        other._shorted = self._shorted | gone if how == "short" else self._shorted
        return other

    def kind_of(self, name: str) -> str:
        """Which table a part stands in; KeyError where there is none of this name."""
        for kind in PART_KINDS:
            if name in getattr(self, kind):
                return kind
        raise KeyError(name)

    def part(self, name: str) -> Any:
        """The part of this name; KeyError where there is none."""
        return getattr(self, self.kind_of(name))[name]

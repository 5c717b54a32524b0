"""Tables of the design file, one frozen model per kind of part. Names are the keys of the file."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from pydantic import BaseModel, ConfigDict, Field, model_validator

from stresscheck.design import fields as f
from stresscheck.design.quantity import Span, Tolerance, Value, span_of
from stresscheck.design.shapes import turns_pair


class Table(BaseModel):
    """A table of the file: unknown keys are errors, nothing changes after reading."""

    model_config = ConfigDict(extra="forbid", frozen=True, arbitrary_types_allowed=True)


class Rating(Table):
    """What the maker states. Each figure names its basis; `source` says where the figures stand."""

    source: f.words(300, "where the ratings stand") | None = None


class CapacitorRating(Rating):
    voltage_dc: f.rating("volt") | None = None
    voltage_peak: f.rating("volt") | None = None
    voltage_peak_to_peak: f.rating("volt") | None = None
    voltage_rms: f.rating("volt") | None = None
    current_peak: f.rating("ampere") | None = None
    current_rms: f.rating("ampere") | None = None
    dissipation: f.rating("watt") | None = None
    reactive_power: f.rating("var") | None = None
    slew_rate: f.rating("volt_per_second") | None = None
    temperature: f.quantity("kelvin") | None = None


class InductorRating(Rating):
    current_peak: f.rating("ampere") | None = None
    current_rms: f.rating("ampere") | None = None
    saturation_current: f.rating("ampere") | None = None
    saturation_drop: f.number(0.0, 1.0, "drop of inductance at saturation_current") | None = None
    voltage_dc: f.rating("volt") | None = None
    voltage_peak: f.rating("volt") | None = None
    voltage_rms: f.rating("volt") | None = None
    flux_density: f.rating("tesla") | None = None
    dissipation: f.rating("watt") | None = None
    temperature: f.quantity("kelvin") | None = None


class ResistorRating(Rating):
    dissipation: f.rating("watt") | None = None
    voltage_dc: f.rating("volt") | None = None
    voltage_peak: f.rating("volt") | None = None
    voltage_rms: f.rating("volt") | None = None
    pulse_energy: f.rating("joule") | None = None
    temperature: f.quantity("kelvin") | None = None


class DriveRating(Rating):
    current_peak: f.rating("ampere") | None = None
    current_rms: f.rating("ampere") | None = None
    power: f.rating("watt") | None = None


class ProbeRating(Rating):
    voltage_peak: f.rating("volt") | None = None


class Valued(Table):
    """A part with a value between two nodes."""

    between: f.node_pair()
    value: Any
    nominal: Any = None
    tolerance: Any = None
    family: f.words(80, "a family of parts") | None = None
    temperature_coefficient: f.quantity("per_kelvin") | None = None
    thermal_resistance: f.quantity("kelvin_per_watt") | None = None
    part: f.words(200, "a part of a parts file") | None = None

    @model_validator(mode="after")
    def _span_is_positive(self) -> Valued:
        if self.nominal is not None and not isinstance(self.value, tuple):
            raise f.fail("conflicting-keys", "nominal beside a value with two ends", "remove nominal, or give a range")
        span = self.span()
        if not (span.low > 0.0):
            raise f.fail("out-of-range", "a tolerance that leaves the value positive", "narrow the tolerance")
        if not (span.low <= span.nominal <= span.high):
            raise f.fail("out-of-range", "a nominal value within the range", "correct nominal or value")
        return self

    def span(self) -> Span:
        """Smallest, nominal and largest value over range and tolerance, SI."""
        value: Value = self.value
        tolerance: Tolerance | None = self.tolerance
        return span_of(value, self.nominal, tolerance)


class Capacitor(Valued):
    value: f.quantity_range("farad")
    nominal: f.quantity("farad") | None = None
    tolerance: f.tolerance("farad") | None = None
    dissipation_factor: f.loss_factor() | None = None
    esr: f.loss("loss_ohm") | None = None
    q: f.number(1.0, 1e7, "a quality factor") | None = None
    q_at: f.quantity("hertz") | None = None
    in_series: f.count(1, 10000, "units in series") | None = None
    in_parallel: f.count(1, 10000, "units in parallel") | None = None
    unit_tolerance: f.tolerance(None) | None = None
    series_inductance: f.quantity("henry") | None = None
    self_resonance: f.quantity("hertz") | None = None
    leakage_resistance: f.quantity("ohm") | None = None
    rating: CapacitorRating | None = None

    @model_validator(mode="after")
    def _losses_once(self) -> Capacitor:
        _together(self, "q", "q_at")
        _either(self, "q", "dissipation_factor")
        _either(self, "q", "esr")
        _either(self, "series_inductance", "self_resonance")
        _units_once(self)
        return self


class Winding(Table):
    """How an inductor is wound: solid wire, or strands of litz."""

    wire_diameter: f.quantity("metre") | None = None
    strands: f.count(2, 100000, "strands") | None = None
    strand_diameter: f.quantity("metre") | None = None
    turns: f.number(0.5, 1e5, "turns") | None = None
    layers: f.count(1, 1000, "layers") | None = None
    coil_diameter: f.quantity("metre") | None = None
    length: f.quantity("metre") | None = None
    turn_insulation_voltage: f.quantity("volt") | None = None
    layer_insulation_voltage: f.quantity("volt") | None = None

    @model_validator(mode="after")
    def _one_kind_of_wire(self) -> Winding:
        _together(self, "strands", "strand_diameter")
        _exactly_one(self, "wire_diameter", "strand_diameter")
        return self


class Core(Table):
    """Coefficients of the core loss P = k f^a B^b with f in Hz and B (peak) in T.

    k is in W/m^3 where `volume` is given, in W/kg where `mass` is given.
    """

    k: f.number(0.0, 1e12, "the Steinmetz coefficient k, W/m^3 beside volume, W/kg beside mass")
    a: f.number(0.5, 3.0, "the Steinmetz exponent of frequency in Hz")
    b: f.number(0.5, 5.0, "the Steinmetz exponent of peak flux density in T")
    volume: f.quantity("volume") | None = None
    mass: f.quantity("kilogram") | None = None
    source: f.words(300, "where the coefficients stand") | None = None

    @model_validator(mode="after")
    def _volume_or_mass(self) -> Core:
        _exactly_one(self, "volume", "mass")
        return self


class Inductor(Valued):
    value: f.quantity_range("henry")
    nominal: f.quantity("henry") | None = None
    tolerance: f.tolerance("henry") | None = None
    resistance: f.loss("loss_ohm") | None = None
    q: f.number(1e-3, 1e7, "a quality factor") | None = None
    q_at: f.quantity("hertz") | None = None
    winding: Winding | None = None
    parallel_resistance: f.quantity("ohm") | None = None
    parallel_capacitance: f.quantity("farad") | None = None
    self_resonance: f.quantity("hertz") | None = None
    turns: f.number(0.5, 1e5, "turns") | None = None
    core_area: f.quantity("area") | None = None
    core: Core | None = None
    rating: InductorRating | None = None

    @model_validator(mode="after")
    def _losses_once(self) -> Inductor:
        _together(self, "q", "q_at")
        _either(self, "q", "resistance")
        _either(self, "winding", "resistance")
        _either(self, "winding", "q")
        _either(self, "parallel_capacitance", "self_resonance")
        return self


class Resistor(Valued):
    value: f.quantity_range("ohm")
    nominal: f.quantity("ohm") | None = None
    tolerance: f.tolerance("ohm") | None = None
    in_series: f.count(1, 10000, "units in series") | None = None
    in_parallel: f.count(1, 10000, "units in parallel") | None = None
    unit_tolerance: f.tolerance(None) | None = None
    series_inductance: f.quantity("henry") | None = None
    rating: ResistorRating | None = None

    @model_validator(mode="after")
    def _tolerance_of_a_bank(self) -> Resistor:
        _units_once(self)
        return self


class PartsFile(Table):
    """A file of parts by name; each is read by the model of its kind, as if it stood in a design."""

    title: f.words(200, "a title")
    source: f.words(200, "where the figures stand")
    evidence: f.words(40, "how the figures were read")
    invented: f.flag() = False
    capacitor: Mapping[str, Capacitor] = Field(default_factory=dict)
    inductor: Mapping[str, Inductor] = Field(default_factory=dict)
    resistor: Mapping[str, Resistor] = Field(default_factory=dict)


class Transformer(Table):
    """An ideal transformer; magnetising and leakage inductance are inductors of the design."""

    primary: f.node_pair()
    secondary: f.node_pair()
    turns: turns_pair()


class Coupling(Table):
    """Coupling factor of two inductors, positive where both currents into the first nodes aid each other."""

    of: f.names("two inductors")
    factor: f.number_range(-1.0, 1.0, "a coupling factor")
    tolerance: f.tolerance(None) | None = None

    @model_validator(mode="after")
    def _two_coils_within_one(self) -> Coupling:
        if len(self.of) != 2 or self.of[0] == self.of[1]:
            raise f.fail("bad-coupling", "of = two different inductors", "name both coils")
        span = self.span()
        if not (-1.0 < span.low <= span.high < 1.0):
            raise f.fail("bad-coupling", "a factor between -1 and 1, tolerance included", "reduce it")
        return self

    def span(self) -> Span:
        """Smallest, nominal (middle of a range) and largest factor."""
        return span_of(self.factor, None, self.tolerance, middle="arithmetic")


class Spacing(Table):
    """A gap or a surface between two nodes."""

    between: f.node_pair()
    distance: f.quantity("metre")
    kind: f.choice("air", "surface", "board")
    field: f.choice("uneven", "even") = "uneven"
    coating: f.flag() = False


class Probe(Table):
    """A measuring probe that will be connected between two nodes."""

    between: f.node_pair()
    capacitance: f.quantity("farad")
    resistance: f.quantity("ohm") | None = None
    rating: ProbeRating | None = None


def _together(table: Table, *keys: str) -> None:
    """All of these keys, or none."""
    given = [key for key in keys if getattr(table, key) is not None]
    if given and len(given) < len(keys):
        missing = [key for key in keys if key not in given]
        raise f.fail("missing-key", f"{' and '.join(missing)} beside {' and '.join(given)}", "give both or neither")


def _exactly_one(table: Table, one: str, other: str) -> None:
    """One of these keys, not both."""
    _either(table, one, other)
    if getattr(table, one) is None and getattr(table, other) is None:
        raise f.fail("missing-key", f"{one} or {other}", "give one of the two")


def _units_once(table: Table) -> None:
    """A tolerance of units belongs to a bank of units."""
    bank = table.in_series is not None or table.in_parallel is not None  # type: ignore[attr-defined]
    if table.unit_tolerance is not None and not bank:  # type: ignore[attr-defined]
        raise f.fail("missing-key", "in_series or in_parallel beside unit_tolerance", "say how many units there are")


def _either(table: Table, one: str, other: str) -> None:
    """Not both of these keys."""
    if getattr(table, one) is not None and getattr(table, other) is not None:
        raise f.fail("conflicting-keys", f"either {one} or {other}", "remove one of the two")

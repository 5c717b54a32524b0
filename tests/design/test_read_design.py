"""What a valid design file becomes."""

from __future__ import annotations

import hashlib
import pickle
from pathlib import Path

import pytest
from bench_design import HEAD, TANK, WHOLE, drive, part, transformer
from pydantic import ValidationError

from stresscheck.design.load import load_design, read_design
from stresscheck.design.model import Drive
from stresscheck.design.parts import Capacitor, Coupling, Inductor
from stresscheck.design.quantity import Curve, Quantity, Span


def test_whole_example_reads_every_figure_in_si() -> None:
    design = read_design(WHOLE, "tank.toml")
    assert (design.title, design.revision, design.derating) == (
        "Bench induction heater, series tank",
        "B",
        "src-severe",
    )
    assert design.site.ambient_span() == Span(283.15, 298.15, 313.15)
    assert (design.site.altitude, design.site.pollution_degree, design.site.reachable) == (300.0, 2, ("in",))
    bridge = design.drive["bridge"]
    assert bridge.level_span() == ("peak", Span(12.0, 12.0, 12.0))
    assert (bridge.band(), bridge.source, bridge.source_resistance) == (Span(84e3, 88e3, 92e3), "voltage", 0.05)
    tank = design.capacitor["Ctank"]
    assert tank.span() == Span(150e-9 * 0.95, 150e-9, 150e-9 * 1.05)
    assert isinstance(tank.value, Quantity)
    assert tank.value.text == "150 nF"
    assert tank.rating is not None
    assert isinstance(tank.rating.voltage_rms, Curve)
    assert tank.rating.voltage_rms.points == ((10e3, 450.0), (85e3, 400.0), (200e3, 170.0))
    assert (tank.rating.temperature, tank.rating.source) == (378.15, "maker's data sheet, revision 3, p. 4")
    assert (tank.dissipation_factor, tank.thermal_resistance) == (0.0006, 9.0)
    assert design.inductor["Lwork"].resistance == 0.09
    assert (design.file, design.sha256) == ("tank.toml", hashlib.sha256(WHOLE.encode()).hexdigest())


def test_states_of_the_whole_example_are_changed_designs() -> None:
    design = read_design(WHOLE)
    assert design.states == ("normal", "cold-workpiece", "shorted-turns")
    assert design.in_state("normal") is design
    assert design.in_state("cold-workpiece").resistor["Rwork"].value == 0.6
    assert design.in_state("shorted-turns").inductor["Lwork"].span().nominal == 11e-6
    assert design.state["shorted-turns"].kind == "fault"
    assert design.resistor["Rwork"].value == 0.8
    with pytest.raises(KeyError):
        design.in_state("unheard-of")


def test_design_positions_name_the_line_of_a_key() -> None:
    design = read_design(WHOLE)
    lines = WHOLE.splitlines()
    line = design.line_of("capacitor", "Ctank", "rating", "voltage_rms")
    assert line is not None
    assert lines[line - 1].startswith("voltage_rms")
    assert design.line_of("capacitor", "Ctank", "esr") == lines.index("[capacitor.Ctank]") + 1


def test_part_lookup_gives_kind_and_table() -> None:
    design = read_design(WHOLE)
    assert design.kind_of("Lwork") == "inductor"
    assert design.part("Lwork") is design.inductor["Lwork"]
    with pytest.raises(KeyError):
        design.kind_of("Lw")


def test_design_changes_nothing_after_reading() -> None:
    design = read_design(WHOLE)
    with pytest.raises(ValidationError):
        design.title = "other"
    with pytest.raises(TypeError):
        design.capacitor["x"] = design.capacitor["Ctank"]  # type: ignore[index]
    with pytest.raises(TypeError):
        design.state["shorted-turns"].change["a.b"] = 1  # type: ignore[index]
    with pytest.raises(AttributeError):
        design.capacitor["Ctank"].value.text = "1 F"


@pytest.mark.parametrize("text", ["150 nF", "2 A"])
def test_quantities_survive_pickling(text: str) -> None:
    made = read_design(TANK.replace('"1 V"', '"2 A"')).drive["d"].peak if text == "2 A" else Quantity(150e-9, text)
    again = pickle.loads(pickle.dumps(made))
    assert (again, again.text, type(again)) == (made, text, type(made))


@pytest.mark.parametrize(
    ("table", "span"),
    [
        ({"value": "100 pF", "tolerance": "3 pF"}, (97e-12, 100e-12, 103e-12)),
        ({"value": "100 pF", "tolerance": ["-20 %", "+80 %"]}, (80e-12, 100e-12, 180e-12)),
        ({"value": ["10 pF", "1000 pF"]}, (10e-12, 100e-12, 1000e-12)),
        ({"value": ["10 pF", "1000 pF"], "nominal": "300 pF", "tolerance": "10 %"}, (9e-12, 300e-12, 1100e-12)),
        ({"value": ["10 pF", "20 pF"], "tolerance": "1 pF"}, (9e-12, 200e-24**0.5, 21e-12)),
    ],
)
def test_span_of_a_capacitor_covers_range_and_tolerance(table: dict[str, object], span: tuple[float, ...]) -> None:
    found = Capacitor.model_validate({"between": ["a", "b"], **table}).span()
    assert (found.low, found.nominal, found.high) == pytest.approx(span, rel=1e-12)


def test_span_of_a_coupling_covers_negative_factors() -> None:
    found = Coupling.model_validate({"of": ["a", "b"], "factor": -0.4, "tolerance": "10 %"}).span()
    assert (found.low, found.nominal, found.high) == pytest.approx((-0.44, -0.4, -0.36))


@pytest.mark.parametrize(
    ("level", "basis", "high", "source"),
    [
        ({"peak": "10 V", "tolerance": "10 %"}, "peak", 11.0, "voltage"), ({"rms": "2 A"}, "rms", 2.0, "current"),
        ({"peak_to_peak": "20 mV"}, "peak_to_peak", 0.02, "voltage"), ({"delivered_power": "100 W"}, "delivered_power", 100.0, "voltage"),
        ({"available_power": "100 W", "source_resistance": "50 ohm"}, "available_power", 100.0, "voltage"),
    ],
)  # fmt: skip
def test_drive_level_keeps_its_basis(level: dict[str, str], basis: str, high: float, source: str) -> None:
    found = Drive.model_validate({"between": ["a", "b"], "frequency": "1 kHz", **level})
    assert found.level_span()[0] == basis
    assert found.level_span()[1].high == pytest.approx(high)
    assert found.source == source


def test_keys_of_later_checks_are_read() -> None:
    coil = Inductor.model_validate({
        "between": ["a", "b"], "value": "10 uH", "turns": 12, "core_area": "1 cm^2", "parallel_resistance": "10 kohm",
        "self_resonance": "5 MHz", "temperature_coefficient": "100 ppm/K",
        "winding": {"strands": 100, "strand_diameter": "0.1 mm", "turns": 12, "layers": 1, "turn_insulation_voltage": "500 V"},
        "core": {"k": 1.5, "a": 1.4, "b": 2.5, "mass": "120 g", "source": "maker's curve"},
        "rating": {"saturation_current": "5 A", "saturation_drop": "30 %"},
    })  # fmt: skip
    assert coil.winding is not None
    assert coil.core is not None
    assert (coil.winding.strand_diameter, coil.core.mass, coil.core_area) == (1e-4, 0.12, 1e-4)
    assert coil.rating is not None
    assert coil.rating.saturation_drop == 0.3
    found = Drive.model_validate({
        "between": ["a", "b"], "frequency": "1 kHz", "peak": "1 V", "offset": "-2 V", "any_waveform": True,
        "harmonics": [[1, 1.0, 0.0], [3, 0.3, 180]], "gating": {"on": "2 ms", "period": "20 ms"},
    })  # fmt: skip
    assert found.harmonics == ((1, 1.0, 0.0), (3, 0.3, 180.0))
    assert found.offset == -2.0


def test_ambient_left_out_gives_no_temperature() -> None:
    assert read_design(TANK).site.ambient_span() is None


def _state(change: str) -> str:
    return f"[state.s]\nchange = {{ {change} }}\n"


def test_state_opened_and_shorted_parts_are_named() -> None:
    there = read_design(TANK + _state('"capacitor.C" = "short", "inductor.L" = "open"')).in_state("s")
    assert (there.opened, there.shorted) == (frozenset({"L"}), frozenset({"C"}))


@pytest.mark.parametrize(
    ("change", "gone", "there"),
    [
        ('"drive.d.rms" = "2 A"', "peak", "rms"), ('"inductor.L.resistance" = "1 ohm"', "q_at", "resistance"),
        ('"inductor.L.winding" = { wire_diameter = "1 mm" }', "q", "winding"),
    ],
)  # fmt: skip
def test_state_changed_key_replaces_its_alternatives(change: str, gone: str, there: str) -> None:
    design = read_design(TANK + _state(change)).in_state("s")
    table = design.drive["d"] if change.startswith('"drive') else design.inductor["L"]
    assert getattr(table, gone) is None
    assert getattr(table, there) is not None


def test_state_new_value_drops_the_nominal_of_a_range() -> None:
    text = TANK.replace('value = "1 uF"', 'value = ["1 uF", "9 uF"]\nnominal = "2 uF"')
    assert (
        read_design(text + _state('"capacitor.C.value" = "5 uF"')).in_state("s").capacitor["C"].span().nominal == 5e-6
    )


def test_state_frequency_applies_to_every_drive() -> None:
    text = TANK + drive("e", "top", "ground", more='source_resistance = "1 ohm"')
    there = read_design(text + '[state.s]\nfrequency = ["2 kHz", "4 kHz"]\n').in_state("s")
    assert {d.band() for d in there.drive.values()} == {Span(2e3, 3e3, 4e3)}


def test_state_rating_changes_too() -> None:
    there = read_design(TANK + _state('"capacitor.C.rating.voltage_dc" = "9 V"')).in_state("s")
    assert there.capacitor["C"].rating is not None
    assert there.capacitor["C"].rating.voltage_dc == 9.0


def test_load_design_keeps_name_and_folder(tmp_path: Path) -> None:
    file = tmp_path / "tank.toml"
    file.write_text(WHOLE.replace("\n", "\r\n"), encoding="utf-8", newline="")
    design = load_design(file)
    assert (design.file, design.folder) == ("tank.toml", tmp_path)
    assert design.sha256 == hashlib.sha256(file.read_bytes()).hexdigest()


def test_transformer_and_notes_are_read() -> None:
    text = 'notes = """two\nlines"""\n' + HEAD + drive("d", "in", "ground") + part("resistor", "R", "out", "ground")
    design = read_design(text + transformer("T", ("in", "ground"), ("out", "ground")))
    assert design.transformer["T"].turns == (2.0, 1.0)
    assert design.notes == "two\nlines"

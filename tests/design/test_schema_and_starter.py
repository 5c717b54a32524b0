"""The schema for editors takes what the reader takes; the starter file is a design."""

from __future__ import annotations

import datetime
import tomllib
from pathlib import Path
from typing import Any

import jsonschema
import pytest
from bench_design import TANK, WHOLE

from stresscheck.design.load import read_design
from stresscheck.design.schema import design_schema
from stresscheck.design.starter import starter_text
from stresscheck.errors import InputError
from stresscheck.shipped import examples_dir

EXAMPLES = sorted(examples_dir().glob("*/*.toml"))
MORE = (
    TANK
    + """
tolerance = ["-20 %", "+80 %"]
esr = { by = "frequency", points = [["1 kHz", "1 ohm"], ["2 kHz", "2 ohm"]] }
[accept.a]
finding = "C.voltage_peak@normal"
reason = "r"
by = "b"
until = 2027-01-01
[state.s]
kind = "fault"
frequency = "2 kHz"
change = { "capacitor.C" = "short" }
[spacing.S]
between = ["top", "ground"]
distance = "8 mm"
kind = "air"
[probe.P]
between = ["top", "ground"]
capacitance = "8 pF"
rating = { voltage_peak = { by = "frequency", points = [["1 MHz", "2 kV"], ["10 MHz", "500 V"]] } }
[inductor.M]
between = ["in", "ground"]
value = ["1 mH", "2 mH"]
rating = { saturation_current = "5 A", saturation_drop = "30 %" }
[coupling.k]
of = ["L", "M"]
factor = [0.05, 0.3]
[capacitor.V]
between = ["top", "ground"]
part = "generic-vacuum-variable"
"""
)
BROKEN = [
    ('value = "1 uF"', "value = 1"), ('value = "1 uF"', 'value = "uF"'), ('peak = "1 V"', 'peek = "1 V"'),
    ('between = ["top", "ground"]', 'between = ["top"]'), ("q = 100", "q = true"), ("[capacitor.C]", '[capacitor."C C"]'),
    ("derating", "deratin"), ('frequency = "1 kHz"', "frequency = 1000"), ("[drive.d]", "[drive]"),
]  # fmt: skip


def _validator() -> Any:
    schema = design_schema()
    jsonschema.Draft202012Validator.check_schema(schema)
    return jsonschema.Draft202012Validator(schema)


def _plain(raw: Any) -> Any:
    """Dates as editors show them to a schema: as text."""
    if isinstance(raw, dict):
        return {key: _plain(value) for key, value in raw.items()}
    return raw.isoformat() if isinstance(raw, datetime.date) else raw


@pytest.mark.parametrize(
    "text",
    [WHOLE, TANK, MORE, starter_text(), *(p.read_text(encoding="utf-8") for p in EXAMPLES)],
    ids=lambda t: t[:30],
)
def test_schema_takes_every_design_that_the_reader_takes(text: str) -> None:
    read_design(text)
    assert list(_validator().iter_errors(_plain(tomllib.loads(text)))) == []


@pytest.mark.parametrize(("line", "instead"), BROKEN)
def test_schema_refuses_what_an_editor_should_underline(line: str, instead: str) -> None:
    text = TANK.replace(line, instead, 1)
    with pytest.raises(InputError):
        read_design(text)
    assert list(_validator().iter_errors(_plain(tomllib.loads(text)))) != []


def test_schema_has_one_table_for_each_kind_and_no_choice_between_tables() -> None:
    schema = design_schema()
    assert not {"oneOf", "anyOf", "allOf"} & set(schema)
    for kind in ("drive", "capacitor", "inductor", "resistor", "transformer", "coupling", "spacing", "probe", "state"):
        table = schema["properties"][kind]["additionalProperties"]["$ref"].removeprefix("#/$defs/")
        assert schema["$defs"][table]["additionalProperties"] is False
        assert not {"oneOf", "anyOf", "allOf"} & set(schema["$defs"][table])


def test_schema_never_offers_null() -> None:
    assert "'type': 'null'" not in str(design_schema())


def test_schema_quantities_say_unit_and_give_an_example_that_the_reader_takes() -> None:
    value = design_schema()["$defs"]["Capacitor"]["properties"]["value"]["anyOf"][0]
    assert "in F" in value["description"]
    assert read_design(TANK.replace('"1 uF"', f'"{value["examples"][0]}"')).capacitor["C"].value == 330e-9


def test_starter_loads_and_says_that_it_is_invented(tmp_path: Path) -> None:
    design = read_design(starter_text())
    assert "(invented)" in design.title
    assert len(design.states) >= 3
    assert "invented" in starter_text().splitlines()[1]
    for part in (*design.capacitor.values(), *design.inductor.values()):
        assert part.rating is not None
        assert part.rating.source == "invented"

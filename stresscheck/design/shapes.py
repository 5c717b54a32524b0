"""Field types that only a few keys need: levels in V or A, harmonics, turns, dates, changes, ids of findings."""

from __future__ import annotations

import datetime
import math
import re
from collections.abc import Mapping
from types import MappingProxyType
from typing import Annotated, Any

from pydantic import PlainValidator, WithJsonSchema
from pydantic_core import PydanticCustomError

from stresscheck.design.fields import PATTERN, WANTED, fail, is_name, read_quantity
from stresscheck.design.quantity import Level

_FINDING = re.compile(r"([A-Za-z0-9_-]{1,40})\.([a-z_]{1,40})@([A-Za-z0-9_-]{1,40})(/[a-z-]{1,20})?")


def level(volt: str, ampere: str, example: str) -> Any:
    """Field type of a level in V or in A: the unit says which."""
    expected = f"a voltage or a current such as {example}"

    def validate(raw: Any) -> Level:
        if isinstance(raw, str):
            for name in (volt, ampere):
                try:
                    read = read_quantity(raw, WANTED[name])
                    return Level(read, raw, WANTED[name].unit)
                except PydanticCustomError as error:
                    told = dict(error.context or {})
                    if told["code"] != "wrong-dimension":
                        wanted = told["expected"] if told["code"] == "out-of-range" else expected
                        raise fail(told["code"], wanted, told["repair"]) from None
            raise fail("wrong-dimension", expected, "write it in V or in A")
        if isinstance(raw, (int, float)) and not isinstance(raw, bool):
            raise fail("bad-quantity", expected, f'write number and unit as text, for instance "{raw} V"')
        raise fail("wrong-type", expected, "write it as text in quotation marks")

    schema = {
        "type": "string",
        "pattern": PATTERN,
        "description": "a level, text with a unit: in V for a voltage drive, in A for a current drive",
        "examples": ["12 V", "2 A"],
    }
    return Annotated[Level, PlainValidator(validate), WithJsonSchema(schema)]


def _is_number(raw: Any) -> bool:
    return isinstance(raw, (int, float)) and not isinstance(raw, bool) and math.isfinite(raw)


def harmonics() -> Any:
    """Field type of harmonics: [[order, relative size, phase in degrees], …]."""
    expected = "harmonics = [[1, 1.0, 0.0], …]: order, relative size, phase in degrees"

    def validate(raw: Any) -> tuple[tuple[int, float, float], ...]:
        if not isinstance(raw, list) or not 0 < len(raw) <= 200:
            raise fail("wrong-type", expected, "write a list of one to 200 harmonics")
        found: list[tuple[int, float, float]] = []
        for item in raw:
            if not isinstance(item, list) or len(item) != 3 or not all(_is_number(x) for x in item):
                raise fail("wrong-type", expected, "give three plain numbers for each harmonic")
            order, size, phase = item
            if not isinstance(order, int) or not 1 <= order <= 1000 or not 0 <= size <= 1e3 or abs(phase) > 360:
                repair = "order is whole, from 1 to 1000; size is from 0 to 1000; phase is within 360 degrees"
                raise fail("out-of-range", expected, repair)
            found.append((order, float(size), float(phase)))
        if len({order for order, _, _ in found}) < len(found):
            raise fail("conflicting-keys", "every order once", "add the two harmonics of the same order")
        if not any(size > 0.0 for _, size, _ in found):
            raise fail("out-of-range", "a harmonic with a size above zero", "correct the sizes")
        return tuple(found)

    item = {"type": "array", "items": {"type": "number"}, "minItems": 3, "maxItems": 3}
    schema = {"type": "array", "items": item, "minItems": 1, "maxItems": 200, "description": expected}
    return Annotated[tuple[tuple[int, float, float], ...], PlainValidator(validate), WithJsonSchema(schema)]


def turns_pair() -> Any:
    """Field type of the turns of a transformer, primary and secondary."""
    expected = "turns = [primary, secondary], two numbers above 0"

    def validate(raw: Any) -> tuple[float, float]:
        if not isinstance(raw, list) or len(raw) != 2 or not all(_is_number(n) for n in raw):
            raise fail("wrong-type", expected, "write for instance [16, 2]")
        if not all(1e-3 <= n <= 1e6 for n in raw):
            raise fail("out-of-range", f"{expected}, at most a million", "swap a winding's nodes to turn its sense")
        return float(raw[0]), float(raw[1])

    number = {"type": "number", "exclusiveMinimum": 0, "maximum": 1e6}
    schema = {"type": "array", "items": number, "minItems": 2, "maxItems": 2, "description": expected}
    return Annotated[tuple[float, float], PlainValidator(validate), WithJsonSchema(schema)]


def date() -> Any:
    """Field type of a date, written as a date of TOML or as text."""
    expected = "a date such as 2027-03-01"

    def validate(raw: Any) -> datetime.date:
        if isinstance(raw, str) and re.fullmatch("[0-9]{4}-[0-9]{2}-[0-9]{2}", raw):
            try:
                return datetime.date.fromisoformat(raw)
            except ValueError:
                raise fail("out-of-range", expected, "name a day of the calendar") from None
        if isinstance(raw, datetime.datetime) or not isinstance(raw, datetime.date):
            raise fail("wrong-type", expected, "write year, month and day")
        return raw

    schema = {"type": "string", "format": "date", "description": expected}
    return Annotated[datetime.date, PlainValidator(validate), WithJsonSchema(schema)]


def changes() -> Any:
    """Field type of a state's changes: paths in quotation marks, and what each becomes."""

    def validate(raw: Any) -> Mapping[str, Any]:
        expected = 'changes such as { "resistor.R1.value" = "2 ohm" }'
        if not isinstance(raw, Mapping):
            raise fail("wrong-type", expected, "write a table of paths")
        if any("." not in path for path in raw):
            raise fail("wrong-type", expected, "write each path whole, in quotation marks")
        return MappingProxyType(dict(raw))

    schema = {
        "type": "object",
        "minProperties": 1,
        "propertyNames": {"pattern": r"^[a-z]+\.[A-Za-z0-9_-]+(\.[a-z_]+)*$"},
        "description": 'path = new value, or a part = "open" or "short"',
        "examples": [{"resistor.R1.value": "2 ohm"}, {"capacitor.C1": "short"}],
    }
    return Annotated[Mapping[str, Any], PlainValidator(validate), WithJsonSchema(schema)]


def finding_id() -> Any:
    """Field type of the id of a finding: PART.QUANTITY@STATE, with /EVENT where it isn't steady."""
    expected = "the id of a finding such as Ctank.voltage_peak@normal"

    def validate(raw: Any) -> str:
        if not isinstance(raw, str):
            raise fail("wrong-type", expected, "write it in quotation marks")
        if _FINDING.fullmatch(raw) is None:
            raise fail("bad-text", expected, "copy it from the review: PART.QUANTITY@STATE")
        return raw

    schema = {"type": "string", "pattern": f"^{_FINDING.pattern}$", "description": expected}
    return Annotated[str, PlainValidator(validate), WithJsonSchema(schema)]


def part_and_state(finding: str) -> tuple[str, str]:
    """Part and state that the id of a finding names."""
    match = _FINDING.fullmatch(finding)
    if match is None or not is_name(match.group(1)):
        raise ValueError(f"no id of a finding: {finding!r}")
    return match.group(1), match.group(3)

"""Field types of the design file: how each kind of entry is read, what it accepts, and what an error says."""

from __future__ import annotations

import math
from collections.abc import Callable
from itertools import pairwise
from typing import Annotated, Any

from pydantic import PlainValidator, WithJsonSchema
from pydantic_core import PydanticCustomError

from stresscheck.design.quantity import Curve, Quantity, Tolerance
from stresscheck.units import UnitError, Wanted, parse

Reader = Callable[[Any], Any]
PATTERN = r"^ *[+-]?([0-9]+\.?[0-9]*|\.[0-9]+)([eE][+-]?[0-9]{1,3})? ?[^0-9 ]\S* *$"
"""Form of a quantity for editors: a number, an optional space, a unit."""

WANTED = {
    name: Wanted(what, unit, low, high, example, absolute)
    for name, what, unit, low, high, example, absolute in (
        ("farad", "a capacitance", "F", 1e-16, 1e3, "330 nF", False),
        ("henry", "an inductance", "H", 1e-12, 1e4, "22 uH", False),
        ("ohm", "a resistance", "ohm", 1e-9, 1e15, "50 mohm", False),
        ("loss_ohm", "a loss resistance", "ohm", 1e-9, 1e6, "50 mohm", False),
        ("volt", "a voltage", "V", 1e-9, 1e8, "400 V", False),
        ("ampere", "a current", "A", 1e-12, 1e7, "30 A", False),
        ("level_volt", "a level", "V", 1e-9, 1e6, "12 V", False),
        ("level_ampere", "a level", "A", 1e-12, 1e6, "2 A", False),
        ("watt", "a power", "W", 1e-12, 1e9, "100 W", False),
        ("var", "a reactive power", "var", 1e-9, 1e10, "20 kvar", False),
        ("hertz", "a frequency", "Hz", 1e-3, 1e12, "85 kHz", False),
        ("drive_hertz", "a drive frequency", "Hz", 0.1, 1e12, "85 kHz", False),
        ("second", "a time", "s", 1e-12, 1e7, "20 ms", False),
        ("metre", "a length", "m", 1e-7, 1e4, "12 mm", False),
        ("altitude", "an altitude", "m", -500.0, 20000.0, "300 m", False),
        ("area", "an area", "m^2", 1e-10, 1e2, "120 mm^2", False),
        ("volume", "a volume", "m^3", 1e-12, 1e2, "18 cm^3", False),
        ("kelvin", "a temperature", "K", 1.0, 3000.0, "40 degC", True),
        ("kelvin_per_watt", "a thermal resistance", "K/W", 1e-6, 1e6, "9 K/W", False),
        ("per_kelvin", "a temperature coefficient", "ppm/K", -0.1, 0.1, "-150 ppm/K", False),
        ("volt_per_second", "a slew rate", "V/s", 1e-3, 1e15, "100 V/us", False),
        ("tesla", "a flux density", "T", 1e-9, 1e2, "300 mT", False),
        ("joule", "an energy", "J", 1e-12, 1e9, "5 J", False),
        ("kilogram", "a mass", "kg", 1e-7, 1e5, "120 g", False),
        ("signed_volt", "an offset", "V", -1e6, 1e6, "160 V", False),
        ("signed_ampere", "an offset", "A", -1e6, 1e6, "2 A", False),
        ("fraction", "a fraction", "%", 0.0, 1.0, "30 %", False),
    )
}

"""What each kind of field takes. The bounds are wide on purpose; they catch MV for mV, mHz for MHz, Mohm for mohm."""


def fail(code: str, expected: str, repair: str) -> PydanticCustomError:
    """An error of ours, carried through pydantic to the list of problems."""
    return PydanticCustomError("stresscheck", "{code}", {"code": code, "expected": expected, "repair": repair})


def read_quantity(raw: Any, wanted: Wanted) -> Quantity:
    """A text with a unit → SI; a bare number is an error that says which unit to add."""
    if isinstance(raw, bool) or not isinstance(raw, str):
        expected = f'{wanted.what} such as "{wanted.example}"'
        if isinstance(raw, (int, float)) and not isinstance(raw, bool):
            raise fail("bad-quantity", expected, f'write number and unit as text, for instance "{raw} {wanted.unit}"')
        raise fail("wrong-type", expected, "write it as text in quotation marks")
    try:
        return Quantity(parse(raw, wanted), raw)
    except UnitError as problem:
        raise fail(problem.code, problem.expected, problem.repair) from None


def read_number(raw: Any, low: float, high: float, what: str) -> Quantity:
    """A plain number within [low, high]; a text with % counts too."""
    expected = f"{what}, a plain number from {low:g} to {high:g}"
    if isinstance(raw, str):
        wanted = Wanted(what, "", low, high, f"{max(low, 0.001):g}")
        try:
            return Quantity(parse(raw, wanted), raw)
        except UnitError as problem:
            raise fail(problem.code, expected, problem.repair) from None
    if isinstance(raw, bool) or not isinstance(raw, (int, float)):
        raise fail("wrong-type", expected, "write a number without quotation marks")
    if not (low <= raw <= high) or not math.isfinite(raw):
        raise fail("out-of-range", expected, "check the figure")
    return Quantity(float(raw), str(raw))


def _reads(name: str) -> Reader:
    return lambda raw: read_quantity(raw, WANTED[name])


def _schema(name: str) -> dict[str, Any]:
    wanted = WANTED[name]
    return {
        "type": "string",
        "pattern": PATTERN,
        "description": f"{wanted.what}, text with a unit, in {wanted.unit} or with a prefix",
        "examples": [wanted.example],
    }


def quantity(name: str) -> Any:
    """Field type of a quantity."""
    return Annotated[Quantity, PlainValidator(_reads(name)), WithJsonSchema(_schema(name))]


def _number_schema(low: float, high: float, what: str) -> dict[str, Any]:
    """A number; text counts too, for figures written in percent."""
    return {
        "type": ["number", "string"],
        "minimum": low,
        "maximum": high,
        "description": f"{what}, {low:g} to {high:g}",
    }


def number(low: float, high: float, what: str) -> Any:
    """Field type of a plain number."""
    schema = _number_schema(low, high, what)
    return Annotated[Quantity, PlainValidator(lambda raw: read_number(raw, low, high, what)), WithJsonSchema(schema)]


def value_or_range(read: Reader, schema: dict[str, Any]) -> Any:
    """Field type of one value, or a pair of them in increasing order."""

    def validate(raw: Any) -> Any:
        if not isinstance(raw, list):
            return read(raw)
        if len(raw) != 2:
            raise fail("wrong-type", "one value, or a list of two: from, to", "write [from, to]")
        low, high = read(raw[0]), read(raw[1])
        if not (low <= high):
            raise fail("out-of-range", "a range from the smaller to the larger value", "swap the two")
        return low if low == high else (low, high)

    both = {"anyOf": [schema, {"type": "array", "items": schema, "minItems": 2, "maxItems": 2}]}
    return Annotated[Any, PlainValidator(validate), WithJsonSchema(both)]


def quantity_range(name: str) -> Any:
    """Field type of a quantity or a range of it."""
    return value_or_range(_reads(name), _schema(name))


def number_range(low: float, high: float, what: str) -> Any:
    """Field type of a plain number or a range of it."""
    schema = _number_schema(low, high, what)
    return value_or_range(lambda raw: read_number(raw, low, high, what), schema)


def read_curve(raw: Any, read: Reader, axes: tuple[str, ...]) -> Curve:
    """A table with `by` and `points`."""
    shape = '{ by = "frequency", points = [["10 kHz", …], …] }'
    if set(raw) != {"by", "points"} or raw["by"] not in axes:
        allowed = " or ".join(f'"{axis}"' for axis in axes)
        raise fail("wrong-type", f"a curve {shape} with by = {allowed}", "write exactly the keys by and points")
    points = raw["points"]
    if not isinstance(points, list) or len(points) < 2 or not all(isinstance(p, list) and len(p) == 2 for p in points):
        raise fail("wrong-type", "at least two points, each a list of two", f"write {shape}")
    x = WANTED["hertz" if raw["by"] == "frequency" else "kelvin"]
    found = tuple((read_quantity(a, x), read(b)) for a, b in points)
    if any(not (one[0] < two[0]) for one, two in pairwise(found)):
        raise fail("out-of-range", f"points in order of increasing {raw['by']}", "sort the points, each once")
    return Curve(raw["by"], found)


def or_curve(read: Reader, schema: dict[str, Any], axes: tuple[str, ...]) -> Any:
    """Field type of one value or a curve over one of `axes`."""

    def validate(raw: Any) -> Any:
        return read_curve(raw, read, axes) if isinstance(raw, dict) else read(raw)

    point = {"type": "array", "minItems": 2, "maxItems": 2}
    curve = {
        "type": "object",
        "description": "a curve: points of increasing frequency or temperature, each with its value",
        "properties": {"by": {"enum": list(axes)}, "points": {"type": "array", "minItems": 2, "items": point}},
        "required": ["by", "points"],
        "additionalProperties": False,
    }
    return Annotated[Any, PlainValidator(validate), WithJsonSchema({"anyOf": [schema, curve]})]


def rating(name: str) -> Any:
    """Field type of a rating: one quantity, or a curve over frequency or temperature."""
    return or_curve(_reads(name), _schema(name), ("frequency", "temperature"))


def loss(name: str) -> Any:
    """Field type of a loss that may vary with frequency: one quantity, or a curve over frequency."""
    return or_curve(_reads(name), _schema(name), ("frequency",))


def loss_factor() -> Any:
    """Field type of a loss factor: one number, or a curve over frequency."""
    schema = _number_schema(0.0, 1.0, "a loss factor, tan delta")
    return or_curve(lambda raw: read_number(raw, 0.0, 1.0, "a loss factor"), schema, ("frequency",))


def tolerance(name: str | None) -> Any:
    """Field type of a tolerance: "5 %", ["-20 %", "+80 %"], or absolute in the unit of the value."""

    def one(raw: Any, low: float) -> tuple[float, bool]:
        share = Wanted("a tolerance", "%", low, 10.0, "5 %")
        if isinstance(raw, str) and name is not None:
            try:
                return parse(raw, share), False
            except UnitError as problem:
                if problem.code not in ("wrong-dimension", "unknown-unit"):
                    raise fail(problem.code, problem.expected, problem.repair) from None
                whole = WANTED[name]
                absolute = Wanted("a tolerance", whole.unit, -whole.high, whole.high, "5 %")
                return float(read_quantity(raw, absolute)), True
        return float(read_quantity(raw, share)), False

    def validate(raw: Any) -> Tolerance:
        expected = 'a tolerance such as "5 %" or ["-20 %", "+80 %"]'
        if isinstance(raw, list):
            if len(raw) != 2:
                raise fail("wrong-type", expected, "write one text, or a list of two")
            (low, first), (high, second) = one(raw[0], -1.0), one(raw[1], -1.0)
            if first != second or not (low <= 0.0 <= high) or (not first and low <= -1.0):
                raise fail("out-of-range", expected, "write a negative and a positive deviation of one kind")
            return Tolerance(low, high, first, f"{raw[0]} … {raw[1]}")
        size, absolute = one(raw, 0.0)
        if size < 0.0 or (not absolute and size >= 1.0):
            raise fail("out-of-range", expected, "write a size below 100 %, without a sign")
        return Tolerance(-size, size, absolute, raw)

    text = {"type": "string", "pattern": PATTERN, "description": "a tolerance", "examples": ["5 %", "3 pF"]}
    schema = {"anyOf": [text, {"type": "array", "items": text, "minItems": 2, "maxItems": 2}]}
    return Annotated[Tolerance, PlainValidator(validate), WithJsonSchema(schema)]


def choice(*words: str) -> Any:
    """Field type of one of a few words."""

    def validate(raw: Any) -> str:
        if raw not in words:
            raise fail("wrong-type", " or ".join(f'"{word}"' for word in words), "write one of these")
        return str(raw)

    return Annotated[str, PlainValidator(validate), WithJsonSchema({"enum": list(words)})]


def count(least: int, most: int, what: str) -> Any:
    """Field type of a whole number."""

    def validate(raw: Any) -> int:
        if isinstance(raw, bool) or not isinstance(raw, int) or not (least <= raw <= most):
            raise fail("wrong-type", f"{what}, a whole number from {least} to {most}", "check the figure")
        return raw

    schema = {"type": "integer", "minimum": least, "maximum": most, "description": what}
    return Annotated[int, PlainValidator(validate), WithJsonSchema(schema)]


def flag() -> Any:
    """Field type of true or false."""

    def validate(raw: Any) -> bool:
        if not isinstance(raw, bool):
            raise fail("wrong-type", "true or false", "write it without quotation marks")
        return raw

    return Annotated[bool, PlainValidator(validate), WithJsonSchema({"type": "boolean"})]


def words(most: int, what: str, *, lines: bool = False) -> Any:
    """Field type of a text for people: at most so many characters, none of them a control character.

    lines: line feeds and tabs are allowed.
    """

    def validate(raw: Any) -> str:
        if not isinstance(raw, str):
            raise fail("wrong-type", f"{what}, a text", "write it in quotation marks")
        if not raw.strip() or len(raw) > most:
            raise fail("bad-text", f"{what} of 1 to {most} characters", "shorten it, or fill it in")
        if not printable(raw) or not (lines or not {"\n", "\t"} & set(raw)):
            raise fail("bad-text", f"{what} without control or invisible formatting characters", "remove them")
        return raw

    schema = {"type": "string", "minLength": 1, "maxLength": most, "description": what}
    return Annotated[str, PlainValidator(validate), WithJsonSchema(schema)]


def printable(text: str) -> bool:
    """True where every character can be printed; line feeds and tabs count as printable, bidi controls don't."""
    import unicodedata

    return all(c in "\n\t" or unicodedata.category(c)[0] != "C" for c in text)


def node_pair() -> Any:
    """Field type of two different node names."""

    def validate(raw: Any) -> tuple[str, str]:
        expected = 'two different nodes such as ["in", "ground"]'
        if not isinstance(raw, list) or len(raw) != 2:
            raise fail("wrong-type", expected, "write a list of two names")
        first, second = (read_name(item) for item in raw)
        if first == second:
            raise fail("bad-topology", expected, "a part joins two different nodes")
        return first, second

    item = {"type": "string", "pattern": "^[A-Za-z0-9_-]{1,40}$"}
    schema = {"type": "array", "items": item, "minItems": 2, "maxItems": 2, "description": "two different nodes"}
    return Annotated[tuple[str, str], PlainValidator(validate), WithJsonSchema(schema)]


def names(what: str) -> Any:
    """Field type of a list of names."""

    def validate(raw: Any) -> tuple[str, ...]:
        if not isinstance(raw, list):
            raise fail("wrong-type", f"a list of {what}", 'write ["one", "two"]')
        return tuple(read_name(item) for item in raw)

    return Annotated[
        tuple[str, ...], PlainValidator(validate), WithJsonSchema({"type": "array", "items": {"type": "string"}})
    ]


def read_name(raw: Any) -> str:
    """A name of a node or part: letters, digits, - and _, at most 40 characters."""
    if not isinstance(raw, str):
        raise fail("wrong-type", "a name", "write it in quotation marks")
    if not is_name(raw):
        raise fail("bad-text", "a name of letters, digits, - and _, at most 40 characters", "rename it")
    return raw


def is_name(text: str) -> bool:
    """True for a name that every report can print."""
    return 0 < len(text) <= 40 and text.isascii() and all(c.isalnum() or c in "-_" for c in text)

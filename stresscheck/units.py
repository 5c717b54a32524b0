"""The only place where text becomes an SI figure, and an SI figure text.

A quantity is one number, an optional space and one unit. The number is read as a decimal, so that "10 uF" is the
float nearest to 1e-5. The usual units come from a closed table; any other unit text that fits the grammar is asked of
pint, which is imported only then and never sees the number.
"""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from decimal import ROUND_CEILING, ROUND_FLOOR, ROUND_HALF_EVEN, Context, Decimal
from functools import lru_cache
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    import pint

LONGEST = 48
Dimension = tuple[int, int, int, int, int]
"""Exponents of m, kg, s, A, K."""

_NUMBER = re.compile(r"[+-]?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+-]?[0-9]{1,3})?")
_UNIT = re.compile(r"[A-Za-z%]+(?:\^-?[1-4])?(?:[*/][A-Za-z%]+(?:\^-?[1-4])?){0,3}")
_FOLD = str.maketrans({"\u00b5": "u", "\u03bc": "u", "\u00b7": "*", "\u22c5": "*", "\u00b2": "^2", "\u00b3": "^3"})
_OHM = re.compile("[\u03a9\u2126]")

_PREFIX = {
    "": "1", "f": "1e-15", "p": "1e-12", "n": "1e-9", "u": "1e-6", "m": "1e-3", "c": "1e-2",
    "k": "1e3", "M": "1e6", "G": "1e9", "T": "1e12",
}  # fmt: skip
_COMMON = ("", "p", "n", "u", "m", "k", "M", "G")
_BASE: dict[str, tuple[str, Dimension, tuple[str, ...]]] = {
    "V": ("1", (2, 1, -3, -1, 0), _COMMON),
    "A": ("1", (0, 0, 0, 1, 0), _COMMON),
    "W": ("1", (2, 1, -3, 0, 0), _COMMON),
    "VA": ("1", (2, 1, -3, 0, 0), ("", "m", "k", "M")),
    "var": ("1", (2, 1, -3, 0, 0), ("", "m", "k", "M")),
    "F": ("1", (-2, -1, 4, 2, 0), ("", "f", "p", "n", "u", "m")),
    "H": ("1", (2, 1, -2, -2, 0), ("", "p", "n", "u", "m")),
    "ohm": ("1", (2, 1, -3, -2, 0), _COMMON),
    "S": ("1", (-2, -1, 3, 2, 0), ("", "n", "u", "m")),
    "Hz": ("1", (0, 0, -1, 0, 0), ("", "m", "k", "M", "G")),
    "s": ("1", (0, 0, 1, 0, 0), ("", "p", "n", "u", "m")),
    "min": ("60", (0, 0, 1, 0, 0), ("",)),
    "h": ("3600", (0, 0, 1, 0, 0), ("",)),
    "J": ("1", (2, 1, -2, 0, 0), _COMMON),
    "C": ("1", (0, 0, 1, 1, 0), ("", "p", "n", "u", "m")),
    "T": ("1", (0, 1, -2, -1, 0), ("", "n", "u", "m")),
    "m": ("1", (1, 0, 0, 0, 0), ("", "n", "u", "m", "c", "k")),
    "in": ("0.0254", (1, 0, 0, 0, 0), ("",)),
    "g": ("1e-3", (0, 1, 0, 0, 0), ("", "m", "k")),
    "K": ("1", (0, 0, 0, 0, 1), ("", "m")),
    "%": ("0.01", (0, 0, 0, 0, 0), ("",)),
    "ppm": ("1e-6", (0, 0, 0, 0, 0), ("",)),
}
TABLE: dict[str, tuple[Decimal, Dimension]] = {
    prefix + name: (Decimal(_PREFIX[prefix]) * Decimal(factor), dimension)
    for name, (factor, dimension, prefixes) in _BASE.items()
    for prefix in prefixes
}
"""Every spelling that is read without pint: unit → (factor to SI, dimension)."""

ZERO_CELSIUS = Decimal("273.15")
NONE: Dimension = (0, 0, 0, 0, 0)
_KELVIN: Dimension = (0, 0, 0, 0, 1)
_EXACT = Context(prec=60)


class UnitError(ValueError):
    """A text that isn't a quantity: problem code, what was expected, and how to repair it."""

    def __init__(self, code: str, expected: str, repair: str) -> None:
        super().__init__(f"{code}: expected {expected}; {repair}")
        self.code, self.expected, self.repair = code, expected, repair


@dataclass(frozen=True, slots=True)
class Wanted:
    """What a field takes: `unit`, an example of it such as "V"; bounds of plausibility in SI, ends included.

    `what`: the field in words ("a capacitance"); `example`: a text that it takes; `absolute`: a temperature, which
    may also be written in degC.
    """

    what: str
    unit: str
    low: float
    high: float
    example: str
    absolute: bool = False


def parse(text: str, wanted: Wanted) -> float:
    """SI value of a quantity. Raises UnitError; never evaluates anything, whatever the text.

    At most 48 characters, one number in ASCII digits, one unit. Temperatures in degC become K.
    """
    expected = f'{wanted.what} such as "{wanted.example}"'
    number, unit = _split(text, expected)
    if wanted.absolute and unit in ("degC", "\u00b0C"):
        value = float(_EXACT.add(Decimal(number), ZERO_CELSIUS))
    else:
        factor, dimension = _factor(unit, expected, bare=not unit, number=number, wanted=wanted)
        if dimension != dimension_of(wanted.unit):
            raise UnitError("wrong-dimension", expected, f"write it in {wanted.unit} or with a prefix")
        value = float(_EXACT.multiply(Decimal(number), factor))
    if not (wanted.low <= value <= wanted.high):
        limits = f"{_bound(wanted.low, wanted.unit)} to {_bound(wanted.high, wanted.unit)}"
        raise UnitError("out-of-range", f"{wanted.what} from {limits}", "check sign and prefix of the figure")
    return value


def _bound(value: float, unit: str) -> str:
    """A bound of plausibility as a text that the field would take: "1 GV", "-50 %"."""
    if unit == "K":
        return f"{value:g} K"
    if value == 0.0 or not math.isfinite(value):
        return f"{value:g} {unit}".strip()
    number, _, rest = render(value, unit).partition(" ")
    return f"{float(number):g} {rest}".strip()


def dimension_of(unit: str) -> Dimension:
    """Dimension of a unit text of the table, "" for a plain number."""
    return _unit_factor(unit)[1] if unit else NONE


def factor_of(unit: str) -> float:
    """Factor of a unit text to SI."""
    return float(_unit_factor(unit)[0]) if unit else 1.0


def _split(text: str, expected: str) -> tuple[str, str]:
    """Number and folded unit text."""
    if len(text) > LONGEST:
        raise UnitError("bad-quantity", expected, f"at most {LONGEST} characters")
    folded = _OHM.sub("ohm", text.strip(" ").translate(_FOLD))
    match = _NUMBER.match(folded)
    if match is None:
        raise UnitError("bad-quantity", expected, "write one number and one unit")
    number, rest = match.group(), folded[match.end() :]
    if rest.startswith(" "):
        rest = rest[1:]
    if "," in rest or not (rest == "" or rest == "\u00b0C" or _UNIT.fullmatch(rest)):
        hint = "use a point as decimal mark" if "," in text else "write one number and one unit"
        raise UnitError("bad-quantity", expected, hint)
    return number, rest


def _factor(unit: str, expected: str, *, bare: bool, number: str, wanted: Wanted) -> tuple[Decimal, Dimension]:
    if bare:
        if not wanted.unit:
            return Decimal(1), NONE
        raise UnitError("bad-quantity", expected, f'give the unit, for instance "{number} {wanted.unit}"')
    try:
        return _unit_factor(unit)
    except KeyError:
        raise UnitError("unknown-unit", expected, _repair(number, unit, wanted)) from None


def _repair(number: str, unit: str, wanted: Wanted) -> str:
    """What to write instead of an unknown unit; first of all the known spelling of the field's own dimension."""
    near = _near_case(unit)
    fitting = [known for known in near if TABLE[known][1] == dimension_of(wanted.unit)] or near
    if fitting:
        return "did you mean " + " or ".join(f'"{number} {known}"' for known in fitting) + "?"
    if "degC" in unit:
        return "write differences of temperature in K" if not wanted.absolute else "write degC alone, or K"
    if re.search(r"\b(rpm|rps|rad)\b", unit):
        return "write it in Hz, cycles a second: radians and turns hide a factor of 2 pi"
    return f"write it in {wanted.unit} or with a prefix"


@lru_cache(maxsize=512)
def _unit_factor(unit: str) -> tuple[Decimal, Dimension]:
    """Factor and dimension of a unit text; KeyError where it isn't known."""
    factor, dimension = Decimal(1), [0, 0, 0, 0, 0]
    if unit.count("/") > 1:
        raise KeyError(unit)
    for sign, part in ((1, piece) for piece in unit.split("/")[:1]):
        factor = _multiply(factor, dimension, part, sign)
    for part in unit.split("/")[1:]:
        factor = _multiply(factor, dimension, part, -1)
    return factor, (dimension[0], dimension[1], dimension[2], dimension[3], dimension[4])


def _multiply(factor: Decimal, dimension: list[int], product: str, sign: int) -> Decimal:
    """Take one side of a quotient into the factor and the exponents."""
    for atom in product.split("*"):
        name, _, power = atom.partition("^")
        exponent = sign * int(power or "1")
        size, kind = TABLE[name] if name in TABLE else _ask_pint(name)
        factor = _EXACT.multiply(factor, _EXACT.power(size, exponent))
        for index in range(5):
            dimension[index] += exponent * kind[index]
    return factor


@lru_cache(maxsize=1)
def registry() -> pint.UnitRegistry[Any]:
    """The one pint registry; imported at its first use."""
    import pint

    return pint.UnitRegistry()


@lru_cache(maxsize=256)
def _ask_pint(name: str) -> tuple[Decimal, Dimension]:
    """Factor and dimension of a unit outside the table, letters only; KeyError where pint doesn't know it."""
    if not re.fullmatch(r"[A-Za-z]{1,24}", name) or _near_case(name):
        raise KeyError(name)
    try:
        units = registry()
        atom = units.parse_units(name)
        base = units.Quantity(1.0, atom).to_base_units()
        two = units.Quantity(2.0, atom).to_base_units()
        exponents = {str(unit): float(str(power)) for unit, power in base.unit_items()}
        value, double = float(base.magnitude), float(two.magnitude)
    except Exception:  # pint raises errors of many kinds for texts that it can't read
        raise KeyError(name) from None
    if not exponents or not set(exponents) <= set(_PINT_BASE):
        raise KeyError(name)  # radians, turns, bits and counts would slip a factor past the check of dimensions
    if any(power != int(power) for power in exponents.values()):
        raise KeyError(name)
    if not math.isfinite(value) or value == 0.0 or abs(double - 2.0 * value) > 1e-9 * abs(value):
        raise KeyError(name)  # offsets and logarithms: no factor says what such a unit means
    m, kg, s, a, k = (int(exponents.get(unit, 0.0)) for unit in _PINT_BASE)
    return Decimal(f"{value:.15g}"), (m, kg, s, a, k)  # 15 digits: pint's float factors end in noise (ft, oz)


_PINT_BASE = ("meter", "kilogram", "second", "ampere", "kelvin")


def _near_case(unit: str) -> list[str]:
    """The known spellings that differ from this one in case only: mhz is mHz or MHz."""
    return [known for known in TABLE if known.lower() == unit.lower() and known != unit]


def to_pint(value: float, unit: str) -> pint.Quantity[Any]:
    """An SI figure as a pint quantity in `unit` (SI)."""
    return registry().Quantity(value, unit)


def from_pint(quantity: Any, unit: str) -> float:
    """SI figure of a pint quantity; raises pint's DimensionalityError where it is of another kind than `unit`."""
    return float(quantity.to(unit).magnitude)


_SHOWN = ((9, "G"), (6, "M"), (3, "k"), (0, ""), (-3, "m"), (-6, "u"), (-9, "n"), (-12, "p"))
_ROUND = {"nearest": ROUND_HALF_EVEN, "up": ROUND_CEILING, "down": ROUND_FLOOR}


def render(value: float, unit: str, digits: int = 4, toward: str = "nearest") -> str:
    """An SI figure in `unit` with a fitting prefix, `digits` significant: "412.7 V", "3.420 nF", "5.000 %".

    toward: "up" (to plus infinity) and "down" round to that side always, so that 1.0001 never reads as 1.000.
    Temperatures in K are shown in degC. Units that take no prefix (m^2, ppm/K, kg) are shown without one.
    """
    if unit == "K":
        return f"{_rounded(_decimal(value) - ZERO_CELSIUS, digits, toward)} degC"
    if value == 0.0 or not math.isfinite(value):
        return f"{value:g} {unit}".strip()
    exact = _EXACT.divide(_decimal(value), _unit_factor(unit)[0] if unit else Decimal(1))
    if not _takes_prefix(unit):
        return f"{_rounded(exact, digits, toward)} {unit}".strip()
    power, prefix = _fitting(exact)
    text = _rounded(exact.scaleb(-power), digits, toward)
    if abs(Decimal(text)) >= 1000 and power < _SHOWN[0][0]:
        power, prefix = _fitting(Decimal(text).scaleb(power))
        text = _rounded(exact.scaleb(-power), digits, toward)
    return f"{text} {prefix}{unit}"


def _decimal(value: float) -> Decimal:
    """Shortest decimal that reads back as this float."""
    return Decimal(repr(float(value)))


def _fitting(exact: Decimal) -> tuple[int, str]:
    """Power of ten and prefix that leave one to three digits before the point."""
    return next(((power, prefix) for power, prefix in _SHOWN if exact.adjusted() >= power), _SHOWN[-1])


@lru_cache(maxsize=128)
def _takes_prefix(unit: str) -> bool:
    """True where a prefix before the text multiplies the unit: V, V/s, K/W; not %, kg, m^2."""
    first = re.split(r"[*/^]", unit)[0]
    return f"{first}^" not in unit and ("k" + first in TABLE or first in ("F", "H", "C", "T", "S", "s", "K"))


def _rounded(value: Decimal, digits: int, toward: str) -> str:
    """Plain decimal text with so many significant digits."""
    if value == 0:
        return "0"
    if not -7 <= value.adjusted() <= 14:
        rounded = Context(prec=digits, rounding=_ROUND[toward]).create_decimal(value)
        return f"{rounded:.{digits - 1}e}".replace("e+", "e")
    place = value.adjusted() - digits + 1
    rounded = value.quantize(Decimal(1).scaleb(place), rounding=_ROUND[toward], context=_EXACT)
    if rounded.adjusted() > value.adjusted():
        rounded = rounded.quantize(Decimal(1).scaleb(place + 1), rounding=_ROUND[toward], context=_EXACT)
    return f"{rounded:f}"

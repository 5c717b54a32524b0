"""Every factor of the closed table against pint's, and the grammar against texts that must not be read."""

from __future__ import annotations

import math
from fractions import Fraction

import pint
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from stresscheck.units import LONGEST, TABLE, UnitError, Wanted, dimension_of, from_pint, parse, registry, to_pint

BASE = ("meter", "kilogram", "second", "ampere", "kelvin")
VOLT = Wanted("a voltage", "V", -1e12, 1e12, "400 V")
FARAD = Wanted("a capacitance", "F", 1e-16, 1e3, "330 nF")
HERTZ = Wanted("a frequency", "Hz", 1e-3, 1e12, "85 kHz")
KELVIN = Wanted("a temperature", "K", 1.0, 3000.0, "40 degC", absolute=True)
SLOPE = Wanted("a temperature coefficient", "ppm/K", -0.1, 0.1, "-150 ppm/K")
LENGTH = Wanted("a length", "m", 1e-9, 1e6, "12 mm")
PLAIN = Wanted("a factor", "", 0.0, 1.0, "0.5")


def _pint_name(unit: str) -> str:
    """pint has no VA and var under these names in every version: both are watts by dimension and size."""
    return unit.replace("VA", "W").replace("var", "W").replace("%", "percent")


@pytest.mark.parametrize("unit", sorted(TABLE))
def test_table_factor_and_dimension_are_pint_s(unit: str) -> None:
    factor, dimension = TABLE[unit]
    theirs = registry().Quantity(1.0, _pint_name(unit)).to_base_units()
    assert float(factor) == pytest.approx(theirs.magnitude, rel=1e-14, abs=0.0)
    powers = {str(name): float(power) for name, power in theirs.unit_items()}
    assert powers == {name: power for name, power in zip(BASE, dimension, strict=True) if power}


@pytest.mark.parametrize(
    ("text", "wanted", "value"),
    [
        ("10 uF", FARAD, 1e-5), ("330nF", FARAD, 330e-9), ("4.7 \u00b5F", FARAD, 4.7e-6), ("4.7 \u03bcF", FARAD, 4.7e-6),
        ("1e-9 F", FARAD, 1e-9), (" 85 kHz ", HERTZ, 85e3), ("+.5 V", VOLT, 0.5), ("-3. mV", VOLT, -0.003),
        ("40 degC", KELVIN, 313.15), ("40 \u00b0C", KELVIN, 313.15), ("300 K", KELVIN, 300.0), ("-150 ppm/K", SLOPE, -150e-6),
        ("2 %/K", SLOPE, 0.02), ("50 A*ohm", VOLT, 50.0), ("0.5", PLAIN, 0.5), ("5 %", PLAIN, 0.05), ("1 in", LENGTH, 0.0254),
    ],
)  # fmt: skip
def test_parse_usual_spelling_gives_the_nearest_float(text: str, wanted: Wanted, value: float) -> None:
    assert parse(text, wanted) == value


@pytest.mark.parametrize("sign", ["\u03a9", "\u2126"])
def test_parse_ohm_signs_read_as_ohm(sign: str) -> None:
    wanted = Wanted("a resistance", "ohm", 0.0, 1e12, "50 mohm")
    assert parse(f"4.7 k{sign}", wanted) == 4700.0


@settings(deadline=None)
@given(st.decimals(min_value="0.001", max_value="9999", places=3), st.sampled_from(["p", "n", "u", "m", ""]))
def test_parse_any_decimal_is_correctly_rounded(number: object, prefix: str) -> None:
    exact = Fraction(str(number)) * Fraction(10) ** {"p": -12, "n": -9, "u": -6, "m": -3, "": 0}[prefix]
    wanted = Wanted("a capacitance", "F", 0.0, 1e9, "330 nF")
    assert parse(f"{number} {prefix}F", wanted) == exact.numerator / exact.denominator


@pytest.mark.parametrize(
    ("text", "wanted", "value"), [("3 ft", LENGTH, 0.9144), ("2 calorie", Wanted("x", "J", 0, 1e9, "5 J"), 8.368)]
)
def test_parse_unit_outside_the_table_asks_pint(text: str, wanted: Wanted, value: float) -> None:
    assert parse(text, wanted) == pytest.approx(value, rel=1e-14)


HOSTILE = [
    "", " ", "V", "12", "1,5 V", "3.3.3 V", "1.0 +- 0.1 V", "1.0 \u00b1 0.1 V", "+10 % -20 %", "nan V", "inf V",
    "1e9**9**9 V", "9**9**9 V", "1e99999999999 V", "1e999 V", "0x10 V", "1_000 V", "1 V V", "1 V + 1 V", "1 V^99",
    "2(3) V", "__import__('os') V", "1 V/V/V/V/V/V", "1 / V", "(1) V", "\uff11 V", "\u0661 V", "1\u00a0V", "1\tV",
    "1 V\n", "1 \u202eV", "1 " + "V" * 40_000, "1" * 40_000 + " V", "1 " + "m" * 40 + "V", "1 dBV", "1 V;", "--1 V",
    "1 e5 V", "1e V", "1 unknownunit", "5 pct", "1 Vrms", "1 [V]", "1 %V", "1 V*", "1 *V", "1 V**2", "1 V^0.5",
]  # fmt: skip


@pytest.mark.parametrize("text", HOSTILE, ids=lambda text: ascii(text[:20]))
def test_parse_hostile_text_raises_a_unit_error(text: str) -> None:
    with pytest.raises(UnitError):
        parse(text, VOLT)


@pytest.mark.parametrize("text", [t for t in HOSTILE if len(t) > LONGEST])
def test_parse_long_text_is_refused_before_any_matching(text: str) -> None:
    class Watched(str):
        __slots__ = ()

        def translate(self, table: object) -> str:
            raise AssertionError("the text was looked at")

        strip = translate

    with pytest.raises(UnitError, match="at most 48"):
        parse(Watched(text), VOLT)


@pytest.mark.parametrize(
    ("text", "wanted", "code", "said"),
    [
        ("150nf", FARAD, "unknown-unit", '"150 nF"'), ("85 mhz", HERTZ, "unknown-unit", '"85 mHz" or "85 MHz"'),
        ("3000 rpm", HERTZ, "unknown-unit", "2 pi"), ("10 rad/s", HERTZ, "unknown-unit", "2 pi"),
        ("1 degC/W", Wanted("a thermal resistance", "K/W", 0, 1e6, "9 K/W"), "unknown-unit", "in K"),
        ("40 degF", KELVIN, "unknown-unit", "K"), ("12", VOLT, "bad-quantity", '"12 V"'),
        ("1,5 V", VOLT, "bad-quantity", "point"), ("5 A", VOLT, "wrong-dimension", "in V"),
        ("0.05", Wanted("a tolerance", "%", 0, 1, "5 %"), "bad-quantity", "%"), ("-300 degC", KELVIN, "out-of-range", "sign"),
        ("1 MHz", Wanted("a frequency", "Hz", 1.0, 1e5, "85 kHz"), "out-of-range", "prefix"),
    ],
)  # fmt: skip
def test_parse_error_says_what_to_write(text: str, wanted: Wanted, code: str, said: str) -> None:
    with pytest.raises(UnitError) as caught:
        parse(text, wanted)
    assert caught.value.code == code
    assert said in caught.value.repair


def test_parse_out_of_range_names_bounds_in_the_unit_of_the_field() -> None:
    with pytest.raises(UnitError) as caught:
        parse("1e6 ppm/K", SLOPE)
    assert "-100000 ppm/K to 100000 ppm/K" in caught.value.expected


@pytest.mark.parametrize("name", ["rpm", "rad", "Bq", "baud", "bit", "turn", "dBm", "degF"])
def test_dimension_of_units_with_hidden_factors_is_unknown(name: str) -> None:
    with pytest.raises(KeyError):
        dimension_of(name)


@settings(max_examples=400, deadline=None)
@given(st.text(max_size=60))
def test_parse_random_text_reads_a_finite_figure_or_raises(text: str) -> None:
    try:
        value = parse(text, VOLT)
    except UnitError:
        return
    assert math.isfinite(value)


@settings(max_examples=400, deadline=None)
@given(
    st.from_regex(
        r"[+-]?[0-9]{1,4}(\.[0-9]{1,3})?(e[+-]?[0-9]{1,3})? ?[A-Za-z%]{0,6}([*/][A-Za-z]{1,3})?", fullmatch=True
    )
)
def test_parse_text_of_the_right_form_reads_or_raises(text: str) -> None:
    try:
        value = parse(text, VOLT)
    except UnitError:
        return
    assert VOLT.low <= value <= VOLT.high


def test_pint_quantities_go_both_ways() -> None:
    assert from_pint(to_pint(0.25, "V"), "V") == 0.25
    assert from_pint(registry().Quantity(3.0, "kilovolt"), "V") == 3000.0
    with pytest.raises(pint.DimensionalityError):
        from_pint(registry().Quantity(3.0, "ampere"), "V")

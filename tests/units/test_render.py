"""Figures as text: prefix, digits, and the side to which they are rounded."""

from __future__ import annotations

from decimal import Decimal

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from stresscheck.units import TABLE, Wanted, parse, render


@pytest.mark.parametrize(
    ("value", "unit", "toward", "text"),
    [
        (412.7, "V", "nearest", "412.7 V"), (3.42e-9, "F", "nearest", "3.420 nF"), (1.0001, "V", "nearest", "1.000 V"),
        (1.0001, "V", "up", "1.001 V"), (1.0009, "V", "down", "1.000 V"), (999.96, "V", "nearest", "1.000 kV"),
        (999.91, "V", "up", "1.000 kV"), (999.99, "V", "down", "999.9 V"), (-5.0, "V", "nearest", "-5.000 V"),
        (0.0, "V", "nearest", "0 V"), (313.15, "K", "nearest", "40.00 degC"), (0.05, "%", "nearest", "5.000 %"),
        (1.2e-4, "m^2", "nearest", "0.0001200 m^2"), (1e-9, "m^3", "nearest", "1.000e-9 m^3"), (0.8, "kg", "nearest", "0.8000 kg"),
        (1.5e-4, "ppm/K", "nearest", "150.0 ppm/K"), (9e8, "V/s", "nearest", "900.0 MV/s"), (9.0, "K/W", "nearest", "9.000 K/W"),
        (20e3, "var", "nearest", "20.00 kvar"), (0.5, "", "nearest", "0.5000"), (1e-3, "ohm", "nearest", "1.000 mohm"),
    ],
)  # fmt: skip
def test_render_figure_reads_as_expected(value: float, unit: str, toward: str, text: str) -> None:
    assert render(value, unit, toward=toward) == text


def _read(text: str) -> Decimal:
    number, unit = text.split(" ")
    return Decimal(number) * TABLE[unit][0]


@settings(deadline=None)
@given(st.floats(min_value=1e-12, max_value=1e11), st.integers(2, 6))
def test_render_rounded_up_is_never_below_and_down_never_above(value: float, digits: int) -> None:
    exact = Decimal(repr(value))
    up, down = _read(render(value, "V", digits, "up")), _read(render(value, "V", digits, "down"))
    assert down <= exact <= up
    assert up - down <= exact * Decimal(10) ** (1 - digits)


@settings(deadline=None)
@given(st.floats(min_value=1e-12, max_value=1e11))
def test_render_shows_one_to_three_digits_before_the_point(value: float) -> None:
    assert 1 <= abs(Decimal(render(value, "V").split(" ")[0])) < 1000


@settings(deadline=None)
@given(st.floats(min_value=1e-10, max_value=1e9))
def test_render_text_reads_back_within_its_digits(value: float) -> None:
    assert parse(render(value, "V"), Wanted("x", "V", 0, 1e12, "1 V")) == pytest.approx(value, rel=6e-4)

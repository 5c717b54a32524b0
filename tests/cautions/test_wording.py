"""Figures in cautions: rounded up, never below the value they stand for."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from stresscheck.cautions.wording import plain_seconds, shown
from stresscheck.units import Wanted, parse


@pytest.mark.parametrize(
    ("value", "unit", "text"),
    [
        (42.4, "V", "42.4 V"),
        (42.41, "V", "42.5 V"),
        (873.2, "V", "874 V"),
        (999.91, "V", "1 kV"),
        (12.000000000000002, "V", "12 V"),
        (0.0, "V", "0 V"),
        (1.001e-9, "F", "1.01 nF"),
        (2.5e-14, "F", "0.025 pF"),
    ],
)
def test_shown_rounds_up_and_never_below(value: float, unit: str, text: str) -> None:
    assert shown(value, unit) == text


@given(st.floats(1e-12, 1e12), st.integers(2, 6))
def test_law_shown_figure_is_never_below_the_value_and_close_above(value: float, digits: int) -> None:
    read = parse(shown(value, "V", digits), Wanted("a voltage", "V", 0.0, 1e15, "1 V"))
    assert value * (1.0 - 1e-11) <= read <= value * (1.0 + 1.01 * 10.0 ** (1 - digits))


@pytest.mark.parametrize(
    ("seconds", "text"),
    [(4.321, "4.33 s"), (119.9, "120 s"), (120.0, "2 min"), (7199.0, "120 min"), (7200.1, "2.01 h")],
)
def test_plain_seconds_takes_the_unit_of_people(seconds: float, text: str) -> None:
    assert plain_seconds(seconds) == text

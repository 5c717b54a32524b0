"""Single-layer coils and wire gauges against printed tables and mpmath."""

from __future__ import annotations

import math

import mpmath
import numpy as np
import pytest

from stresscheck.physics.coils import awg_diameter, nagaoka, self_capacitance, single_layer_inductance
from stresscheck.physics.skin import MU_0

INCH = 0.0254


def _exact(shape: float) -> float:
    with mpmath.workdps(50):
        m = mpmath.mpf(shape) ** 2 / (1 + mpmath.mpf(shape) ** 2)
        k, first, second = mpmath.sqrt(m), mpmath.ellipk(m), mpmath.ellipe(m)
        bracket = (1 - m) / m * first - (1 - 2 * m) / m * second - k
        return float(4 / (3 * mpmath.pi * mpmath.sqrt(1 - m)) * bracket)


@pytest.mark.parametrize(
    ("shape", "printed"),
    [(0.25, 0.901649), (0.5, 0.818136), (1, 0.688423), (1.5, 0.595045), (2, 0.525510), (2.5, 0.471865), (3, 0.429199), (5, 0.319825)],
)  # fmt: skip
def test_nagaoka_coefficient_meets_the_table_of_o64(shape: float, printed: float) -> None:
    assert float(nagaoka(shape, 1.0)) == pytest.approx(printed, abs=1e-6)


def test_nagaoka_coefficient_over_ten_decades_meets_mpmath() -> None:
    shapes = np.geomspace(1e-6, 1e4, 101)
    exact = np.array([_exact(float(s)) for s in shapes])
    error = np.abs(nagaoka(shapes, 1.0) / exact - 1.0)
    assert np.max(error) < 1e-7
    assert np.max(error[shapes < 100.0]) < 1e-11


def test_nagaoka_coefficient_of_long_coils_approaches_1_as_printed_in_books() -> None:
    """1 - 4 D/(3 pi l) for small D/l."""
    shapes = np.array([1e-3, 1e-5])
    assert 1.0 - nagaoka(shapes, 1.0) == pytest.approx(4.0 * shapes / (3.0 * math.pi), rel=1e-3)


@pytest.mark.parametrize(("diameter", "length"), [(0.0, 1.0), (1.0, 0.0), (math.nan, 1.0), (1.0, math.inf), (2e4, 1.0)])
def test_nagaoka_coefficient_of_impossible_shapes_is_refused(diameter: float, length: float) -> None:
    with pytest.raises(ValueError, match=r"diameter|length"):
        nagaoka(diameter, length)


def test_inductance_of_o65_is_not_the_long_form() -> None:
    """200 turns, 4.00 cm across, 10.0 cm long: printed 0.632 mH by the long form, 0.53681 mH with its ends."""
    milli = 1e3 * float(single_layer_inductance(200, 0.04, 0.1))
    long_form = 1e3 * MU_0 * 200**2 * math.pi * 0.02**2 / 0.1
    assert long_form == pytest.approx(0.63165, abs=5e-6)
    assert milli == pytest.approx(0.53681, abs=5e-6)
    assert milli / long_form - 1.0 == pytest.approx(-0.15, abs=5e-3)
    assert 0.5 * long_form * 1e-3 * 30.0**2 == pytest.approx(0.2842, abs=5e-5)


def test_inductance_of_o66_meets_the_recomputed_figures() -> None:
    """20 turns, 1 cm across, 1 inch long: 1.3241 uH, the long form 1.5543, Wheeler's fit 1.3167 within its 1 %."""
    micro = 1e6 * float(single_layer_inductance(20, 0.01, INCH))
    assert micro == pytest.approx(1.3241, abs=5.1e-5)
    assert micro / float(nagaoka(0.01, INCH)) == pytest.approx(1.5543, abs=5.1e-5)
    radius = 0.005 / INCH
    wheeler = radius**2 * 20**2 / (9.0 * radius + 10.0)
    assert wheeler == pytest.approx(1.3167, abs=5.1e-5)
    assert wheeler == pytest.approx(micro, rel=1e-2)


def test_inductance_over_arrays_broadcasts_and_grows_with_the_square_of_turns() -> None:
    found = single_layer_inductance(np.array([[10.0], [20.0]]), 0.05, np.array([0.02, 0.05, 0.2]))
    assert found.shape == (2, 3)
    assert found[1] == pytest.approx(4.0 * found[0])
    assert np.all(np.diff(found, axis=1) < 0.0)


@pytest.mark.parametrize(
    ("shape", "fitted", "table"),
    [(5, 0.764, 0.81), (4.5, 0.714, 0.77), (4, 0.665, 0.72), (3.5, 0.618, 0.67), (3, 0.574, 0.61), (2.5, 0.532, 0.56),
     (2, 0.496, 0.50), (1.5, 0.469, 0.47), (1, 0.463, 0.46)],
)  # fmt: skip
def test_self_capacitance_per_centimetre_meets_fit_and_table_of_o67(shape: float, fitted: float, table: float) -> None:
    """Published tolerance of the fit against the table: -8 to +0.6 %."""
    pico = 1e12 * float(self_capacitance(0.01, 0.01 * shape))
    assert pico == pytest.approx(fitted, abs=6e-4)
    assert -0.08 <= pico / table - 1.0 <= 0.007


def test_self_capacitance_of_other_shapes_is_refused() -> None:
    with pytest.raises(ValueError, match="1 to 5 diameters"):
        self_capacitance(0.01, np.array([0.02, 0.06]))
    with pytest.raises(ValueError, match="1 to 5 diameters"):
        self_capacitance(0.01, 0.009)


@pytest.mark.parametrize(
    ("gauge", "inch", "inch_unit", "mils", "mils_unit"),
    [(-3, 0.46000, 1e-5, 211600, 1), (0, 0.32486, 1e-5, 105534, 1), (10, 0.10190, 1e-5, 10383, 1), (14, 0.06408, 1e-5, 4106.7, 0.1),
     (20, 0.03196, 1e-5, 1021.5, 0.1), (30, 0.01003, 1e-5, 100.5, 0.1), (36, 0.005, 1e-5, 25.0, 0.1)],
)  # fmt: skip
def test_wire_gauge_meets_the_recomputed_figures_of_o62(
    gauge: int, inch: float, inch_unit: float, mils: float, mils_unit: float
) -> None:
    found = float(awg_diameter(gauge)) / INCH
    assert found == pytest.approx(inch, abs=0.51 * inch_unit)
    assert (1e3 * found) ** 2 == pytest.approx(mils, abs=0.51 * mils_unit)


@pytest.mark.parametrize(
    ("gauge", "inch", "mils"),
    [(-3, "0.4600", "2.116e5"), (0, "0.3249", "1.055e5"), (10, "0.1019", "1.038e4"), (14, "0.06408", "4.107e3"),
     (20, "0.03196", "1.022e3"), (30, "0.01003", "1.005e2"), (36, "0.005000", "2.50e1")],
)  # fmt: skip
def test_wire_gauge_meets_the_printed_table_of_o62_to_its_digits(gauge: int, inch: str, mils: str) -> None:
    found = float(awg_diameter(gauge)) / INCH
    assert f"{found:.{len(inch) - 2}f}" == inch
    places = len(mils.split("e")[0]) - 2
    assert f"{(1e3 * found) ** 2:.{places}e}".replace("e+0", "e") == mils


@pytest.mark.parametrize("gauge", [-4, 57, math.nan])
def test_wire_gauge_that_does_not_exist_is_refused(gauge: float) -> None:
    with pytest.raises(ValueError, match="gauges"):
        awg_diameter(gauge)

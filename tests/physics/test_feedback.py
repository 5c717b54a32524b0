"""Hot spots: straight losses in closed form, any growing loss by halving, and no temperature in runaway."""

from __future__ import annotations

import math

import numpy as np
import pytest

from stresscheck.physics.copper import COPPER_COEFFICIENT, ROOM, copper_resistance
from stresscheck.physics.feedback import ABOVE_CEILING, RUNAWAY, SETTLED, UNKNOWN, hot_spot, hot_spot_of


def test_hot_spot_of_constant_loss_meets_o73() -> None:
    """30 W through 1.0 + 0.3 + 1.2 K/W from 50 degC: 125 degC. A rod of 0.2 m, 1 cm^2, 220 W/(m K), 3 W: 57.273."""
    spot = hot_spot(323.15, 1.0 + 0.3 + 1.2, 30.0)
    assert float(spot.kelvin) - 273.15 == pytest.approx(125.0)
    rod = hot_spot(303.15, 0.2 / (220.0 * 1e-4), 3.0)
    assert float(rod.kelvin) - 273.15 == pytest.approx(57.273, abs=5.1e-4)
    assert spot.outcome == rod.outcome == SETTLED
    assert spot.gain == 0.0


def test_hot_spot_with_growing_loss_is_the_relation() -> None:
    """tan delta = td (1 + b dT): rise P0 R/(1 - b P0 R)."""
    watt, resistance = np.array([0.5, 1.0, 2.0]), 20.0
    growth = 0.01
    spot = hot_spot(313.15, resistance, watt, growth * watt)
    assert spot.kelvin - 313.15 == pytest.approx(watt * resistance / (1.0 - growth * watt * resistance))
    assert spot.gain == pytest.approx(growth * watt * resistance)


@pytest.mark.parametrize("watt", [5.0, 5.001, 50.0])
def test_hot_spot_with_gain_from_1_on_is_runaway_and_no_number(watt: float) -> None:
    spot = hot_spot(313.15, 20.0, watt, 0.01 * watt)
    assert spot.outcome == RUNAWAY
    assert math.isnan(float(spot.kelvin))
    assert spot.gain >= 1.0


def test_hot_spot_over_a_batch_tells_the_points_apart() -> None:
    spot = hot_spot(np.array([300.0, 300.0, 300.0, math.nan]), 10.0, 1.0, np.array([0.0, 0.2, -0.1, 0.0]))
    assert spot.outcome.tolist() == [SETTLED, RUNAWAY, SETTLED, UNKNOWN]
    assert spot.kelvin[[0, 2]] == pytest.approx([310.0, 305.0])
    assert np.isnan(spot.kelvin[[1, 3]]).all()


def test_hot_spot_of_copper_is_its_own_balance() -> None:
    """Loss stated at 20 degC, ambient elsewhere: the temperature holds with the resistance that it makes."""
    square, ohm, resistance, ambient = 400.0, 0.02, 6.0, 318.15
    watt = square * ohm
    spot = hot_spot(ambient, resistance, watt, watt * COPPER_COEFFICIENT, at=ROOM)
    kelvin = float(spot.kelvin)
    assert kelvin == pytest.approx(ambient + resistance * square * float(copper_resistance(ohm, kelvin)), rel=1e-12)


@pytest.mark.parametrize(("resistance", "watt"), [(0.0, 1.0), (-1.0, 1.0), (1.0, -1.0)])
def test_hot_spot_of_impossible_sizes_is_refused(resistance: float, watt: float) -> None:
    with pytest.raises(ValueError, match="thermal resistance"):
        hot_spot(300.0, resistance, watt)


def test_hot_spot_of_a_straight_loss_meets_the_closed_form() -> None:
    slope = np.array([0.0, 0.02, 0.04, 0.049, 0.05, 0.06])
    spot = hot_spot_of(lambda t: 1.0 + slope * (t - 300.0), 300.0, 20.0, 2000.0)
    closed = hot_spot(300.0, 20.0, 1.0, slope)
    assert spot.outcome.tolist() == closed.outcome.tolist() == [SETTLED] * 4 + [RUNAWAY] * 2
    assert spot.kelvin[:4] == pytest.approx(closed.kelvin[:4], rel=1e-9)
    assert np.isnan(spot.kelvin[4:]).all()
    assert spot.gain == pytest.approx(closed.gain, rel=1e-6, abs=1e-9)


def test_hot_spot_of_an_exponential_loss_is_the_cooler_of_two_balances() -> None:
    """P = P0 exp(dT/D), rise y D: y exp(-y) = P0 R/D, so gain y, runaway from P0 R/D = 1/e on."""
    scale, resistance = 25.0, 10.0
    y = np.array([0.1, 0.5, 0.9, 0.99])
    watt = y * np.exp(-y) * scale / resistance
    spot = hot_spot_of(lambda t: watt * np.exp((t - 300.0) / scale), 300.0, resistance, 500.0)
    assert spot.outcome.tolist() == [SETTLED] * 4
    assert spot.kelvin == pytest.approx(300.0 + scale * y, rel=1e-9)
    assert spot.gain == pytest.approx(y, rel=1e-4)


@pytest.mark.parametrize("over", [1.001, 1.5, 100.0])
def test_hot_spot_of_an_exponential_loss_past_the_limit_is_runaway(over: float) -> None:
    watt = over * math.exp(-1.0) * 25.0 / 10.0
    spot = hot_spot_of(lambda t: watt * np.exp((t - 300.0) / 25.0), 300.0, 10.0, 500.0)
    assert spot.outcome.tolist() == [RUNAWAY]
    assert np.isnan(spot.kelvin).all()
    assert spot.gain[0] >= 1.0


def test_hot_spot_that_settles_beyond_the_ceiling_is_not_called_runaway() -> None:
    spot = hot_spot_of(lambda t: 50.0 + 0.0 * t, 300.0, np.array([1.0, 10.0]), 400.0)
    assert spot.outcome.tolist() == [SETTLED, ABOVE_CEILING]
    assert spot.kelvin[0] == pytest.approx(350.0)
    assert math.isnan(spot.kelvin[1])


def test_hot_spot_of_a_loss_that_grows_without_limit_is_runaway() -> None:
    spot = hot_spot_of(lambda t: np.where(t > 320.0, np.inf, 3.0), 300.0, 10.0, 400.0)
    assert spot.outcome.tolist() == [RUNAWAY]
    assert spot.gain.tolist() == [math.inf]


def test_hot_spot_of_a_curve_that_is_silent_on_the_way_is_unknown() -> None:
    def silent(kelvin: np.ndarray) -> np.ndarray:
        return np.where(kelvin > 320.0, np.nan, np.array([1.0, 3.0]))

    spot = hot_spot_of(silent, 300.0, 10.0, 400.0)
    assert spot.outcome.tolist() == [SETTLED, UNKNOWN]
    assert spot.kelvin[0] == pytest.approx(310.0)
    assert math.isnan(spot.kelvin[1])


def test_hot_spot_without_loss_is_the_ambient() -> None:
    spot = hot_spot_of(lambda t: 0.001 * (t - 300.0), 300.0, 10.0, 400.0)
    assert spot.outcome.tolist() == [SETTLED]
    assert spot.kelvin.tolist() == [300.0]


def test_hot_spot_of_an_unstable_balance_at_the_ambient_is_runaway() -> None:
    """Nothing is lost at the ambient itself, but any warmth grows."""
    spot = hot_spot_of(lambda t: 1.0 * (t - 300.0), 300.0, 10.0, 400.0)
    assert spot.outcome.tolist() == [RUNAWAY]


def test_hot_spot_with_a_ceiling_below_the_ambient_is_refused() -> None:
    with pytest.raises(ValueError, match="ceiling"):
        hot_spot_of(lambda t: 0.0 * t, 300.0, 1.0, np.array([400.0, 300.0]))

"""The three zones of a capacitor's permissible voltage: slopes, corners, empty zones, published loss examples."""

from __future__ import annotations

import math

import numpy as np
import pytest

from stresscheck.physics.capacitor_zones import (
    permissible_voltage,
    reactive_power_of_peak,
    voltage_of_reactive_power,
    zone_corners,
)

TAU = 2.0 * math.pi
PART = (1e-9, 5e-4, 5000.0, 20.0, 30.0)
"""Capacitance, tan delta, V rms, W, A rms: f1 = 0.2546 MHz, f2 = 3.581 MHz."""


def test_zone_corners_are_where_neighbouring_limits_meet() -> None:
    farad, loss, volt, watt, ampere = PART
    corners = zone_corners(*PART)
    assert float(corners.f1) == pytest.approx(watt / (TAU * farad * loss * volt**2))
    assert math.sqrt(watt / (TAU * float(corners.f1) * farad * loss)) == pytest.approx(volt)
    at_f2 = TAU * float(corners.f2) * farad
    assert math.sqrt(watt / (at_f2 * loss)) == pytest.approx(ampere / at_f2)
    assert corners.f1 < corners.f2


def test_permissible_voltage_falls_by_the_slopes_of_its_zones() -> None:
    corners = zone_corners(*PART)
    f1, f2 = float(corners.f1), float(corners.f2)
    bands = {"voltage": (f1 / 100, f1 * 0.999), "loss": (f1 * 1.001, f2 * 0.999), "current": (f2 * 1.001, f2 * 100)}
    for (zone, (low, high)), slope in zip(bands.items(), (0.0, -0.5, -1.0), strict=True):
        limit = permissible_voltage(np.geomspace(low, high, 20), *PART)
        assert set(limit.zone.tolist()) == {zone}
        slopes = np.diff(np.log(limit.volt_rms)) / np.diff(np.log(np.geomspace(low, high, 20)))
        assert slopes == pytest.approx(slope, abs=1e-9)


def test_permissible_voltage_is_continuous_at_both_corners() -> None:
    corners = zone_corners(*PART)
    for corner in (float(corners.f1), float(corners.f2)):
        below, above = (float(permissible_voltage(corner * s, *PART).volt_rms) for s in (1 - 1e-9, 1 + 1e-9))
        assert below == pytest.approx(above, rel=1e-8)


def test_permissible_voltage_with_an_empty_middle_zone_goes_from_voltage_to_current() -> None:
    part = (1e-9, 5e-4, 5000.0, 2000.0, 30.0)
    corners = zone_corners(*part)
    assert float(corners.f1) == float(corners.f2) == pytest.approx(30.0 / (TAU * 1e-9 * 5000.0))
    hertz = float(corners.f1) * np.array([0.01, 0.999, 1.001, 100.0])
    limit = permissible_voltage(hertz, *part)
    assert limit.zone.tolist() == ["voltage", "voltage", "current", "current"]
    assert limit.volt_rms[2] == pytest.approx(5000.0 / 1.001)


def test_permissible_voltage_without_frequency_is_the_voltage_rating() -> None:
    limit = permissible_voltage(0.0, *PART)
    assert limit.volt_rms == 5000.0
    assert limit.zone == "voltage"


def test_permissible_voltage_of_each_zone_fills_its_rating() -> None:
    """The smallest limit leaves no rating exceeded and one filled."""
    farad, loss, volt, watt, ampere = PART
    hertz = np.geomspace(1e3, 1e9, 200)
    limit = permissible_voltage(hertz, *PART)
    susceptance = TAU * hertz * farad
    uses = np.stack([limit.volt_rms / volt, np.sqrt(limit.volt_rms**2 * susceptance * loss / watt),
                     limit.volt_rms * susceptance / ampere])  # fmt: skip
    assert uses.max(axis=0) == pytest.approx(1.0)


@pytest.mark.parametrize("missing", [2, 3, 4])
def test_permissible_voltage_with_an_unknown_rating_uses_the_others(missing: int) -> None:
    part = [*PART]
    part[missing] = math.inf
    corners = zone_corners(*part)
    hertz = np.geomspace(1e2, 1e9, 60)
    limit = permissible_voltage(hertz, *part)
    zones = np.where(hertz < corners.f1, "voltage", np.where(hertz <= corners.f2, "loss", "current"))
    assert limit.zone.tolist() == zones.tolist()
    assert np.all(limit.volt_rms >= permissible_voltage(hertz, *PART).volt_rms)


@pytest.mark.parametrize(
    "part",
    [(1e-9, 5e-4, math.inf, math.inf, math.inf), (0.0, 5e-4, 1.0, 1.0, 1.0), (1e-9, 0.0, 1.0, 1.0, 1.0),
     (1e-9, 5e-4, math.nan, 1.0, 1.0)],
)  # fmt: skip
def test_permissible_voltage_of_impossible_parts_is_refused(part: tuple[float, ...]) -> None:
    with pytest.raises(ValueError, match=r"rated|farad|tan_delta|volt_rms"):
        permissible_voltage(1e5, *part)
    with pytest.raises(ValueError, match=r"rated|farad|tan_delta|volt_rms"):
        zone_corners(*part)


def test_permissible_voltage_over_arrays_broadcasts() -> None:
    limit = permissible_voltage(np.array([1e4, 1e6, 1e8]), 1e-9, np.array([[5e-4], [5e-3]]), 5000.0, 20.0, 30.0)
    assert limit.volt_rms.shape == limit.zone.shape == (2, 3)
    assert limit.zone[1].tolist() == ["voltage", "loss", "current"]


def test_loss_zone_of_o60_second_example_is_its_20_volts() -> None:
    """2000 pF, 10 kHz, 500 uW at 20 V: loss angle 0.5699 degrees, 79.157 ohm in series, 800 kilohm across."""
    loss = math.tan(math.radians(0.5699))
    limit = permissible_voltage(1e4, 2000e-12, loss, 1e3, 500e-6, 1.0)
    assert float(limit.volt_rms) == pytest.approx(20.0, rel=1e-4)
    assert limit.zone == "loss"
    susceptance = TAU * 1e4 * 2000e-12
    assert loss / susceptance == pytest.approx(79.157, abs=0.01)
    assert 1.0 / (loss * susceptance) / 1e3 == pytest.approx(800.0, abs=0.05)


def test_current_corner_of_o60_first_example_is_its_8_megahertz() -> None:
    """1.5 ohm and 400 pF at 8 MHz: tan delta 0.030159, Q 33.157; a loss rating of I^2 1.5 ohm binds up to there."""
    loss = TAU * 8e6 * 400e-12 * 1.5
    assert loss == pytest.approx(0.030159, abs=5.1e-7)
    assert 1.0 / loss == pytest.approx(33.157, abs=5.1e-4)
    corners = zone_corners(400e-12, 0.030159, 1e5, 1.5 * 2.0**2, 2.0)
    assert float(corners.f2) == pytest.approx(8e6, rel=2e-5)


def test_voltage_of_reactive_power_and_back_is_the_same() -> None:
    hertz = np.array([1e5, 13.56e6])
    volt = voltage_of_reactive_power(5e3, hertz, 500e-12)
    assert volt == pytest.approx(np.sqrt(5e3 / (TAU * hertz * 500e-12)))
    assert reactive_power_of_peak(math.sqrt(2.0) * volt, hertz, 500e-12) == pytest.approx(5e3)


def test_reactive_power_without_frequency_is_zero_and_its_voltage_refused() -> None:
    assert reactive_power_of_peak(100.0, 0.0, 1e-9) == 0.0
    with pytest.raises(ValueError, match="hertz"):
        voltage_of_reactive_power(1.0, 0.0, 1e-9)

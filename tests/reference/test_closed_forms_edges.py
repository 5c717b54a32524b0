"""Verdicts with ratings next to the worst case, and worst cases that a search of the test's own has to confirm."""

from __future__ import annotations

import itertools
import math

import numpy as np
import pytest
import scipy.optimize
from published import drive, inductor, resistor

from stresscheck.chain import review
from stresscheck.design.load import read_design
from stresscheck.findings.finding import Finding

TAU = 2.0 * math.pi
HERTZ, HENRY = 1e5, 50e-6
X0 = TAU * HERTZ * HENRY
FARAD = 1.0 / (TAU * HERTZ * X0)
HEAD = 'title = "tank"\nderating = "as-rated"'


def _capacitor(farad: float, tolerance: float, rated: float, name: str = "C", nodes: str = '"b", "ground"') -> str:
    return (
        f'[capacitor.{name}]\nbetween = [{nodes}]\nvalue = "{farad!r} F"\ntolerance = "{100 * tolerance!r} %"\n'
        f'rating = {{ voltage_peak = "{rated!r} V", current_rms = "1 MA" }}'
    )


def _found(*tables: str) -> dict[str, Finding]:
    record = review(read_design("\n".join([HEAD, *tables])), budget=20.0)
    return {f.id.removesuffix("@normal"): f for f in record.findings}


def _tuned_capacitor(q: float, rated: float) -> Finding:
    """Series tank across 1 V peak, C +-10 %, Q at the nominal resonance."""
    tables = [drive(HERTZ, 1.0, "peak"), resistor("R", "in", "a", X0 / q), inductor("L", "a", "b", HENRY)]
    return _found(*tables, _capacitor(FARAD, 0.1, rated))["C.voltage_peak"]


@pytest.mark.parametrize("q", [10.0, 100.0, 1e3, 1e4, 1e5])
def test_rating_above_the_bound_is_within_and_below_the_worst_is_above(q: float) -> None:
    """T2: worst V sqrt(1 + Q^2). A bound may lie up to 5 % above, so a rating 5.01 % above must be `within`."""
    worst = math.sqrt(1.0 + q * q)
    roomy = _tuned_capacitor(q, 1.0501 * worst)
    assert roomy.verdict == "within"
    assert roomy.bound is not None
    assert roomy.bound <= 1.0501 * worst
    assert _tuned_capacitor(q, 0.9999 * worst).verdict == "above-rating"


@pytest.mark.parametrize(("above", "verdict"), [(3e-7, "unproved"), (1e-4, "within")])
@pytest.mark.parametrize("q", [10.0, 100.0, 1e3, 1e4, 1e5])
def test_rating_barely_above_the_worst_is_within_only_by_the_bound(q: float, above: float, verdict: str) -> None:
    """Bounds carry a margin of 1e-6: a rating inside it isn't proved, one at 1.0001 of the worst is."""
    worst = math.sqrt(1.0 + q * q)
    finding = _tuned_capacitor(q, (1.0 + above) * worst)
    assert finding.bound is not None
    assert finding.worst == pytest.approx(worst, rel=1e-9)
    assert (finding.bound <= (1.0 + above) * worst) == (verdict == "within")
    assert finding.verdict == verdict


@pytest.mark.parametrize("q", [10.0, 100.0, 1e3, 1e4, 1e5])
def test_t1_coil_voltage_peaks_above_the_resonance(q: float) -> None:
    """T1: V_L peaks at f0 / sqrt(1 - 1/(2 Q^2)) with Q V / sqrt(1 - 1/(4 Q^2))."""
    band = f'["{0.98 * HERTZ!r} Hz", "{1.02 * HERTZ!r} Hz"]'
    across = (
        f'[drive.E]\nbetween = ["in", "ground"]\npeak = "1 V"\nfrequency = {band}\nrating = {{ current_peak = "1 MA" }}'
    )
    tables = [across, resistor("R", "in", "a", X0 / q), inductor("L", "a", "b", HENRY)]
    finding = _found(*tables, _capacitor(FARAD, 1e-12, 1e7))["L.voltage_peak"]
    top = 1.0 / math.sqrt(1.0 - 1.0 / (2.0 * q * q))
    assert finding.worst == pytest.approx(q / math.sqrt(1.0 - 1.0 / (4.0 * q * q)), rel=1e-9)
    assert finding.at is not None
    assert finding.at.hertz == pytest.approx(HERTZ * top, rel=1e-2 / q)


def test_t2_check_row_corners_hide_the_resonance() -> None:
    """T2: Q = 100, L +-10 %, C +-5 %, drive at 1.05 f0: nominal 9.7, best corner 23.1, the box reaches resonance."""
    tables = [
        drive(1.05 * HERTZ, 1.0, "peak"), resistor("R", "in", "a", X0 / 100.0),
        inductor("L", "a", "b", HENRY, 'tolerance = "10 %"'), _capacitor(FARAD, 0.05, 1e7),
    ]  # fmt: skip
    finding = _found(*tables)["C.voltage_peak"]
    assert finding.nominal == pytest.approx(9.7, abs=0.05)
    assert finding.proof is not None
    assert finding.proof.corners == pytest.approx(23.1, abs=0.05)
    # Smallest C, L tuned to it: Q X_C/X0 = 100.25, which the table rounds to 100.
    assert finding.worst == pytest.approx(100.0 / (1.05 * 0.95), rel=1e-6)


def _series_parallel(x: np.ndarray, r_load: float) -> np.ndarray:
    """|V(Cp)| for 1 V behind Rs, Ls, Cs in series into Cp beside the load, at HERTZ. x: (..., 5) factors of the values."""
    w = TAU * HERTZ
    rs, ls, cs, cp, rl = np.moveaxis(np.asarray(x) * [X0 / 200.0, HENRY, 3 * FARAD, 1.5 * FARAD, r_load], -1, 0)
    shunt = 1.0 / (1j * w * cp + 1.0 / rl)
    return np.abs(shunt / (shunt + rs + 1j * w * ls + 1.0 / (1j * w * cs)))


@pytest.mark.parametrize("ratio", [100.0, 500.0])
def test_series_parallel_tank_worst_is_what_an_evolution_finds_and_bound_holds(ratio: float) -> None:
    """Rs, Ls +-10 %, Cs, Cp +-5 %, load +-20 %: the search against differential evolution and 200,000 points.

    Values are this test's own, since the measured tables that give 81.56 and 407.8 don't state theirs.
    """
    r_load = ratio * X0
    spans = np.array([0.1, 0.1, 0.05, 0.05, 0.2])
    tables = [
        drive(HERTZ, 1.0, "peak"), resistor("Rs", "in", "a", X0 / 200.0, 'tolerance = "10 %"'),
        inductor("Ls", "a", "b", HENRY, 'tolerance = "10 %"'), _capacitor(3 * FARAD, 0.05, 1e7, "Cs", '"b", "o"'),
        _capacitor(1.5 * FARAD, 0.05, 1e7, "Cp", '"o", "ground"'), resistor("RL", "o", "ground", r_load, 'tolerance = "20 %"'),
    ]  # fmt: skip
    finding = _found(*tables)["Cp.voltage_peak"]
    assert finding.worst is not None
    assert finding.bound is not None
    assert finding.proof is not None
    evolved = scipy.optimize.differential_evolution(
        lambda x: -float(_series_parallel(x, r_load)), list(zip(1 - spans, 1 + spans, strict=True)),
        popsize=20, seed=1, maxiter=300, tol=1e-10,
    )  # fmt: skip
    points = 1.0 + spans * np.random.default_rng(2).uniform(-1.0, 1.0, (200_000, 5))
    corners = _series_parallel(1.0 + spans * np.array(list(itertools.product((-1.0, 1.0), repeat=5))), r_load)
    assert finding.proof.corners == pytest.approx(float(corners.max()), rel=1e-9)
    assert finding.worst > 2.0 * corners.max()
    assert finding.worst >= (1 - 1e-6) * max(-evolved.fun, float(_series_parallel(points, r_load).max()))
    assert finding.worst <= finding.bound <= 1.05001 * finding.worst
    values = dict(finding.at.values)
    keys = ("resistor.Rs", "inductor.Ls", "capacitor.Cs", "capacitor.Cp", "resistor.RL")
    nominal = np.array([X0 / 200.0, HENRY, 3 * FARAD, 1.5 * FARAD, r_load])
    at = np.array([values[f"{key}.value"] for key in keys]) / nominal
    assert np.all(np.abs(at - 1.0) <= spans * (1 + 1e-9))
    assert _series_parallel(at, r_load) == pytest.approx(finding.worst, rel=1e-9)

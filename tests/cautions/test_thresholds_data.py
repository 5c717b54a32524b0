"""Thresholds as data: the shipped figures in SI, and files that can't be used."""

from __future__ import annotations

from pathlib import Path

import pytest

from stresscheck.cautions.facts import Facts
from stresscheck.cautions.registry import HAZARDS, cautions_for
from stresscheck.cautions.thresholds import load_thresholds, unit_of
from stresscheck.errors import InputError

# id, figure, SI value, unit, document, evidence: the table of screening thresholds, row by row
ROWS = [
    ("touch-notice-ac", "voltage", 42.4, "V", "IEC 60335-1", "text"),
    ("touch-notice-dc", "voltage", 42.4, "V", "IEC 60335-1", "one"),
    ("touch-full-rms", "voltage", 50.0, "V", "WAC", "text"),
    ("touch-full-dc", "voltage", 50.0, "V", "WAC", "text"),
    ("selv-upper-bound", "voltage_dc", 120.0, "V", "IEC 61558-1", "text"),
    ("rf-burn", "frequency", 30e3, "Hz", "IEC 60990", "one"),
    ("rf-burn-no-tingling", "touch_current", 16.7e-3, "A", "IEEE C95.1-2345-2014", "one"),
    ("stored-energy-high", "energy", 0.25, "J", "NFPA 70E", "one"),
    ("stored-energy-middle", "energy", 1.0, "J", "NFPA 70E", "one"),
    ("stored-energy-low", "energy", 100.0, "J", "NFPA 70E", "one"),
    ("stored-energy-older-tier", "energy", 10.0, "J", "DOE", "text"),
    ("stored-charge-low", "capacitance", 0.1e-6, "F", "IEC 60335-1", "two"),
    ("stored-charge-middle", "charge", 45e-6, "C", "IEC 60335-1", "two"),
    ("stored-charge-high", "energy", 0.35, "J", "IEC 60335-1", "two"),
    ("discharge", "time", 5.0, "s", "IEC 60204-1", "two"),
    ("discharge-plug", "time", 1.0, "s", "IEC 60204-1", "two"),
    ("discharge-nec", "time_higher_voltage", 300.0, "s", "NEC", "two"),
    ("discharge-california", "voltage", 50.0, "V", "8 CCR", "text"),
    ("discharge-shunt-capacitors", "time", 180.0, "s", "IEC 60831-1", "two"),
    ("recharge", "fraction_high", 0.15, "", "Teaching text", "one"),
    ("air-gap-12kv", "distance_per_voltage", 2e-6, "m/V", "IEC 60664-1", "two"),
    ("air-gap-50kv", "distance_per_voltage", 2.6e-6, "m/V", "IEC 60664-1", "two"),
    ("air-gap-high-frequency-even", "factor", 1.25, "", "IEC 60664-4", "one"),
    ("beyond-clearance-tables", "voltage", 2e3, "V", "IEC 60664", "text"),
    ("creepage-degree-2", "distance_per_voltage", 13e-6, "m/V", "IEC 60664-1", "one"),
    ("creepage-degree-3", "distance_per_voltage", 20e-6, "m/V", "IEC 60664-1", "one"),
    ("board-uncoated", "slope_above", 5e-6, "m/V", "IPC-2221B", "two"),
    ("board-coated", "slope_above", 3.05e-6, "m/V", "IPC-2221B", "two"),
    ("board-uncoated-high-altitude", "altitude", 3050.0, "m", "IPC-2221B", "two"),
    ("paschen-floor", "voltage", 300.0, "V", "Paschen", "two"),
    ("corona", "onset_field", 3e6, "V/m", "Peek", "two"),
    ("field-exposure", "flux_density", 27e-6, "T", "ICNIRP", "two"),
    ("leakage", "current", 3.5e-3, "A", "IEC 60950-1", "one"),
    ("probe-rating", "fall_per_decade_decibel", 20.0, "", "maker", "one"),
    ("probe-loading", "shift_over_bandwidth", 0.1, "", "Arithmetic", "derived"),
    ("hot-surface", "temperature", 333.15, "K", "Common practice", "common practice"),
]
WITHOUT_FIGURES = {"before-work", "dc-trapped", "wrong-dielectric", "below-resonance"}
CURVES = {"altitude", "air-gap-high-frequency"}


@pytest.mark.parametrize(
    ("name", "figure", "value", "unit", "document", "evidence"), ROWS, ids=[row[0] for row in ROWS]
)
def test_threshold_carries_its_figure_and_its_document(
    name: str, figure: str, value: float, unit: str, document: str, evidence: str
) -> None:
    threshold = load_thresholds()[name]
    assert threshold.figure(figure) == pytest.approx(value, rel=1e-15)
    assert threshold.figures[figure].unit == unit
    assert document in threshold.source.document
    assert threshold.source.evidence == evidence
    assert document in threshold.sources()
    assert threshold.not_covered


def test_thresholds_are_exactly_those_of_the_table() -> None:
    assert set(load_thresholds()) == {row[0] for row in ROWS} | WITHOUT_FIGURES | CURVES


def test_threshold_curves_have_their_ends() -> None:
    data = load_thresholds()
    gap = data["air-gap-high-frequency"].curves["distance"]
    assert gap[0] == pytest.approx((600.0, 0.065e-3))
    assert gap[-1] == pytest.approx((2000.0, 11e-3))
    assert len(gap) == 8
    factors = data["altitude"].curves["factors"]
    assert factors[0] == (3000.0, 1.14)
    assert factors[-1] == (10000.0, 3.02)
    assert len(factors) == 8


def test_hazards_name_thresholds_that_exist() -> None:
    known = set(load_thresholds())
    for hazard in HAZARDS:
        assert hazard.thresholds
        assert set(hazard.thresholds) <= known


@pytest.mark.parametrize(
    ("name", "unit"),
    [
        ("voltage_from", "V"),
        ("time_low_voltage", "s"),
        ("distance_per_voltage", "m/V"),
        ("above", "V"),
        ("factor", ""),
    ],
)
def test_unit_of_figure_goes_by_its_name(name: str, unit: str) -> None:
    assert unit_of(name) == unit


ENTRY = (
    'title = "t"\n[threshold.a]\nhazard = "h"\ncomparison = "above"\nbasis = "b"\n'
    'figures = { voltage = "50 V" }\n'
    'document = "d"\nedition = "e"\nclause = "c"\nevidence = "one"\nnot_covered = "n"\n'
)


@pytest.mark.parametrize(
    ("old", "new", "expected"),
    [
        ('"50 V"', '"50"', ("bad-quantity", "threshold.a.figures.voltage")),
        ('"50 V"', '"50 A"', ("wrong-dimension", "threshold.a.figures.voltage")),
        ('"50 V"', "50", ("wrong-type", "threshold.a.figures.voltage")),
        ('{ voltage = "50 V" }', "{}", ("missing-key", "threshold.a.figures")),
        ('"above"', '"over"', ("wrong-type", "threshold.a.comparison")),
        ('"one"', '"memory"', ("wrong-type", "threshold.a.evidence")),
        ('basis = "b"\n', "", ("missing-key", "threshold.a.basis")),
        ('not_covered = "n"\n', "", ("missing-key", "threshold.a.not_covered")),
        ('hazard = "h"', 'hazard = "h"\nlimit = 3', ("unknown-key", "threshold.a.limit")),
        ('title = "t"\n', 'title = "t"\nthreshold = 3\n', None),
        (
            'not_covered = "n"',
            'not_covered = "n"\nalso = [{ document = "x" }]',
            ("missing-key", "threshold.a.clause"),
        ),
    ],
)
def test_load_thresholds_entry_that_cannot_be_used_is_refused(
    old: str, new: str, expected: tuple[str, str] | None, tmp_path: Path
) -> None:
    assert old in ENTRY
    (tmp_path / "a.toml").write_text(ENTRY.replace(old, new), encoding="utf-8")
    with pytest.raises(InputError) as caught:
        load_thresholds(tmp_path)
    found = [(problem.code, problem.key) for problem in caught.value.problems]
    assert expected in found if expected else found[0][0] == "not-toml"


def test_load_thresholds_same_id_in_two_files_is_refused(tmp_path: Path) -> None:
    for name in ("a.toml", "b.toml"):
        (tmp_path / name).write_text(ENTRY, encoding="utf-8")
    with pytest.raises(InputError) as caught:
        load_thresholds(tmp_path)
    assert [(problem.code, problem.file) for problem in caught.value.problems] == [("duplicate-name", "b.toml")]


def test_cautions_for_thresholds_that_lack_one_is_refused(tmp_path: Path) -> None:
    (tmp_path / "a.toml").write_text(ENTRY, encoding="utf-8")
    with pytest.raises(InputError) as caught:
        cautions_for(Facts((), (), "ordinary", 50.0, 50.0), load_thresholds(tmp_path))
    keys = {problem.key for problem in caught.value.problems}
    assert {"threshold.touch-full-rms", "threshold.stored-charge-low", "threshold.before-work"} <= keys

"""Circuits that can't be solved as drawn, and those next to them that can."""

from __future__ import annotations

import itertools

import numpy as np
import pytest
from bench_design import HEAD, TANK, drive, part, transformer
from hypothesis import given, settings
from hypothesis import strategies as st

from stresscheck.design.couplings import positive_definite
from stresscheck.design.load import read_design
from stresscheck.errors import InputError

AMPERE = 'peak = "1 A"'
OHM = 'source_resistance = "1 ohm"'


def volt(name: str, first: str, second: str, more: str = "") -> str:
    return drive(name, first, second, more=more)


def ampere(name: str, first: str, second: str, more: str = "") -> str:
    return drive(name, first, second, AMPERE, more)


def r(name: str, first: str, second: str) -> str:
    return part("resistor", name, first, second)


def c(name: str, first: str, second: str, more: str = "") -> str:
    return part("capacitor", name, first, second, more)


def coil(name: str, first: str, second: str, more: str = "") -> str:
    return part("inductor", name, first, second, more)


IN, OUT = ("in", "ground"), ("out", "ground")
SOLVABLE = {
    "capacitor-across-a-drive": volt("d", *IN) + c("c", *IN),
    "drives-parallel-one-with-resistance": volt("d", *IN) + volt("e", *IN, OHM) + c("c", *IN),
    "current-drive-into-a-part": ampere("d", *IN) + r("r", *IN),
    "current-drives-in-parallel": ampere("d", *IN) + ampere("e", *IN) + c("c", *IN),
    "current-drive-in-series-with-a-voltage-drive": ampere("d", "in", "out") + volt("e", *OUT) + r("r", *IN),
    "transformer-driven": volt("d", *IN) + transformer("t", IN, OUT) + r("r", *OUT),
    "transformer-driven-by-current": ampere("d", *IN) + transformer("t", IN, OUT) + r("r", *OUT),
    "both-windings-driven-one-with-resistance": volt("d", *IN) + volt("e", *OUT, OHM) + transformer("t", IN, OUT) + r("r", *OUT),
    "offset-over-a-lossy-coil": volt("d", *IN, 'offset = "1 V"') + coil("l", *IN, 'resistance = "1 ohm"'),
    "offset-blocked-by-a-capacitor": volt("d", *IN, 'offset = "1 V"') + c("c", "in", "out") + coil("l", *OUT),
    "current-offset-into-a-leaky-capacitor": ampere("d", *IN, 'offset = "1 A"') + c("c", *IN, 'leakage_resistance = "1 Mohm"'),
}  # fmt: skip
INSOLUBLE = {
    "drives-in-parallel": (volt("d", *IN) + volt("e", *IN) + c("c", *IN), "drive.e.between", "already fixed by d"),
    "drives-in-a-loop": (
        volt("d", *IN) + volt("e", "in", "out") + volt("f", *OUT) + c("c", *IN), "drive.f.between", "already fixed by d, e"),
    "both-windings-driven": (
        volt("d", *IN) + volt("e", *OUT) + transformer("t", IN, OUT) + r("r", *OUT), "transformer.t.primary", "d, e"),
    "windings-on-the-same-nodes": (
        volt("d", *IN) + transformer("t", IN, IN) + r("r", *IN), "transformer.t.primary", "already fixed by d"),
    "transformer-one-to-one-on-itself": (
        volt("d", *IN, OHM) + transformer("t", IN, IN, "[1, 1]") + r("r", *IN), "transformer.t.primary", "itself"),
    "current-drives-in-series": (ampere("d", *IN) + ampere("e", "in", "out") + r("r", *OUT), "drive.d.between", "no path"),
    "current-drive-into-an-open-transformer": (
        ampere("d", *IN) + transformer("t", IN, OUT) + ampere("e", *OUT) + r("r", "x", "ground") + r("s", "x", "ground"),
        "drive.d.between", "no path"),
    "offset-over-an-ideal-coil": (volt("d", *IN, 'offset = "1 V"') + coil("l", *IN), "drive.d.offset", "without resistance"),
    "current-offset-into-a-capacitor": (ampere("d", *IN, 'offset = "1 A"') + c("c", *IN), "drive.d.offset", "capacitors alone"),
    "node-used-once": (volt("d", *IN) + r("r", "in", "onn") + r("s", *IN), "resistor.r.between", "onn used once"),
    "island": (volt("d", *IN) + r("r", *IN) + r("s", "x", "y") + c("c", "x", "y"), "capacitor.c.between", "x, y"),
    "floating-secondary": (volt("d", *IN) + transformer("t", IN, ("x", "y")) + r("r", "x", "y"), "resistor.r.between", "x, y"),
    "no-ground": (volt("d", "in", "gnd") + r("r", "in", "gnd"), "", "node ground"),
}  # fmt: skip


@pytest.mark.parametrize("text", SOLVABLE.values(), ids=SOLVABLE)
def test_solvable_circuit_is_read(text: str) -> None:
    assert read_design(HEAD + text).drive


@pytest.mark.parametrize(("text", "key", "found"), INSOLUBLE.values(), ids=INSOLUBLE)
def test_insoluble_circuit_is_told_by_names(text: str, key: str, found: str) -> None:
    with pytest.raises(InputError) as caught:
        read_design(HEAD + text)
    told = {p.key: p for p in caught.value.problems}
    assert key in told
    assert told[key].code == "bad-topology"
    assert found in told[key].found


def _coupled(*factors: str) -> str:
    coils = "".join(coil(f"L{i}", "in", "ground") for i in range(3))
    pairs = itertools.combinations(range(3), 2)
    tables = "".join(
        f'[coupling.k{i}{j}]\nof = ["L{i}", "L{j}"]\nfactor = {factor}\n'
        for (i, j), factor in zip(pairs, factors, strict=False)
    )
    return HEAD + volt("d", *IN, OHM) + coils + tables


@pytest.mark.parametrize("factors", [("0.5", "0.5", "0.5"), ("0.9", "0.9", "0.7"), ("[0.1, 0.5]", "-0.5", "0.2")])
def test_coupling_factors_that_coils_can_have_are_read(factors: tuple[str, ...]) -> None:
    assert len(read_design(_coupled(*factors)).coupling) == 3


@pytest.mark.parametrize(
    ("factors", "key"),
    [
        (("0.9", "0.9", "0.1"), "coupling.k01.factor"), (("0.9", "-0.9", "0.9"), "coupling.k01.factor"),
        (("0.9", "0.8", "[0.2, 0.9]"), "coupling.k01.factor"), (("1.0",), "coupling.k01"), (("1.5",), "coupling.k01.factor"),
    ],
)  # fmt: skip
def test_coupling_factors_that_no_coils_can_have_are_told(factors: tuple[str, ...], key: str) -> None:
    with pytest.raises(InputError) as caught:
        read_design(_coupled(*factors))
    assert key in {p.key for p in caught.value.problems}


def test_coupling_in_a_state_beyond_reach_is_told_at_the_state() -> None:
    text = _coupled("0.5", "0.5", "0.5") + '[state.s]\nchange = { "coupling.k01.factor" = -0.9 }\n'
    with pytest.raises(InputError) as caught:
        read_design(text)
    (problem,) = caught.value.problems
    assert (problem.code, problem.line) == ("bad-coupling", text.count("\n"))


@pytest.mark.parametrize(
    ("of", "code", "said"),
    [('["L0", "L11"]', "unknown-name", "did you mean"), ('["L0", "L0"]', "bad-coupling", "name both"),
     ('["L1", "L0"]', "bad-coupling", "remove one")],
)  # fmt: skip
def test_coupling_of_wrong_coils_is_told(of: str, code: str, said: str) -> None:
    with pytest.raises(InputError) as caught:
        read_design(_coupled("0.5") + f"[coupling.x]\nof = {of}\nfactor = 0.1\n")
    assert any(p.code == code and said in p.repair for p in caught.value.problems)


@settings(deadline=None)
@given(st.lists(st.floats(-0.99, 0.99), min_size=6, max_size=6))
def test_positive_definite_agrees_with_eigenvalues(factors: list[float]) -> None:
    matrix = np.eye(4)
    pairs = list(itertools.combinations(range(4), 2))
    for (i, j), factor in zip(pairs, factors, strict=True):
        matrix[i, j] = matrix[j, i] = factor
    smallest = np.linalg.eigvalsh(matrix)[0]
    named = {frozenset((f"L{i}", f"L{j}")): factor for (i, j), factor in zip(pairs, factors, strict=True)}
    if abs(smallest) > 1e-9:
        assert positive_definite(named) == (smallest > 0)


@pytest.mark.parametrize(
    "change", ['"inductor.L" = "open"', '"capacitor.C" = "open"', '"inductor.L" = "short", "capacitor.C" = "short"']
)
def test_state_that_opens_or_shorts_parts_is_a_matter_for_the_solver(change: str) -> None:
    assert read_design(TANK + f'[state.s]\nkind = "fault"\nchange = {{ {change} }}\n').states == ("normal", "s")

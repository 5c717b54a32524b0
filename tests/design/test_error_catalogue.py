"""Bad files: which problems, on which lines, under which keys; and that their words help."""

from __future__ import annotations

import re
from pathlib import Path

import pytest
from bench_design import HEAD, TANK, WHOLE, drive, part

from stresscheck.design.load import load_design, read_design
from stresscheck.errors import InputError, Problem


def problems_of(text: str | bytes) -> tuple[Problem, ...]:
    with pytest.raises(InputError) as caught:
        read_design(text, "tank.toml")
    return caught.value.problems


CHANGED_LINES = [
    # line of the whole example that is replaced, what stands there instead, code, key, part of the repair
    ('value = "150 nF"', 'value = "150nf"', "unknown-unit", "capacitor.Ctank.value", '"150 nF"'),
    ('value = "150 nF"', "value = 150", "bad-quantity", "capacitor.Ctank.value", '"150 F"'),
    ('value = "150 nF"', 'value = "-150 nF"', "out-of-range", "capacitor.Ctank.value", "sign"),
    ('value = "150 nF"', 'value = "150 nH"', "wrong-dimension", "capacitor.Ctank.value", "in F"),
    ('value = "150 nF"', "value = true", "wrong-type", "capacitor.Ctank.value", "text"),
    ('value = "150 nF"', 'value = ["2 nF", "1 nF"]', "out-of-range", "capacitor.Ctank.value", "swap"),
    ('value = "150 nF"', 'valeu = "150 nF"', "unknown-key", "capacitor.Ctank.valeu", "did you mean value?"),
    ('value = "150 nF"', 'value = "1e9**9**9 nF"', "bad-quantity", "capacitor.Ctank.value", "one number and one unit"),
    ('tolerance = "5 %"', 'tolerance = "5"', "bad-quantity", "capacitor.Ctank.tolerance", '"5 %"'),
    ('tolerance = "5 %"', 'tolerance = "120 %"', "out-of-range", "capacitor.Ctank.tolerance", "100 %"),
    ('tolerance = "5 %"', 'tolerance = ["5 %", "10 %"]', "out-of-range", "capacitor.Ctank.tolerance", "negative"),
    ('tolerance = "5 %"', 'tolerance = "5 V"', "wrong-dimension", "capacitor.Ctank.tolerance", "F"),
    ('peak = "12 V"', 'peak = "12 MV"', "out-of-range", "drive.bridge.peak", "prefix"),
    ('peak = "12 V"', 'peak = "12 W"', "wrong-dimension", "drive.bridge.peak", "V or in A"),
    ('peak = "12 V"', "peak = 12", "bad-quantity", "drive.bridge.peak", '"12 V"'),
    ('frequency = ["84 kHz", "92 kHz"]', 'frequency = "84 mhz"', "unknown-unit", "drive.bridge.frequency", "MHz"),
    ('frequency = ["84 kHz", "92 kHz"]', 'frequency = "13.56 mHz"', "out-of-range", "drive.bridge.frequency", "prefix"),
    ('resistance = "90 mohm"', 'resistance = "90 Mohm"', "out-of-range", "inductor.Lwork.resistance", "prefix"),
    ('voltage_dc = "1000 V"', 'voltage_ac = "1000 V"', "unknown-key", "capacitor.Ctank.rating.voltage_ac", "voltage_"),
    ('ambient = ["10 degC", "40 degC"]', 'ambient = "40 C"', "wrong-dimension", "site.ambient", "K"),
    ("pollution_degree = 2", "pollution_degree = 4", "wrong-type", "site.pollution_degree", "check"),
    ('reachable = ["in"]', 'reachable = ["inn"]', "unknown-name", "site.reachable", "did you mean in?"),
    ('title = "Bench induction heater, series tank"', 'title = "a\\u001b[31mb"', "bad-text", "title", "remove"),
    ('title = "Bench induction heater, series tank"', 'title = "a\\u202eb"', "bad-text", "title", "remove"),
    ('title = "Bench induction heater, series tank"', 'title = " "', "bad-text", "title", "fill"),
    ('title = "Bench induction heater, series tank"', "title = 5", "wrong-type", "title", "quotation"),
    ('between = ["hot", "cold"]', 'between = ["hot", "hot"]', "bad-topology", "inductor.Lwork.between", "different"),
    ('between = ["hot", "cold"]', 'between = ["hot", "co ld"]', "bad-text", "inductor.Lwork.between", "rename"),
    ("[resistor.Rwork.rating]", "[resistor.Rwork.ratings]", "unknown-key", "resistor.Rwork.ratings", "did you mean rating?"),
    ("[state.cold-workpiece]", "[state.normal]", "duplicate-name", "state.normal", "rename"),
    ('kind = "fault"', 'kind = "broken"', "wrong-type", "state.shorted-turns.kind", "one of these"),
    ("[inductor.Lwork]", '[inductor."L w"]', "bad-text", "inductor.L w", "rename"),
]  # fmt: skip


@pytest.mark.parametrize(("line", "instead", "code", "key", "repair"), CHANGED_LINES, ids=lambda v: str(v)[:32])
def test_changed_line_is_told_with_code_line_key_and_repair(
    line: str, instead: str, code: str, key: str, repair: str
) -> None:
    text = WHOLE.replace(line, instead, 1)
    assert text != WHOLE
    number = text[: text.index(instead)].count("\n") + 1
    told = [p for p in problems_of(text) if (p.code, p.key) == (code, key)]
    assert [p.line for p in told] == [number]
    assert repair in told[0].repair


ADDED = [
    (HEAD + part("capacitor", "C", "in", "ground"), "bad-topology", ""),
    (HEAD + drive("d", "in", "ground"), "bad-topology", ""),
    (TANK.replace("[capacitor.C]", "[capacitor.L]"), "duplicate-name", "capacitor.L"),
    (TANK + "[capacitor.C.rating]\n", "missing-key", "capacitor.C.rating"),
    (TANK + "[coupling]\n", "missing-key", "coupling"),
    (TANK.replace('peak = "1 V"', ""), "conflicting-keys", "drive.d"),
    (TANK.replace('peak = "1 V"', 'peak = "1 V"\nrms = "1 V"'), "conflicting-keys", "drive.d"),
    (TANK.replace('peak = "1 V"', 'available_power = "1 W"'), "missing-key", "drive.d"),
    (TANK.replace('peak = "1 V"', 'peak = "1 V"\noffset = "1 A"'), "wrong-dimension", "drive.d"),
    (TANK.replace('peak = "1 V"', 'peak = "1 V"\nduty = 0.3'), "conflicting-keys", "drive.d"),
    (TANK.replace('peak = "1 V"', 'peak = "1 V"\nharmonics = [[1, 1.0]]'), "wrong-type", "drive.d.harmonics"),
    (TANK.replace('peak = "1 V"', 'peak = "1 V"\nharmonics = [[0, 1.0, 0]]'), "out-of-range", "drive.d.harmonics"),
    (TANK.replace('peak = "1 V"', 'peak = "1 V"\nharmonics = [[1, inf, 0]]'), "wrong-type", "drive.d.harmonics"),
    (TANK.replace('q_at = "1 kHz"', ""), "missing-key", "inductor.L"),
    (TANK.replace('q_at = "1 kHz"', 'q_at = "1 kHz"\nresistance = "1 ohm"'), "conflicting-keys", "inductor.L"),
    (TANK + 'unit_tolerance = "5 %"\n', "missing-key", "capacitor.C"),
    (TANK + 'nominal = "1 uF"\n', "conflicting-keys", "capacitor.C"),
    (TANK + 'esr = { by = "frequency", points = [["2 Hz", "1 ohm"], ["1 Hz", "1 ohm"]] }\n', "out-of-range", "capacitor.C.esr"),
    (TANK + 'esr = { by = "temperature", points = [["2 K", "1 ohm"], ["3 K", "1 ohm"]] }\n', "wrong-type", "capacitor.C.esr"),
    (TANK + 'esr = { by = "frequency", points = [["2 Hz", "1 ohm"]] }\n', "wrong-type", "capacitor.C.esr"),
    (TANK + 'part = "no-such-part"\n', "unknown-name", "capacitor.C.part"),
    (TANK + 'part = "nowhere.toml#x"\n', "bad-rating-file", "capacitor.C.part"),
    (TANK + "[state.s]\n", "missing-key", "state.s"),
    (TANK + '[state.s]\nchange = { "capacitor.D.value" = "1 F" }\n', "unknown-name", "state.s.change.capacitor.D.value"),
    (TANK + '[state.s]\nchange = { "capacitor.C.valu" = "1 F" }\n', "unknown-key", "state.s.change.capacitor.C.valu"),
    (TANK + '[state.s]\nchange = { "capacitor.C.between" = "1" }\n', "unknown-key", "state.s.change.capacitor.C.between"),
    (TANK + '[state.s]\nchange = { "capacitor.C.value" = "1 H" }\n', "wrong-dimension", "state.s.change.capacitor.C.value"),
    (TANK + '[state.s]\nchange = { "capacitor.C" = "gone" }\n', "wrong-type", "state.s.change.capacitor.C"),
    (TANK + '[state.s]\nchange.capacitor.C.value = "1 F"\n', "wrong-type", "state.s.change"),
    (TANK + '[accept.a]\nfinding = "C.voltage_peak"\nreason = "r"\nby = "b"\nuntil = 2027-01-01\n', "bad-text", "accept.a.finding"),
    (TANK + '[accept.a]\nfinding = "D.x@normal"\nreason = "r"\nby = "b"\nuntil = 2027-01-01\n', "unknown-name", "accept.a.finding"),
    (TANK + '[accept.a]\nfinding = "C.x@warm"\nreason = "r"\nby = "b"\nuntil = 2027-01-01\n', "unknown-name", "accept.a.finding"),
    (TANK + '[accept.a]\nfinding = "C.x@normal"\nreason = "r"\nby = "b"\nuntil = "2027-02-30"\n', "out-of-range", "accept.a.until"),
    (TANK + '[accept.a]\nfinding = "C.x@normal"\nreason = "r"\nby = "b"\nuntil = 20270101\n', "wrong-type", "accept.a.until"),
    (TANK + '[probe.P]\nbetween = ["topp", "ground"]\ncapacitance = "8 pF"\n', "unknown-name", "probe.P.between"),
    (TANK + '[spacing.S]\nbetween = ["top", "ground"]\ndistance = "8 mm"\nkind = "oil"\n', "wrong-type", "spacing.S.kind"),
    (TANK + '[inductor.M]\nbetween = ["top", "ground"]\nvalue = "1 H"\nwinding = { layers = 1 }\n', "missing-key", "inductor.M.winding"),
    (TANK.replace("[drive.d]", "[drives.d]"), "unknown-key", "drives"),
    ("drive = 5\n" + HEAD + part("resistor", "R", "in", "ground"), "wrong-type", "drive"),
    (HEAD + "[drive]\nd = 5\n" + part("resistor", "R", "in", "ground"), "wrong-type", "drive.d"),
    (TANK.replace("derating", "deratin"), "missing-key", "derating"),
]  # fmt: skip


@pytest.mark.parametrize(("text", "code", "key"), ADDED, ids=lambda v: str(v)[-40:])
def test_bad_design_is_told_under_its_key(text: str, code: str, key: str) -> None:
    assert (code, key) in {(p.code, p.key) for p in problems_of(text)}


FILES = [
    (b"", "missing-key"), (b"\xff", "file-unreadable"), (b"\xef\xbb\xbftitle = 'x'", "file-unreadable"),
    ("title = 'x'".encode("utf-16"), "file-unreadable"), (b"title = 'x", "not-toml"), (b"title = 'x'\ntitle = 'y'", "not-toml"),
    (b"[a]\n[a]", "not-toml"), (b"x = " + b"[" * 100_000, "file-unreadable"), (b"x = " + b"[" * 300 + b"]" * 300, "file-unreadable"),
    (b"a" + b".a" * 10_000 + b" = 1", "file-unreadable"), (b"x = {" + b"a." * 9_000 + b"a = 1}", "file-unreadable"),
    (b"x = " + b"1" * 5000, "file-unreadable"), (b"x = 1\n" * 3 + b" " * (1 << 20), "file-unreadable"),
    (b"".join(b"a%d=1\n" % i for i in range(20_000)), "file-unreadable"), (b"\x00", "not-toml"), (b'x = "\x1b"', "not-toml"),
    ('x = "\ud800"', "file-unreadable"),
]  # fmt: skip


@pytest.mark.parametrize(("data", "code"), FILES, ids=lambda v: ascii(v[:16]))
def test_file_that_is_no_design_is_refused(data: bytes | str, code: str) -> None:
    assert code in {p.code for p in problems_of(data)}


def test_brackets_and_dots_inside_strings_and_comments_count_for_nothing() -> None:
    notes = "[" * 60 + "." * 60
    text = f"# {notes}\nnotes = '{notes}'\nrevision = \"a\" # {notes}\n" + TANK
    assert read_design(text).notes == notes


def test_problems_of_values_wiring_states_and_acceptances_come_together_in_order() -> None:
    text = WHOLE.replace('"150 nF"', '"150nf"').replace('["hot", "cold"]', '["hott", "cold"]')
    text = text.replace('"resistor.Rwork.value"', '"resistor.Rwrk.value"').replace('revision = "B"', 'revison = "B"')
    found = problems_of(text + '[accept.a]\nfinding = "C.x@normal"\nreason = "r"\nby = "b"\nuntil = 1\n')
    assert [p.code for p in found] == [
        "unknown-key", "bad-topology", "unknown-unit", "bad-topology", "unknown-name", "unknown-name", "wrong-type"
    ]  # fmt: skip
    lines = [p.line or 0 for p in found]
    assert lines == sorted(lines)
    assert "did you mean hot" in found[3].repair


def test_problem_reads_as_one_line() -> None:
    told = str(problems_of(WHOLE.replace('"150 nF"', '"150nf"'))[0])
    assert told == (
        'tank.toml:21: capacitor.Ctank.value: [unknown-unit] found "150nf"; '
        'expected a capacitance such as "330 nF"; did you mean "150 nF"?'
    )


@pytest.mark.parametrize("text", [case[0] for case in ADDED] + [WHOLE.replace(c[0], c[1], 1) for c in CHANGED_LINES])
def test_problems_use_no_words_of_the_validator_and_print_anywhere(text: str) -> None:
    for problem in problems_of(text):
        told = str(problem)
        assert "\n" not in told
        assert told.isprintable()
        assert not re.search(r"pydantic|validation error|type=|input_value|Input should|Field required", told)
        assert problem.expected
        assert problem.repair


def test_hostile_keys_are_escaped_and_cut() -> None:
    found = problems_of(TANK + '["\\u001b[31m' + "x" * 300 + '"]\na = 1\n')
    assert [p.code for p in found] == ["unknown-key"]
    assert str(found[0]).isprintable()
    assert len(found[0].key) < 100


def test_load_design_missing_file_is_unreadable(tmp_path: Path) -> None:
    for path in (tmp_path / "none.toml", tmp_path, tmp_path / "a\0b"):
        with pytest.raises(InputError) as caught:
            load_design(path)
        assert [p.code for p in caught.value.problems] == ["file-unreadable"]


def test_load_design_large_file_is_refused(tmp_path: Path) -> None:
    (tmp_path / "large.toml").write_bytes(b" " * ((1 << 20) + 1))
    with pytest.raises(InputError, match="1 MiB"):
        load_design(tmp_path / "large.toml")

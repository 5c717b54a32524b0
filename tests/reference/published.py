"""Circuits of published worked examples as design files, and the figures that a review gives for them."""

from __future__ import annotations

from dataclasses import dataclass

from stresscheck.chain import review
from stresscheck.design.load import read_design
from stresscheck.findings.finding import Finding
from stresscheck.findings.outlook import DriveReport, Resonance

UNIT = {"resistor": "ohm", "inductor": "H", "capacitor": "F"}
RATING = {
    "capacitor": 'rating = { voltage_dc = "50 MV", voltage_rms = "50 MV", current_rms = "1 MA", current_peak = "1 MA", '
    'reactive_power = "900 Mvar" }',
    "inductor": 'family = "air core"\nrating = { current_rms = "1 MA", current_peak = "1 MA", voltage_peak = "50 MV", '
    'voltage_rms = "50 MV" }',
    "resistor": 'rating = { dissipation = "100 MW", voltage_peak = "50 MV", voltage_rms = "50 MV" }',
}


@dataclass(frozen=True)
class Figures:
    """Findings by id without the state, the drives and the resonances of the normal state."""

    findings: dict[str, Finding]
    drives: dict[str, DriveReport]
    resonances: tuple[Resonance, ...]

    def __getitem__(self, key: str) -> float:
        """Nominal figure, for instance figures["C.voltage_rms"]; with nothing to vary also worst and bound."""
        finding = self.findings[key]
        assert finding.nominal is not None
        assert finding.worst == finding.bound == finding.nominal
        assert finding.verdict == "within"
        return finding.nominal


def part(kind: str, name: str, first: str, second: str, value: float, extra: str = "") -> str:
    """Table of one part; `extra` holds further keys."""
    lines = [f"[{kind}.{name}]", f'between = ["{first}", "{second}"]', f'value = "{value!r} {UNIT[kind]}"']
    return "\n".join([*lines, extra, RATING[kind]])


def resistor(name: str, first: str, second: str, value: float, extra: str = "") -> str:
    return part("resistor", name, first, second, value, extra)


def inductor(name: str, first: str, second: str, value: float, extra: str = "") -> str:
    return part("inductor", name, first, second, value, extra)


def capacitor(name: str, first: str, second: str, value: float, extra: str = "") -> str:
    return part("capacitor", name, first, second, value, extra)


def coupling(first: str, second: str, factor: float) -> str:
    return f'[coupling.{first}-{second}]\nof = ["{first}", "{second}"]\nfactor = {factor!r}'


def drive(
    hertz: float, level: float, basis: str = "rms", name: str = "E", unit: str = "V", nodes: str = '"in", "ground"',
    extra: str = "",
) -> str:  # fmt: skip
    return (
        f'[drive.{name}]\nbetween = [{nodes}]\n{basis} = "{level!r} {unit}"\nfrequency = "{hertz!r} Hz"\n{extra}\n'
        'rating = { current_peak = "1 MA", current_rms = "1 MA", power = "900 MW" }'
    )


def solve(*tables: str) -> Figures:
    """Review a circuit of these tables as rated."""
    text = "\n".join(['title = "published example"', 'derating = "as-rated"', *tables])
    record = review(read_design(text))
    return Figures(
        {f.id.removesuffix("@normal"): f for f in record.findings},
        {d.drive: d for d in record.drives},
        record.resonances,
    )


def series(r: float, henry: float, farad: float, hertz: float, level: float, basis: str = "rms") -> Figures:
    """R, L and C in series across an ideal drive, R next to the drive."""
    return solve(
        drive(hertz, level, basis), resistor("R", "in", "a", r), inductor("L", "a", "b", henry),
        capacitor("C", "b", "ground", farad),
    )  # fmt: skip


def digits(value: float, printed: str) -> bool:
    """True where the value rounds to what is printed, half a unit of its last digit allowed."""
    mantissa = printed.lower().split("e")[0].lstrip("+-")
    exponent = int(printed.lower().split("e")[1]) if "e" in printed.lower() else 0
    places = len(mantissa.split(".")[1]) if "." in mantissa else 0
    half = 0.5 * 10.0 ** (exponent - places)
    return abs(value - float(printed)) <= half * (1.0 + 1e-9)

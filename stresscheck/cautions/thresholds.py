"""Thresholds of the cautions, read from data: figure, basis, document, edition, clause, evidence."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from types import MappingProxyType

from stresscheck.limits.data_file import EVIDENCE, DataFile, read_data_file
from stresscheck.shipped import ratings_dir

COMPARISONS = ("at least", "above", "below", "circumstance", "reference")
"""How a stress is held against the figures; a circumstance has none, a reference triggers nothing."""

UNITS = MappingProxyType(
    {
        "voltage": "V",
        "current": "A",
        "energy": "J",
        "charge": "C",
        "capacitance": "F",
        "frequency": "Hz",
        "time": "s",
        "altitude": "m",
        "temperature": "K",
        "flux_density": "T",
        "distance_per_voltage": "m/V",
        "slope": "m/V",
        "onset_field": "V/m",
        "touch_current": "A",
        "above": "V",
    }
)
"""SI unit by the first words of a figure's name (`voltage_from` is a voltage); others are plain numbers."""

CURVES = MappingProxyType({"distance": ("V", "m"), "factors": ("m", "")})
"""Figures that are lists of pairs, with the units of both columns."""


@dataclass(frozen=True, slots=True)
class Figure:
    """One figure of a threshold: as written, and in SI."""

    name: str
    text: str
    value: float
    unit: str


@dataclass(frozen=True, slots=True)
class Source:
    """Where a figure stands, and how it was read."""

    document: str
    edition: str
    clause: str
    evidence: str
    says: str = ""

    def __str__(self) -> str:
        says = f" says {self.says};" if self.says else ""
        return f"{self.document}, {self.clause} (edition: {self.edition};{says} evidence: {self.evidence})"


@dataclass(frozen=True, slots=True)
class Threshold:
    """One threshold. `curves`: name → pairs in SI; `also`: further documents that say nearly the same."""

    id: str
    file: str
    hazard: str
    comparison: str
    basis: str
    figures: Mapping[str, Figure]
    curves: Mapping[str, tuple[tuple[float, float], ...]]
    source: Source
    also: tuple[Source, ...]
    not_covered: str
    notes: str

    def figure(self, name: str) -> float:
        """A figure in SI."""
        return self.figures[name].value

    def shown(self, name: str) -> str:
        """A figure as written in the data."""
        return self.figures[name].text

    def sources(self) -> str:
        """All documents of this threshold, as one line."""
        return "; ".join(str(source) for source in (self.source, *self.also))


Thresholds = Mapping[str, Threshold]


@cache
def load_thresholds(folder: Path | None = None) -> Thresholds:
    """All thresholds by id, of a folder or the shipped ones; InputError with a file's problems."""
    found: dict[str, Threshold] = {}
    for path in sorted((folder or ratings_dir() / "thresholds").glob("*.toml")):
        file = read_data_file(path)
        file.text("title", required=True)
        for name in file.subtables("threshold"):
            if name in found:
                held = found[name].file
                file.problem("duplicate-name", ("threshold", name), name, "an id of its own", f"{held} has it")
                continue
            found[name] = _read(file, name)
        file.finish({"title", "threshold"})
    return MappingProxyType(found)


def _read(file: DataFile, name: str) -> Threshold:
    at = ("threshold", name)
    figures, curves = _read_figures(file, (*at, "figures"))
    comparison = file.one_of(*at, "comparison", among=COMPARISONS)
    if comparison not in ("circumstance", "") and not figures and not curves:
        file.problem(
            "missing-key",
            (*at, "figures"),
            "no figure",
            f'a figure for "{comparison}"',
            "add it with its source",
        )
    also = tuple(_read_source(file, at, entry) for entry in file.tables(*at, "also"))
    known = {"hazard", "comparison", "basis", "figures", "not_covered", "notes", "also"}
    file.known_keys(at, known | {"document", "edition", "clause", "evidence"})
    return Threshold(
        name,
        file.name,
        file.text(*at, "hazard", required=True),
        comparison,
        file.text(*at, "basis", required=True),
        MappingProxyType(figures),
        MappingProxyType(curves),
        _read_source(file, at, file.table(*at)),
        also,
        file.text(*at, "not_covered", required=True),
        file.text(*at, "notes"),
    )


def _read_figures(
    file: DataFile, at: tuple[str, ...]
) -> tuple[dict[str, Figure], dict[str, tuple[tuple[float, float], ...]]]:
    figures: dict[str, Figure] = {}
    curves: dict[str, tuple[tuple[float, float], ...]] = {}
    for name, value in file.table(*at).items():
        if name in CURVES and isinstance(value, list):
            curves[name] = file.pairs(*at, name, units=CURVES[name])
            continue
        unit = unit_of(name)
        number = file.quantity(*at, name, unit=unit, absolute=unit == "K")
        if number is not None:
            figures[name] = Figure(name, str(value), number, unit)
    return figures, curves


def unit_of(name: str) -> str:
    """SI unit of a figure by its name: the longest known beginning counts; plain numbers have none."""
    words = name.split("_")
    for count in range(len(words), 0, -1):
        unit = UNITS.get("_".join(words[:count]))
        if unit is not None:
            return unit
    return ""


def _read_source(file: DataFile, at: tuple[str, ...], entry: Mapping[str, object]) -> Source:
    texts = {}
    for key in ("document", "edition", "clause", "evidence"):
        value = entry.get(key)
        if not isinstance(value, str) or not value.strip():
            file.problem("missing-key", (*at, key), "nothing", "text: no figure without its source", f"add {key}")
            value = ""
        texts[key] = value
    if texts["evidence"] and texts["evidence"] not in EVIDENCE:
        words = ", ".join(EVIDENCE)
        file.problem("wrong-type", (*at, "evidence"), repr(texts["evidence"]), f"one of: {words}", "use its words")
    return Source(**texts, says=str(entry.get("says", "")))

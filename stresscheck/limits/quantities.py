"""The registry of quantities: what each kind of part is checked for, and against which ratings."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Need:
    """What sign-off asks for: one of these ratings, or one of these families.

    `title` names the group in messages; `speaker` is the one quantity that reports the group as missing.
    """

    title: str
    speaker: str
    rating_keys: tuple[str, ...]
    families: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Quantity:
    """One check of one kind of part. `unit` is the SI unit of the stress and of its ratings.

    `rating_keys`: ratings it is compared with, all of those given; `need`: the group of ratings that sign-off
    asks for and that this quantity can answer, or None.
    """

    kind: str
    name: str
    unit: str
    title: str
    rating_keys: tuple[str, ...]
    need: Need | None = None


_CAPACITOR_VOLTAGE = Need("a peak or DC voltage", "voltage_peak", ("voltage_peak", "voltage_dc"))
_CAPACITOR_AC = Need(
    "one of voltage_rms, current_rms, reactive_power, dissipation",
    "voltage_rms",
    ("voltage_rms", "current_rms", "reactive_power", "dissipation"),
)
_COIL_SATURATION = Need(
    'saturation_current, or family = "air core"', "current_peak", ("saturation_current",), ("air core",)
)
_COIL_CURRENT = Need("current_rms", "current_rms", ("current_rms",))
_COIL_VOLTAGE = Need("voltage_peak", "voltage_peak", ("voltage_peak",))
_RESISTOR_POWER = Need("dissipation", "dissipation", ("dissipation",))
_DRIVE_CURRENT = Need("current_peak", "current_peak", ("current_peak",))

QUANTITIES: tuple[Quantity, ...] = (
    Quantity(
        "capacitor",
        "voltage_peak",
        "V",
        "peak voltage, size of DC + AC",
        ("voltage_peak", "voltage_dc"),
        _CAPACITOR_VOLTAGE,
    ),
    Quantity("capacitor", "voltage_peak_to_peak", "V", "peak-to-peak voltage", ("voltage_peak_to_peak",)),
    Quantity("capacitor", "voltage_rms", "V", "RMS voltage of the AC part", ("voltage_rms",), _CAPACITOR_AC),
    Quantity("capacitor", "current_rms", "A", "RMS current", ("current_rms",), _CAPACITOR_AC),
    Quantity("capacitor", "current_peak", "A", "peak current", ("current_peak",)),
    Quantity("capacitor", "slew_rate", "V/s", "slew rate of the voltage", ("slew_rate",)),
    Quantity("capacitor", "reactive_power", "var", "reactive power", ("reactive_power",), _CAPACITOR_AC),
    Quantity("capacitor", "dissipation", "W", "dissipation", ("dissipation",), _CAPACITOR_AC),
    Quantity("capacitor", "temperature", "K", "temperature", ("temperature",)),
    Quantity(
        "inductor",
        "current_peak",
        "A",
        "peak current, size of DC + AC",
        ("saturation_current", "current_peak"),
        _COIL_SATURATION,
    ),
    Quantity("inductor", "current_rms", "A", "RMS current", ("current_rms",), _COIL_CURRENT),
    Quantity(
        "inductor",
        "voltage_peak",
        "V",
        "peak voltage, size of DC + AC",
        ("voltage_peak", "voltage_dc"),
        _COIL_VOLTAGE,
    ),
    Quantity("inductor", "voltage_rms", "V", "RMS voltage", ("voltage_rms",)),
    Quantity("inductor", "flux_density", "T", "peak flux density", ("flux_density",)),
    Quantity("inductor", "dissipation", "W", "dissipation", ("dissipation",)),
    Quantity("inductor", "temperature", "K", "temperature", ("temperature",)),
    Quantity("resistor", "dissipation", "W", "dissipation", ("dissipation",), _RESISTOR_POWER),
    Quantity("resistor", "voltage_peak", "V", "peak voltage, size of DC + AC", ("voltage_peak", "voltage_dc")),
    Quantity("resistor", "voltage_rms", "V", "RMS voltage", ("voltage_rms",)),
    Quantity("resistor", "temperature", "K", "temperature", ("temperature",)),
    Quantity("resistor", "pulse_energy", "J", "energy of a pulse", ("pulse_energy",)),
    Quantity("drive", "current_peak", "A", "peak current", ("current_peak",), _DRIVE_CURRENT),
    Quantity("drive", "current_rms", "A", "RMS current", ("current_rms",)),
    Quantity("drive", "power", "W", "real power", ("power",)),
)
"""Every check, in the order in which reports show them."""

KINDS: tuple[str, ...] = tuple(dict.fromkeys(quantity.kind for quantity in QUANTITIES))
"""Kinds of parts that have checks."""

NAMES: tuple[str, ...] = tuple(dict.fromkeys(quantity.name for quantity in QUANTITIES))
"""Names of quantities, each once."""

_BY_KEY = {(quantity.kind, quantity.name): quantity for quantity in QUANTITIES}


def quantity_of(kind: str, name: str) -> Quantity:
    """The record of one check; ValueError names the known ones."""
    found = _BY_KEY.get((kind, name))
    if found is None:
        known = ", ".join(quantity.name for quantity in quantities_of(kind)) or "no quantity of this kind"
        raise ValueError(f"no check {name} of kind {kind}; known: {known}")
    return found


def quantities_of(kind: str) -> tuple[Quantity, ...]:
    """All checks of a kind of part, in report order; empty for a kind without checks."""
    return tuple(quantity for quantity in QUANTITIES if quantity.kind == kind)

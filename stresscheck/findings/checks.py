"""Which stresses of a state are checked against what, and which checks can't be made."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from stresscheck.circuit.winding_loss import missing_for_winding
from stresscheck.findings.self_resonance import refusal
from stresscheck.limits.families import load_families
from stresscheck.limits.part_limits import PartLimits, limits_for
from stresscheck.limits.policy import Policy
from stresscheck.limits.quantities import KINDS, quantities_of
from stresscheck.stress.sharing import bank_share
from stresscheck.stress.stresses import PartNotes
from stresscheck.stress.winding_heat import Warmth

if TYPE_CHECKING:
    from stresscheck.design.model import Design


@dataclass(frozen=True, slots=True)
class Check:
    """One stress to be compared. `obstacle`: why it can't be computed, empty where it can; `event` as in Finding."""

    part: str
    kind: str
    quantity: str
    unit: str
    limits: PartLimits
    obstacle: str = ""
    event: str = "steady"

    def id(self, state: str) -> str:
        """Id of the finding in a state: PART.QUANTITY@STATE, with /EVENT behind it where the event isn't steady."""
        return f"{self.part}.{self.quantity}@{state}" + ("" if self.event == "steady" else f"/{self.event}")


def part_notes(design: Design) -> dict[str, PartNotes]:
    """What the stress functions need to know of every present part, drives included."""
    ambient = design.site.ambient_span()
    hottest = None if ambient is None else float(ambient.high)
    coldest = None if ambient is None else float(ambient.low)
    notes: dict[str, PartNotes] = {}
    for kind in KINDS:
        for name, part in present(design, kind):
            notes[name] = _note(kind, part, coldest, hottest)
    return notes


def present(design: Design, kind: str) -> list[tuple[str, Any]]:
    """Parts of a kind that are in the circuit in this state."""
    absent = design.opened | design.shorted
    return [(name, part) for name, part in getattr(design, kind).items() if name not in absent]


def _note(kind: str, part: Any, coldest: float | None, ambient: float | None) -> PartNotes:
    if kind == "drive":
        return PartNotes(kind)
    rise = part.thermal_resistance
    thermal = None if rise is None else float(rise)
    if kind == "inductor":
        turns = None if part.turns is None else float(part.turns)
        area = None if part.core_area is None else float(part.core_area)
        warmth = None if coldest is None or ambient is None else Warmth(coldest, ambient, thermal)
        return PartNotes(kind, turns=turns, core_area=area, thermal_resistance=thermal, ambient=ambient, warmth=warmth)
    tolerance = part.unit_tolerance
    share = bank_share(
        part.in_series or 1,
        part.in_parallel or 1,
        0.0 if tolerance is None else max(abs(float(tolerance.low)), abs(float(tolerance.high))),
        dc_divides=kind == "resistor",
    )
    return PartNotes(kind, share, thermal_resistance=thermal, ambient=ambient)


def checks_of(design: Design, policy: Policy, kelvin: Mapping[str, float], *, full: bool) -> list[Check]:
    """Every check of a state, parts in file order, quantities in registry order.

    kelvin: upper temperature of the parts for which it is known; full: compare with full ratings (fault states).
    """
    everything = "; ".join(unavailable(design))
    found = []
    for kind in KINDS:
        for name, part in present(design, kind):
            for quantity in quantities_of(kind):
                limits = limits_for(policy, kind, name, part, quantity.name, kelvin=kelvin.get(name), full=full)
                if limits.outcome == "not-asked":
                    continue
                obstacle = everything or _obstacle(design, kind, name, part, quantity.name)
                found.append(Check(name, kind, quantity.name, quantity.unit, limits, obstacle))
    return found + _declared_only(design, found)


def _declared_only(design: Design, found: list[Check]) -> list[Check]:
    """Checks that the file asks for and that don't exist yet: said, not passed over in silence."""
    none = PartLimits((), False, "", "not-checked")
    return [
        Check(name, kind, "voltage_peak", "V", none, f"the check of a {kind} isn't made yet")
        for kind in ("spacing", "probe")
        for name in getattr(design, kind)
    ]


def unavailable(design: Design) -> list[str]:
    """What the file declares that changes every stress and that isn't computed."""
    found = []
    for kind in ("capacitor", "inductor", "resistor"):
        for name, part in present(design, kind):
            if part.temperature_coefficient is not None and design.site.ambient_span() is None:
                found.append(
                    f"temperature_coefficient of {name}: site.ambient isn't declared, so its drift isn't known"
                )
    for name, part in present(design, "inductor"):
        if part.winding is not None and missing_for_winding(part):
            keys = ", ".join(missing_for_winding(part))
            found.append(f"winding of {name}: its resistance needs {keys}; declare that, or resistance or q instead")
    return found


def _is_class_2(part: Any) -> bool:
    family = load_families().find("capacitor", part.family) if part.family else None
    return family is not None and family.belongs_to(("ceramic class 2",))


def _obstacle(design: Design, kind: str, name: str, part: Any, quantity: str) -> str:
    """Why one stress can't be computed from what the file declares."""
    near = refusal(design, kind, name, part)
    if near:
        return near
    heat = quantity in ("dissipation", "temperature")
    if kind == "capacitor" and _is_class_2(part):
        return f"{name} is a class-2 ceramic: its capacitance falls with voltage, so a linear solution doesn't hold"
    if heat and kind == "capacitor" and part.dissipation_factor is None and part.esr is None and part.q is None:
        return f"no loss of {name} is declared (dissipation_factor, esr or q)"
    if heat and kind == "inductor":
        if part.winding is not None:
            return (
                f"the heat of {name}: what its turns and layers cause in each other comes on top of the skin effect "
                "and isn't computed; declare resistance or q for it"
            )
        if part.resistance is None and part.q is None:
            return f"no loss of {name} is declared (resistance or q)"
        if part.core is not None:
            return f"the core loss of {name} isn't computed"
    if quantity == "temperature":
        if part.thermal_resistance is None:
            return f"thermal_resistance of {name} isn't declared"
        if design.site.ambient_span() is None:
            return "site.ambient isn't declared"
    if quantity == "flux_density" and (part.turns is None or part.core_area is None):
        return f"turns and core_area of {name} are needed"
    if quantity == "pulse_energy":
        return "the energy of pulses isn't computed"
    return ""

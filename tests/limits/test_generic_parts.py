"""The made-up parts: usable as parts of a design, complete for sign-off, with families that policies know."""

from __future__ import annotations

import tomllib
from typing import Any

import pytest

from stresscheck.design.parts import Capacitor, Inductor, Resistor, Valued
from stresscheck.limits.families import load_families
from stresscheck.limits.part_limits import limits_for
from stresscheck.limits.policy import list_policies
from stresscheck.limits.quantities import quantities_of
from stresscheck.shipped import ratings_dir

MODELS: dict[str, type[Valued]] = {"capacitor": Capacitor, "inductor": Inductor, "resistor": Resistor}
PARTS = [
    (kind, name, table)
    for path in sorted((ratings_dir() / "parts").glob("*.toml"))
    for kind, parts in tomllib.loads(path.read_text(encoding="utf-8")).items()
    if kind in MODELS
    for name, table in parts.items()
]


@pytest.mark.parametrize(("kind", "name", "table"), PARTS, ids=lambda v: v if isinstance(v, str) else "")
def test_generic_part_has_every_rating_that_sign_off_needs(kind: str, name: str, table: dict[str, Any]) -> None:
    part = MODELS[kind].model_validate({**table, "between": ["a", "b"]})
    for policy in list_policies():
        for quantity in quantities_of(kind):
            found = limits_for(policy, kind, name, part, quantity.name, kelvin=313.15, full=False)
            assert found.outcome in ("limits", "not-asked"), (policy.name, quantity.name, found.why)


@pytest.mark.parametrize(("kind", "name", "table"), PARTS, ids=lambda v: v if isinstance(v, str) else "")
def test_generic_part_has_a_known_family(kind: str, name: str, table: dict[str, Any]) -> None:
    family = load_families().find(kind, table["family"])
    assert family is not None, name
    assert family.name == table["family"], name


def test_generic_part_names_are_unique() -> None:
    names = [name for _, name, _ in PARTS]
    assert len(names) == len(set(names)) >= 12

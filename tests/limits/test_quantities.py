"""The registry of quantities against the design file's own tables."""

from __future__ import annotations

import pytest

from stresscheck.design.parts import CapacitorRating, DriveRating, InductorRating, ResistorRating, Table
from stresscheck.limits.quantities import KINDS, QUANTITIES, quantities_of, quantity_of

RATINGS: dict[str, type[Table]] = {
    "capacitor": CapacitorRating,
    "inductor": InductorRating,
    "resistor": ResistorRating,
    "drive": DriveRating,
}
NOT_LIMITS = {"source", "saturation_drop"}


def test_kinds_have_a_rating_table_each() -> None:
    assert set(KINDS) == set(RATINGS)


@pytest.mark.parametrize("kind", KINDS)
def test_rating_keys_of_the_file_are_all_compared(kind: str) -> None:
    """A rating that someone enters and nothing compares with would be silently ignored."""
    compared = {key for quantity in quantities_of(kind) for key in quantity.rating_keys}
    assert compared == set(RATINGS[kind].model_fields) - NOT_LIMITS


def test_quantity_needs_are_reported_by_a_quantity_of_the_group() -> None:
    for quantity in QUANTITIES:
        if quantity.need is not None:
            speaker = quantity_of(quantity.kind, quantity.need.speaker)
            assert speaker.need == quantity.need
            assert set(quantity.need.rating_keys) & set(quantity.rating_keys)


def test_quantity_pairs_are_unique() -> None:
    pairs = [(quantity.kind, quantity.name) for quantity in QUANTITIES]
    assert len(pairs) == len(set(pairs))


def test_quantity_of_unknown_pair_names_the_known_ones() -> None:
    with pytest.raises(ValueError, match="known: dissipation, voltage_peak"):
        quantity_of("resistor", "slew_rate")

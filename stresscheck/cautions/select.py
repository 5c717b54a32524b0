"""Picks the worst state of each subject: one caution for a hazard and a subject, not one for each state."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from typing import TypeVar

from stresscheck.cautions.facts import CapacitorFact, Facts, NodeFact

Fact = TypeVar("Fact", NodeFact, CapacitorFact)


def worst_nodes(
    facts: Facts, fires: Callable[[NodeFact], bool], size: Callable[[NodeFact], float]
) -> Iterator[NodeFact]:
    """For each node within reach the largest of its known facts that fire, by name of the node."""
    firing = (fact for fact in facts.nodes if fact.reachable and fact.known and fires(fact))
    return _worst(firing, lambda fact: fact.node, size)


def worst_capacitors(
    facts: Facts, fires: Callable[[CapacitorFact], bool], size: Callable[[CapacitorFact], float]
) -> Iterator[CapacitorFact]:
    """For each capacitor the largest of its known facts that fire, by name of the part.

    Facts that don't fire are left out before the largest is taken: tiers differ by voltage, so the state with
    the largest figure isn't always one that fires.
    """
    firing = (fact for fact in facts.capacitors if fact.known and fires(fact))
    return _worst(firing, lambda fact: fact.part, size)


def _worst(facts: Iterable[Fact], subject: Callable[[Fact], str], size: Callable[[Fact], float]) -> Iterator[Fact]:
    largest: dict[str, Fact] = {}
    for fact in facts:
        held = largest.get(subject(fact))
        if held is None or size(fact) > size(held):
            largest[subject(fact)] = fact
    for name in sorted(largest):
        yield largest[name]

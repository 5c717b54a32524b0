"""JSON Schema of the design file, from the models that read it, for editors."""

from __future__ import annotations

from typing import Any

from stresscheck.design.model import PART_KINDS, Design

DIALECT = "https://json-schema.org/draft/2020-12/schema"
NAME = {"pattern": "^[A-Za-z0-9_-]{1,40}$"}
BY_PART = ("Capacitor", "Inductor", "Resistor")
"""Models whose value may come from the parts file that `part` names."""


def design_schema() -> dict[str, Any]:
    """JSON Schema (draft 2020-12) of the design file: one table for each kind, unknown keys refused.

    It never refuses what the reader takes. The reader refuses more: dimensions of units, plausible sizes, keys that
    exclude each other, and the wiring.
    """
    schema = _tidy(Design.model_json_schema())
    for model in BY_PART:
        schema["$defs"][model]["required"].remove("value")
    for kind in (*PART_KINDS, "state", "accept"):
        schema["properties"][kind] |= {"propertyNames": NAME, "minProperties": 1, "description": f"{kind}s by name"}
    schema["description"] = "One circuit, its site, the ratings of its parts and the states it is reviewed in."
    return {
        "$schema": DIALECT,
        "$id": "stresscheck-design.json",
        **schema,
        "title": "stresscheck design file, format 1",
    }


def _tidy(node: Any) -> Any:
    """Without what TOML can't write (null) and what says nothing (titles made from keys)."""
    if isinstance(node, list):
        return [_tidy(item) for item in node]
    if not isinstance(node, dict):
        return node
    node = dict(node)
    if isinstance(node.get("title"), str):
        del node["title"]
    if node.get("default", 0) is None:
        del node["default"]
    if "anyOf" in node:
        left = [option for option in node.pop("anyOf") if option != {"type": "null"}]
        node |= left[0] if len(left) == 1 else {"anyOf": left}
    return {key: _tidy(value) for key, value in node.items()}

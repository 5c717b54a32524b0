"""JSON Schema of the design file, from the models that read it, for editors."""

from __future__ import annotations

from typing import Any

from stresscheck.design.model import Design

DIALECT = "https://json-schema.org/draft/2020-12/schema"


def design_schema() -> dict[str, Any]:
    """The schema, one table per kind of part; unknown keys are refused as the reader refuses them.

    A level or offset of a drive may be in V or in A: the schema takes any text there, the reader decides.
    """
    schema = Design.model_json_schema()
    drive = schema["$defs"]["Drive"]["properties"]
    for key in ("peak", "rms", "peak_to_peak", "offset"):
        drive[key] = {"type": "string", "description": "level with its unit, V or A", "examples": ["12 V", "2 A"]}
    drive["harmonics"] = {
        "type": "array",
        "description": "[order, relative size, phase in degrees] of each harmonic",
        "items": {"type": "array", "items": {"type": "number"}, "minItems": 3, "maxItems": 3},
    }
    schema["$defs"]["Transformer"]["properties"]["turns"] = {
        "type": "array", "items": {"type": "number", "exclusiveMinimum": 0}, "minItems": 2, "maxItems": 2
    }  # fmt: skip
    return {
        "$schema": DIALECT,
        "$id": "stresscheck-design.json",
        **schema,
        "title": "stresscheck design file, format 1",
    }

"""The JSON Schema (2020-12) of a flowsheet file, made from the classes of equipment.

An editor that knows it completes kinds and settings and marks what does not fit.
"""

from __future__ import annotations

from typing import Any, get_args

from pydantic import BaseModel
from pydantic.json_schema import GenerateJsonSchema

from chainflow.basis.names import NAME_PATTERN
from chainflow.basis.quantities import Temperature
from chainflow.equipment.base import Equipment
from chainflow.equipment.register import kinds
from chainflow.flowsheet.costs import CostBlock
from chainflow.flowsheet.environment import Surroundings
from chainflow.flowsheet.rungs import WORDS
from chainflow.thermo.components import known_components

DIALECT = "https://json-schema.org/draft/2020-12/schema"
_KNOB = {"type": "string", "pattern": rf"^\${NAME_PATTERN}$", "description": "a knob"}
_CHAINS = r"^C[0-9]{1,2}(-C[0-9]{1,2}|\+)?=?$"  # C1-C30, C21+, C2-C20=
_NAME_KEYS = {"pattern": f"^{NAME_PATTERN}$"}


def json_schema() -> dict[str, Any]:
    """Return the schema of a whole flowsheet file."""
    definitions: dict[str, Any] = {}
    pieces = [_kind(cls, definitions) for cls in kinds().values()]
    return {
        "$schema": DIALECT,
        "title": "chainflow flowsheet",
        "type": "object",
        "additionalProperties": False,
        "required": ["equipment", "lines"],
        "properties": {
            "title": {"type": "string", "description": "any text"},
            "basis": {"enum": ["LHV", "HHV"], "description": "heating value of headline figures"},
            "ambient": _or_knob(_quantity("K", "temperature of the surroundings (25 degC)")),
            "approach": _or_knob(
                _quantity("K", "least temperature difference of the heat account (10 K)")
            ),
            "components": {
                "type": "array",
                "items": {"anyOf": [{"enum": list(known_components())}, {"pattern": _CHAINS}]},
                "uniqueItems": True,
            },
            "knobs": {"type": "object", "propertyNames": _NAME_KEYS},
            "equipment": {
                "type": "object",
                "propertyNames": _NAME_KEYS,
                "additionalProperties": {
                    "type": "object",
                    "required": ["kind"],
                    "properties": {"kind": {"enum": list(kinds())}},
                    "allOf": pieces,
                },
            },
            "lines": {
                "type": "array",
                "items": {"type": "string", "pattern": "->", "description": "from -> to"},
            },
            "holds": {"type": "array", "items": _hold()},
            "environment": _block(Surroundings, definitions),
            "rungs": _rungs(),
            "costs": _block(CostBlock, definitions),
        },
        "$defs": definitions,
    }


def _kind(cls: type[Equipment], definitions: dict[str, Any]) -> dict[str, Any]:
    """If the kind is this one, its settings are these."""
    schema = cls.model_json_schema(
        ref_template="#/$defs/{model}", schema_generator=GenerateJsonSchema
    )
    definitions |= {name: _loose(part) for name, part in schema.pop("$defs", {}).items()}
    settings = {name: _or_knob(part) for name, part in schema.get("properties", {}).items()}
    return {
        "if": {"properties": {"kind": {"const": cls.kind}}},
        "then": {
            "description": (cls.__doc__ or "").split("\n")[0],
            "properties": {"kind": {"const": cls.kind}, **settings},
            "required": schema.get("required", []),
            "additionalProperties": False,
        },
    }


def _block(cls: type[BaseModel], definitions: dict[str, Any]) -> dict[str, Any]:
    """One optional block at the top, from its model."""
    schema = cls.model_json_schema(
        ref_template="#/$defs/{model}", schema_generator=GenerateJsonSchema
    )
    definitions |= {name: _loose(part) for name, part in schema.pop("$defs", {}).items()}
    return {**_loose(schema), "additionalProperties": False}


def _rungs() -> dict[str, Any]:
    ports = {"type": "array", "items": {"type": "string", "pattern": r"\."}, "minItems": 1}
    return {
        "type": "object",
        "description": "names of cuts in the order of the chain",
        "propertyNames": _NAME_KEYS,
        "additionalProperties": {"anyOf": [{"enum": list(WORDS)}, ports]},
    }


def _loose(model: dict[str, Any]) -> dict[str, Any]:
    """A nested model whose values may be knobs too."""
    parts = {name: _or_knob(part) for name, part in model.get("properties", {}).items()}
    return {**model, "properties": parts}


def _or_knob(schema: dict[str, Any]) -> dict[str, Any]:
    """A setting that a knob may stand for."""
    notes = {k: v for k, v in schema.items() if k in ("description", "default", "title")}
    rest = {k: v for k, v in schema.items() if k not in notes}
    return {**notes, "anyOf": [rest, _KNOB]}


def _quantity(unit: str, means: str) -> dict[str, Any]:
    """A quantity as the ready type describes it."""
    _, marker = get_args(Temperature)
    return {**marker.__get_pydantic_json_schema__(None, None), "x-unit": unit, "description": means}


def _hold() -> dict[str, Any]:
    text = {"type": ["string", "number"]}
    return {
        "type": "object",
        "additionalProperties": False,
        "required": ["hold", "at", "by", "within"],
        "properties": {
            "hold": {"type": "string", "description": "address of the result that is held"},
            "at": {**text, "description": "its value"},
            "by": {"type": "string", "description": "address of the setting that is moved"},
            "within": {"type": "array", "items": text, "minItems": 2, "maxItems": 2},
        },
    }

"""The numbers among the settings of equipment: their units, and copies with another number."""

from __future__ import annotations

import types
import typing
from dataclasses import replace
from typing import Annotated, Any


def replaced(old: Any, path: tuple[str, ...], number: float) -> Any:
    if path:
        return {**old, path[0]: replaced(old[path[0]], path[1:], number)}
    if hasattr(old, "value") and hasattr(old, "_replace"):
        return old._replace(value=number)
    if hasattr(old, "value"):
        return replace(old, value=number)
    return number


def unit_of(annotation: Any) -> str | None:
    """Find the unit of the number inside a setting's type."""
    if annotation is float:
        return ""
    origin = typing.get_origin(annotation)
    if origin is Annotated:
        for note in annotation.__metadata__:
            unit = getattr(note, "unit", None)
            if unit is not None:
                return str(unit)
        return unit_of(annotation.__origin__)
    if origin in (typing.Union, types.UnionType, dict):
        for part in typing.get_args(annotation)[1 if origin is dict else 0 :]:
            unit = unit_of(part)
            if unit is not None:
                return unit
    return None

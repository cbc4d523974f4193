"""The numbers among the settings of equipment: their units, and copies with another number."""

from __future__ import annotations

import types
import typing
from collections.abc import Mapping
from typing import Annotated, Any

from pydantic import BaseModel


def inside(value: Any, key: str) -> Any:
    """Return an entry of a map, a place of a list or a field of a part; KeyError if it has none."""
    if isinstance(value, BaseModel) and key in type(value).model_fields:
        return getattr(value, key)
    if isinstance(value, Mapping) and key in value:
        return value[key]
    if _is_list(value) and key.isdecimal() and int(key) < len(value):
        return value[int(key)]
    raise KeyError(key)


def keys_inside(value: Any) -> list[str]:
    """Return what `inside` takes."""
    if isinstance(value, BaseModel):
        return list(type(value).model_fields)
    if isinstance(value, Mapping):
        return list(value)
    return [str(place) for place in range(len(value))] if _is_list(value) else []


def number_of(value: Any) -> Any:
    """Return the number of a setting that also says what it counts (a flow, a based share)."""
    return value.value if hasattr(value, "_fields") else value


def replaced(old: Any, path: tuple[str, ...], number: float) -> Any:
    """Return a setting in which the number at a path is another."""
    if not path:
        return old._replace(value=number) if hasattr(old, "_fields") else number
    key = path[0]
    new = replaced(inside(old, key), path[1:], number)
    if isinstance(old, BaseModel):
        return old.model_copy(update={key: new})
    if isinstance(old, Mapping):
        return {**old, key: new}
    return (*old[: int(key)], new, *old[int(key) + 1 :])


def _is_list(value: Any) -> bool:
    return isinstance(value, tuple | list) and not hasattr(value, "_fields")


def type_at(annotation: Any, path: tuple[str, ...]) -> Any:
    """Find the type of the number at a path inside a setting of this type."""
    for key in path:
        model = _model_in(annotation)
        if model is not None and key in model.model_fields:
            info = model.model_fields[key]
            annotation = (
                Annotated[info.annotation, *info.metadata] if info.metadata else info.annotation
            )
    return annotation


def _model_in(annotation: Any) -> type[BaseModel] | None:
    if isinstance(annotation, type) and issubclass(annotation, BaseModel):
        return annotation
    found = (_model_in(part) for part in typing.get_args(annotation))
    return next((model for model in found if model is not None), None)


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


def is_difference(annotation: Any) -> bool:
    """Whether a setting's type is that of a temperature difference."""
    notes = annotation.__metadata__ if typing.get_origin(annotation) is Annotated else ()
    if any(getattr(note, "difference", False) for note in notes):
        return True
    return any(is_difference(part) for part in typing.get_args(annotation))


def stated(model: BaseModel) -> set[str]:
    """Return the settings that were given, but for those given as they are by default."""
    fields = type(model).model_fields
    return {
        name
        for name in model.model_fields_set
        if fields[name].is_required() or getattr(model, name) != fields[name].get_default()
    }

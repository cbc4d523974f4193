"""What kinds of equipment are there, and what does each take? Printed from the classes themselves.

One source of truth: ports, settings with units, ranges and defaults, formulas and sources all come
from the class.
"""

from __future__ import annotations

import inspect
import types
import typing
from collections.abc import Iterator, Mapping
from typing import TYPE_CHECKING, Annotated, Any

from pydantic import BaseModel, WithJsonSchema
from pydantic.fields import FieldInfo
from pydantic_core import PydanticUndefined

from chainflow.basis.quantities import QuantityType
from chainflow.equipment.base import Equipment
from chainflow.equipment.ports import Port

if TYPE_CHECKING:
    from rich.console import Console

_UNIONS = (typing.Union, types.UnionType)
_MANY = 5  # settings of a map that are not named on its own line too
_WHO = {
    "offers": "the amount is what leaves here",
    "serves": "the receiver asks for the amount",
    "takes": "accepts what arrives",
    "calls": "asks for the amount it needs",
}


def print_kinds(screen: Console, kinds: Mapping[str, type[Equipment]]) -> None:
    """Print one line for each kind."""
    width = max(map(len, kinds))
    for name, kind in kinds.items():
        screen.print(f"{name:<{width}}  {first_line(kind)}")


def print_kind(screen: Console, kind: type[Equipment]) -> None:
    """Print one kind in full."""
    screen.print(kind.kind, style="bold")
    for line in documentation(kind).splitlines():
        screen.print(line)
    for title, lines in (
        ("Ports", port_lines(kind)),
        ("Settings", setting_lines(kind)),
        ("Formulas", iter(kind.formulas)),
        ("Sources", iter(kind.sources)),
    ):
        found = list(lines)
        if found:
            screen.print(f"\n{title}", style="bold")
            for line in found:
                screen.print(f"  {line}")


def documentation(kind: type[Equipment]) -> str:
    """Return the docstring of a kind, without indentation."""
    return inspect.cleandoc(kind.__doc__ or "")


def first_line(kind: type[Equipment]) -> str:
    """Return the first line of a kind's docstring."""
    return documentation(kind).partition("\n")[0]


def port_lines(kind: type[Equipment]) -> Iterator[str]:
    """Yield one line for each port, inlets first."""
    for port in sorted(kind.ports, key=lambda p: not p.is_inlet):
        yield _port_line(port)


def _port_line(port: Port) -> str:
    side = "inlet " if port.is_inlet else "outlet"
    name = "(any name)" if port.any_name else port.name
    words = [port.content if port.content != "any" else "any content", _WHO[port.role.value]]
    words += [word for word, on in _traits(port) if on]
    means = f": {port.means}" if port.means else ""
    return f"{side} {name}{means} [{'; '.join(words)}]"


def _traits(port: Port) -> tuple[tuple[str, bool], ...]:
    return (
        ("main port, may be left out in a line", port.main),
        ("any number of lines", port.many),
        ("may stay without a line", port.optional),
    )


def setting_lines(kind: type[Equipment]) -> Iterator[str]:
    """Yield one line for each setting: name, default, what it means, what it takes.

    The settings of a map stand below it, with its name in front as in an address.
    """
    yield from _lines_of(kind, "")


def _lines_of(model: type[BaseModel], above: str) -> Iterator[str]:
    for name, field in model.model_fields.items():
        takes = " or ".join(dict.fromkeys(_takes(_full_type(field))))
        means = f": {field.description}" if field.description else ""
        yield f"{above}{name} ({_default(field)}){means} [{takes}]"
        inner = _map_of(field.annotation)
        if inner is not None:
            yield from _lines_of(inner, f"{above}{name}.")


def _map_of(annotation: Any) -> type[BaseModel] | None:
    """Return the model of a setting that is one map, not of a list of them."""
    parts = typing.get_args(annotation) if typing.get_origin(annotation) in _UNIONS else ()
    for part in parts or (annotation,):
        if isinstance(part, type) and issubclass(part, BaseModel):
            return part
    return None


def _full_type(field: FieldInfo) -> Any:
    if field.metadata:
        return Annotated[(field.annotation, *field.metadata)]
    return field.annotation


def _takes(annotation: Any) -> Iterator[str]:
    """Yield in words what a setting accepts."""
    marker = _marker(annotation)
    origin = typing.get_origin(annotation)
    in_words = _schema_words(annotation)
    if marker is not None:
        yield marker.described()
    elif in_words:
        yield in_words
    elif origin is Annotated:
        yield from _takes(annotation.__origin__)
    elif origin in _UNIONS:
        for part in typing.get_args(annotation):
            yield from _takes(part)
    elif origin is typing.Literal:
        yield from (str(word) for word in typing.get_args(annotation))
    elif origin is dict:
        inside = " or ".join(dict.fromkeys(_takes(typing.get_args(annotation)[1])))
        yield f"a map from names to {inside}"
    elif origin in (tuple, list):
        inside = " or ".join(dict.fromkeys(_takes(typing.get_args(annotation)[0])))
        yield f"a list of {inside}"
    elif annotation is not type(None):
        yield _plain_type(annotation)


def _marker(annotation: Any) -> QuantityType | None:
    notes = getattr(annotation, "__metadata__", ())
    return next((note for note in notes if isinstance(note, QuantityType)), None)


def _schema_words(annotation: Any) -> str:
    """Return what a setting that is read in its own way says of itself in the schema."""
    notes = getattr(annotation, "__metadata__", ())
    schemas = (note.json_schema or {} for note in notes if isinstance(note, WithJsonSchema))
    return next((str(schema["description"]) for schema in schemas if "description" in schema), "")


def _plain_type(annotation: Any) -> str:
    named = {bool: "true or false", int: "a whole number", float: "a number", str: "text"}
    if annotation in named:
        return named[annotation]
    fields = getattr(annotation, "model_fields", None)
    if fields is None:
        return str(getattr(annotation, "__name__", annotation))
    return "a map of " + ", ".join(fields) if len(fields) < _MANY else "a map, see below"


def _default(field: FieldInfo) -> str:
    if field.is_required():
        return "required"
    value = field.get_default(call_default_factory=True)
    if value is None or value is PydanticUndefined or isinstance(value, BaseModel):
        return "optional"
    marker = next(_markers(_full_type(field)), None)
    if marker is not None and isinstance(value, float):
        return f"default {marker.shown(value)}"
    return f"default {str(value).lower() if isinstance(value, bool) else value}"


def _markers(annotation: Any) -> Iterator[QuantityType]:
    marker = _marker(annotation)
    if marker is not None:
        yield marker
        return
    for part in typing.get_args(annotation):
        yield from _markers(part)

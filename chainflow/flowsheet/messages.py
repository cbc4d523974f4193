"""Turn what pydantic finds wrong with settings into one clear sentence each."""

from __future__ import annotations

import typing
from collections.abc import Iterator, Mapping
from typing import Any

from pydantic import BaseModel, ValidationError

from chainflow.basis.names import LONGEST_NAME, shorten, suggest

_CODES = {
    "extra_forbidden": "unknown-setting",
    "missing": "missing-setting",
    "quantity": "wrong-quantity",
    "shares": "wrong-shares",
}
_NOTES = (
    "function-",
    "constrained-",
    "literal[",
    "lax-or-strict",
    "nullable",
    "json-or-python",
    "is-instance",
)


class Complaint(typing.NamedTuple):
    """What is wrong with one setting."""

    code: str
    path: tuple[str | int, ...]
    text: str
    at_key: bool


def complaints(problem: ValidationError, model: type[BaseModel], name: str) -> Iterator[Complaint]:
    """Each fault of the settings of `name`, once for each place."""
    groups: dict[tuple[str | int, ...], list[Any]] = {}
    for error in problem.errors(include_url=False, include_context=True):
        path = tuple(part for part in error["loc"] if not _is_note(part))
        groups.setdefault(path, []).append(error)
    misspelt = {_meant(path, model) for path, errors in groups.items() if _unknown(errors)}
    for path, errors in groups.items():
        kind = errors[0]["type"]
        if kind == "missing" and path in misspelt:
            continue  # the unknown setting is this one
        where = ".".join(bare(str(part)) for part in path)
        named = f"{where}: " if where and kind not in ("missing", "extra_forbidden") else ""
        text = f"{bare(name)}: {named}{_sentence(errors, path, model)}"
        yield Complaint(_CODES.get(kind, "wrong-setting"), path, text, _unknown(errors))


def bare(word: str) -> str:
    """A word from a file, safe to print, without quotes."""
    return shorten(word, LONGEST_NAME)[1:-1]


def _unknown(errors: list[Any]) -> bool:
    return bool(errors[0]["type"] == "extra_forbidden")


def _meant(path: tuple[str | int, ...], model: type[BaseModel]) -> tuple[str | int, ...]:
    """The path of the setting that an unknown one was probably meant to be."""
    known = _fields(model, path[:-1])
    hint = suggest(str(path[-1]), known)
    return next(((*path[:-1], word) for word in known if f"'{word}'" in hint), ())


def _is_note(part: str | int) -> bool:
    """Parts of a location that pydantic adds for its own unions."""
    return isinstance(part, str) and (
        part.startswith(_NOTES) or part in ("float", "int", "str", "none")
    )


def _sentence(errors: list[Any], path: tuple[str | int, ...], model: type[BaseModel]) -> str:
    error = errors[0]
    kind, given = error["type"], error["input"]
    if kind == "missing":
        return f"'{path[-1]}' is missing, wanted {_wanted(model, path)}"
    if kind == "extra_forbidden":
        return _no_such_setting(str(path[-1]), _fields(model, path[:-1]))
    if len(errors) > 1:
        wanted = " or ".join(dict.fromkeys(_expected(e) for e in errors))
        return f"{_found(given)}, wanted {wanted}"
    if kind == "literal_error":
        hint = "" if _is_tree(given) else suggest(str(given), _choices(error))
        return f"{_found(given, hint)}, wanted {error['ctx']['expected']}"
    if error["msg"].startswith("Input"):
        return f"{_found(given)}, wanted {_expected(error)}"
    return str(error["msg"])


def _is_tree(given: Any) -> bool:
    return isinstance(given, Mapping | list)


def _found(given: Any, hint: str = "") -> str:
    """Say what stood there and does not do."""
    if _is_tree(given):
        return f"{'a list' if isinstance(given, list) else 'a map'} is not possible here"
    return f"{shorten(str(given))} is not possible{hint}"


def _no_such_setting(word: str, known: list[str]) -> str:
    if word[:1].isdigit():
        return (
            f"{shorten(word)} stands where the name of a setting is wanted: inside braces a comma "
            "ends a value, so write numbers with a decimal point"
        )
    listed = ", ".join(known) or "none"
    return f"there is no setting {shorten(word)}{suggest(word, known)}; known here: {listed}"


def _choices(error: Any) -> list[str]:
    return [
        word.strip("' ") for word in str(error["ctx"]["expected"]).replace(" or ", ",").split(",")
    ]


def _expected(error: Any) -> str:
    kind, context = error["type"], error.get("ctx", {})
    words = {
        "int_parsing": "a whole number",
        "int_type": "a whole number",
        "int_from_float": "a whole number",
        "float_parsing": "a number",
        "float_type": "a number",
        "bool_parsing": "true or false",
        "bool_type": "true or false",
        "dict_type": "a map such as {H2: 4, CO2: 1}",
        "tuple_type": "a list",
        "list_type": "a list",
        "string_type": "a text",
        "model_type": "a map of settings",
        "finite_number": "a finite number",
    }
    if kind in words:
        return words[kind]
    if kind == "literal_error":
        return str(context["expected"])
    if kind == "greater_than":
        return f"more than {context['gt']:g}"
    if kind == "greater_than_equal":
        return f"at least {context['ge']:g}"
    return str(error["msg"]).removeprefix("Input should be ")


def _fields(model: type[BaseModel], path: tuple[str | int, ...]) -> list[str]:
    """Setting names of the model at a path."""
    found = _model_at(model, path)
    return list(found.model_fields) if found is not None else []


def _model_at(model: type[BaseModel], path: tuple[str | int, ...]) -> type[BaseModel] | None:
    current: type[BaseModel] | None = model
    free = False  # whether any name may stand here
    for part in path:
        if isinstance(part, int) or free:
            free = False
            continue
        info = current.model_fields.get(part) if current is not None else None
        current = _nested(info.annotation) if info is not None else None
        free = info is not None and typing.get_origin(info.annotation) is dict
    return current


def _nested(annotation: Any) -> type[BaseModel] | None:
    if isinstance(annotation, type) and issubclass(annotation, BaseModel):
        return annotation
    for part in typing.get_args(annotation):
        found = _nested(part)
        if found is not None:
            return found
    return None


def _wanted(model: type[BaseModel], path: tuple[str | int, ...]) -> str:
    """What a missing setting is for, from its description."""
    holder = _model_at(model, path[:-1])
    info = holder.model_fields.get(str(path[-1])) if holder is not None else None
    if info is None:
        return "it here"
    for note in info.metadata:
        described = getattr(note, "means", None)
        if callable(described):
            return f"{described()} ({info.description})" if info.description else str(described())
    return info.description or "a value"

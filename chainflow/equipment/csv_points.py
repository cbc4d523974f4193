"""How does a CSV file become columns of numbers in SI?

The first line holds headings with units in brackets, `current density [A/cm2]`, in any order; a
column is known by what its unit measures. Every further line is one point. Read as plain text,
limited in size, nothing evaluated. Separator: comma, semicolon or tab; numbers with a decimal
point.
"""

from __future__ import annotations

import csv
import math
import re
from collections.abc import Mapping
from pathlib import Path
from typing import NamedTuple

from chainflow.basis.faults import FileFault
from chainflow.basis.names import shorten
from chainflow.basis.units import Unit, UnitFault, noun, resolve

LARGEST = 1_000_000  # [bytes]
MOST_POINTS = 10_000
_HEADING = re.compile(r"^(?P<name>[^\[\](]*?)\s*[\[(](?P<unit>.+)[\])]$")
_NUMBER = re.compile(r"[+-]?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+-]?[0-9]{1,3})?")


class CurveFault(ValueError):
    """A file that is no curve; one sentence that begins with its name."""


class Wanted(NamedTuple):
    """A column that is looked for."""

    unit: str  # in SI
    means: str  # in words
    optional: bool = False


class Form(NamedTuple):
    """What a file must hold."""

    columns: Mapping[str, Wanted]
    example: str  # of headings
    hint: str = ""  # where a current stands in place of a current density


class Point(NamedTuple):
    """One line of a file: its number and its values in SI by the names of the columns."""

    line: int
    values: dict[str, float]


class _Column(NamedTuple):
    place: int
    unit: Unit


def read_points(name: str, folder: str | Path, form: Form) -> list[Point]:
    """Return the points of a CSV file in its order.

    A relative name counts from `folder`. Raises `FileFault` if there is no such file, `CurveFault`
    if it is no curve.
    """
    shown = shorten(name, 100)
    rows = _rows(Path(folder) / name, shown)
    if not rows:
        raise CurveFault(f"{shown} is empty, wanted headings such as {form.example}")
    columns = _columns(rows[0][1], shown, form)
    found = [
        Point(line, {key: _value(cells, column, line, shown) for key, column in columns.items()})
        for line, cells in rows[1:]
    ]
    if not found:
        raise CurveFault(f"{shown} has headings and no points below them")
    return found


def _rows(path: Path, shown: str) -> list[tuple[int, list[str]]]:
    """Return the lines that hold something, with their numbers."""
    try:
        with path.open("rb") as file:
            content = file.read(LARGEST + 1)
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or "it is no path of a file"
        raise FileFault(f"cannot read the curve {shown}: {reason}") from None
    if len(content) > LARGEST:
        raise CurveFault(f"{shown} is larger than {LARGEST} bytes: leave points out")
    try:
        text = content.decode("utf-8-sig")
    except UnicodeDecodeError:
        raise CurveFault(f"{shown} is not UTF-8 text: save it as UTF-8 CSV") from None
    first = text.split("\n", 1)[0]
    separator = next((sign for sign in (";", "\t") if sign in first), ",")
    try:
        lines = list(csv.reader(text.splitlines(), delimiter=separator, strict=True))
    except csv.Error as error:
        raise CurveFault(f"{shown} is no CSV file: {error}") from None
    rows = [(i, [c.strip() for c in cells]) for i, cells in enumerate(lines, start=1) if any(cells)]
    if len(rows) > MOST_POINTS:
        raise CurveFault(f"{shown} has more than {MOST_POINTS} points: leave some out")
    return rows


def _columns(headings: list[str], shown: str, form: Form) -> dict[str, _Column]:
    """Return which column is what, by the unit in its heading."""
    columns: dict[str, _Column] = {}
    strange: list[str] = []
    for place, heading in enumerate(headings):
        unit = _unit(heading, shown, form)
        key = next((k for k, one in form.columns.items() if _measures(unit, one.unit)), None)
        if key is None:
            strange.append(f"{shorten(heading)} is {noun(unit.exponents)}")
        elif key in columns:
            raise CurveFault(f"{shown} has two columns with {form.columns[key].means}: keep one")
        else:
            columns[key] = _Column(place, unit)
    for key, one in form.columns.items():
        if key not in columns and not one.optional:
            raise CurveFault(_missing(one.means, strange, headings, shown, form))
    return columns


def _missing(wanted: str, strange: list[str], headings: list[str], shown: str, form: Form) -> str:
    if not strange:
        listed = ", ".join(shorten(heading) for heading in headings)
        return f"{shown} has the columns {listed}, wanted {wanted} too, as in {form.example}"
    hint = form.hint if "a current" in strange[0] else ""
    return f"{shown}: column {strange[0]}, wanted {wanted}{hint}"


def _unit(heading: str, shown: str, form: Form) -> Unit:
    match = _HEADING.match(heading)
    if match is None:
        raise CurveFault(
            f"{shown}: the heading {shorten(heading)} has no unit in brackets, wanted headings "
            f"such as {form.example}"
        )
    try:
        return resolve(match["unit"].strip())
    except UnitFault as fault:
        raise CurveFault(f"{shown}: the heading {shorten(heading)}: {fault}") from None


def _measures(unit: Unit, si: str) -> bool:
    return unit.exponents == resolve(si).exponents


def _value(cells: list[str], column: _Column, line: int, shown: str) -> float:
    text = cells[column.place] if column.place < len(cells) else ""
    if not _NUMBER.fullmatch(text):
        hint = ": write numbers with a decimal point" if "," in text else ""
        raise CurveFault(f"{shown}, line {line}: {shorten(text)} is no number{hint}")
    value = column.unit.to_si(float(text))
    if not math.isfinite(value):
        raise CurveFault(f"{shown}, line {line}: {shorten(text)} is too large")
    return value

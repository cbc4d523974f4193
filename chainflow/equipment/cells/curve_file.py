"""How does a CSV file of measured voltages become points?

The first line holds headings with units in brackets, `current density [A/cm2]`, `voltage [V]` and
perhaps `temperature [degC]`, in any order; every further line one point. Read as plain text,
limited in size, nothing evaluated. Separator: comma, semicolon or tab; numbers with a decimal
point.
"""

from __future__ import annotations

import csv
import math
import re
from pathlib import Path
from typing import Any, NamedTuple

from chainflow.basis.names import shorten
from chainflow.basis.units import Unit, UnitFault, noun, resolve

LARGEST = 1_000_000  # [bytes]
MOST_POINTS = 10_000
_HEADING = re.compile(r"^(?P<name>[^\[\](]*?)\s*[\[(](?P<unit>.+)[\])]$")
_NUMBER = re.compile(r"[+-]?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+-]?[0-9]{1,3})?")


class CurveFault(ValueError):
    """A file that is no curve; one sentence that begins with its name."""


class _Column(NamedTuple):
    place: int
    unit: Unit


_WANTED = {
    "current_density": ("A/m2", "a current density in A/cm2"),
    "voltage": ("V", "a voltage in V"),
    "temperature": ("K", "a temperature in degC"),
}
_EXAMPLE = "current density [A/cm2], voltage [V]"


def read_curve(name: str, folder: str | Path = "") -> tuple[dict[str, Any], ...]:
    """Return the points of a CSV file, one map of lists in SI for each temperature.

    A relative name counts from `folder`. Raises `CurveFault`.
    """
    shown = shorten(name, 100)
    rows = _rows(Path(folder) / name, shown)
    if not rows:
        raise CurveFault(f"{shown} is empty, wanted headings such as {_EXAMPLE}")
    columns = _columns(rows[0][1], shown)
    found: dict[float | None, list[tuple[float, float]]] = {}
    for line, cells in rows[1:]:
        values = {key: _value(cells, column, line, shown) for key, column in columns.items()}
        points = found.setdefault(values.get("temperature"), [])
        points.append((values["current_density"], values["voltage"]))
    if not found:
        raise CurveFault(f"{shown} has headings and no points below them")
    return tuple(_branch(level, sorted(points)) for level, points in found.items())


def _branch(level: float | None, points: list[tuple[float, float]]) -> dict[str, Any]:
    branch: dict[str, Any] = {
        "current_density": [density for density, _ in points],
        "voltage": [voltage for _, voltage in points],
    }
    return branch if level is None else {"temperature": level, **branch}


def _rows(path: Path, shown: str) -> list[tuple[int, list[str]]]:
    """Return the lines that hold something, with their numbers."""
    try:
        with path.open("rb") as file:
            content = file.read(LARGEST + 1)
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or "it is no path of a file"
        raise CurveFault(f"cannot read the curve {shown}: {reason}") from None
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


def _columns(headings: list[str], shown: str) -> dict[str, _Column]:
    """Return which column is what, by the unit in its heading."""
    columns: dict[str, _Column] = {}
    strange: list[str] = []
    for place, heading in enumerate(headings):
        unit = _unit(heading, shown)
        key = next((k for k, (si, _) in _WANTED.items() if _measures(unit, si)), None)
        if key is None:
            strange.append(f"{shorten(heading)} is {noun(unit.exponents)}")
        elif key in columns:
            raise CurveFault(f"{shown} has two columns with {_WANTED[key][1]}: keep one")
        else:
            columns[key] = _Column(place, unit)
    for key in ("current_density", "voltage"):
        if key not in columns:
            raise CurveFault(_missing(key, strange, headings, shown))
    return columns


def _missing(key: str, strange: list[str], headings: list[str], shown: str) -> str:
    wanted = _WANTED[key][1]
    if not strange:
        listed = ", ".join(shorten(heading) for heading in headings)
        return f"{shown} has the columns {listed}, wanted {wanted} too, as in {_EXAMPLE}"
    hint = ": divide by the active area of a cell" if "a current" in strange[0] else ""
    return f"{shown}: column {strange[0]}, wanted {wanted}{hint}"


def _unit(heading: str, shown: str) -> Unit:
    match = _HEADING.match(heading)
    if match is None:
        raise CurveFault(
            f"{shown}: the heading {shorten(heading)} has no unit in brackets, wanted headings "
            f"such as {_EXAMPLE}"
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

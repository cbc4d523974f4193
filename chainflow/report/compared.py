"""A comparison as people read it, and as plain data: table, JSON document, CSV.

The table has a column for each flowsheet and fits any width: where the columns do not fit side by
side, the table comes in parts.
"""

from __future__ import annotations

import csv
import io
from collections.abc import Iterator, Sequence
from typing import TYPE_CHECKING, Any, TextIO

from chainflow.basis.formatting import format_number, format_quantity
from chainflow.report import numbers
from chainflow.report.document import FORMAT, Document, clean
from chainflow.report.plain import console, encoding_of, printable
from chainflow.studies.compare import Comparison, Route
from chainflow.studies.figures import Figure, Value, figures
from chainflow.studies.stages import Difference

if TYPE_CHECKING:
    from rich.console import Console

KWH = 3.6e6  # [J]
_GAP = "  "
_NOTHING = "-"
_FAILED = "not solved"
_LARGE = 1e5  # of money: no exponents beside whole numbers
_SMALL = 5e-5  # of what goes in: differences below are not worth a word
_CLOSING = (
    "A comparison is as good as its flowsheets: hazards are told by code here, 'chainflow solve' "
    "says each in full; local codes and a licensed engineer decide what may be built and run."
)


def print_comparison(found: Comparison, out: TextIO | None = None) -> None:
    """Print a comparison: the table, the differences in words, what failed, and notes."""
    screen = console(out)
    encoding = encoding_of(screen.file)
    rows = figures(found)
    for part in _parts(found, rows, screen.width):
        _print_part(screen, found, rows, part, encoding)
    for title, lines in (
        ("Differences", list(_difference_lines(found))),
        ("Not solved", list(_failed_lines(found))),
        ("Notes", list(found.notes)),
    ):
        if lines:
            screen.print(title, style="bold")
            for line in lines:
                screen.print(f"- {printable(line, encoding)}", soft_wrap=True)
            screen.print()
    screen.print(_CLOSING, soft_wrap=True)


def _group_title(found: Comparison, group: str) -> str:
    light = f" for {format_quantity(found.sunlight, 'W')} of sunlight" if found.sunlight else ""
    return {
        "efficiency": f"Efficiency, {found.basis}",
        "rungs": f"Rungs, {found.basis}",
        "lost": f"Lost, points of 100 that go in, {found.basis}",
        "store": "Kept",
        "size": f"Store for {format_quantity(found.energy, 'J')}",
        "needs": f"Needs{light}",
        "heat": f"Heat{light}",
        "hazards": "Cautions",
        "cost": "Cost",
    }[group]


def _parts(found: Comparison, rows: Sequence[Figure], width: int) -> list[list[int]]:
    """Places of the routes in each part of the table, so that every part fits the width."""
    left = width - _label_width(rows)
    parts: list[list[int]] = [[]]
    used = 0
    for place in range(len(found.routes)):
        needed = _column_width(found, rows, place) + len(_GAP)
        if parts[-1] and used + needed > left:
            parts.append([])
            used = 0
        parts[-1].append(place)
        used += needed
    return parts


def _label_width(rows: Sequence[Figure]) -> int:
    return max([len(row.label) for row in rows] + [len("sunlight to what is kept")])


def _column_width(found: Comparison, rows: Sequence[Figure], place: int) -> int:
    cells = [_cell(row, row.values[place]) for row in rows]
    return max(len(text) for text in (found.routes[place].name, _FAILED, *cells))


def _print_part(
    screen: Console, found: Comparison, rows: Sequence[Figure], part: list[int], encoding: str
) -> None:
    label = _label_width(rows)
    widths = [_column_width(found, rows, place) for place in part]
    names = [found.routes[place].name for place in part]
    head = _GAP.join(f"{name:>{width}}" for name, width in zip(names, widths, strict=True))
    screen.print(printable(f"{'':<{label}}{_GAP}{head}", encoding), style="bold", soft_wrap=True)
    group, said = "", False
    for row in rows:
        if all(row.values[place] is None for place in part):
            continue
        if row.group != group:
            group = row.group
            screen.print(_group_title(found, group), style="bold", soft_wrap=True)
        cells = [_cell(row, row.values[place]) for place in part]
        for place, route in enumerate(found.routes[place] for place in part):
            if not route.solved:
                cells[place] = "" if said else _FAILED
        said = True
        line = _GAP.join(f"{cell:>{width}}" for cell, width in zip(cells, widths, strict=True))
        screen.print(printable(f"{row.label:<{label}}{_GAP}{line}", encoding), soft_wrap=True)
    if not said:
        line = _GAP.join(f"{_FAILED:>{width}}" for width in widths)
        screen.print(f"{'':<{label}}{_GAP}{line}", soft_wrap=True)
    screen.print()


def _cell(row: Figure, value: Value) -> str:
    if value is None:
        return _NOTHING
    if isinstance(value, str):
        return value if value != "no" else _NOTHING
    if row.group == "lost":
        return f"{100 * value if abs(value) >= _SMALL else 0.0:.2f}"
    if row.unit == "share":
        return numbers.percent(value)
    if row.unit == "money" and abs(value) >= _LARGE:
        return f"{float(f'{value:.2e}'):.0f}"
    if row.unit in ("money", "kg/kWh"):
        return format_number(value, 3)
    if row.unit in ("J/m3", "J/kg"):
        return f"{format_number(value / KWH, 4)} kWh/{row.unit.removeprefix('J/')}"
    return format_quantity(value, row.unit)


# --- words ----------------------------------------------------------------------------------


def _difference_lines(found: Comparison) -> Iterator[str]:
    for first, other, one in found.differences():
        if one is None:
            yield (
                f"{other.name} against {first.name}: they do not end alike (power, or something "
                "kept), so nothing is told by stage"
            )
        else:
            yield _difference_line(first, other, one)


def _difference_line(first: Route, other: Route, one: Difference) -> str:
    points = 100 * (one.second - one.first)
    ends = f"{100 * one.second:.2f} against {100 * one.first:.2f} %"
    told = f"{other.name} against {first.name}, sunlight to {one.of}: {ends}"
    lost = [(n, g) for n, g in one.gained.items() if g < -_SMALL]
    won = [(n, g) for n, g in one.gained.items() if g > _SMALL]
    if not lost and not won:
        return f"{told}; no stage differs"
    parts = []
    for verb, stages in (("loses", lost), ("gains", won)):
        if stages:
            ranked = sorted(stages, key=lambda pair: -abs(pair[1]))
            listed = [f"{100 * abs(g):.2f} in {name}" for name, g in ranked]
            parts.append(f"{verb} {_listed(listed)}")
    return f"{told}; it {' and '.join(parts)}: {points:+.2f} points together"


def _listed(parts: list[str]) -> str:
    return parts[0] if len(parts) == 1 else f"{', '.join(parts[:-1])} and {parts[-1]}"


def _failed_lines(found: Comparison) -> Iterator[str]:
    for route in found.routes:
        if not route.solved:
            yield f"{route.name} ({route.path}): {route.why_not}"


# --- data -----------------------------------------------------------------------------------


def comparison_document(found: Comparison) -> Document:
    """Return a comparison as plain data; SI, None for what has no value."""
    from chainflow import __version__

    rows = figures(found)
    entries = [_route_entry(found, rows, place) for place in range(len(found.routes))]
    document: dict[str, Any] = {
        "format": FORMAT,
        "version": __version__,
        "basis": found.basis,
        "sunlight_W": found.sunlight,
        "energy_J": found.energy,
        "routes": entries,
        "differences": [_difference_entry(*triple) for triple in found.differences()],
        "notes": list(found.notes),
        "notice": _CLOSING,
    }
    return clean(document)


def _route_entry(found: Comparison, rows: Sequence[Figure], place: int) -> Document:
    route = found.routes[place]
    entry: Document = {
        "name": route.name,
        "path": route.path,
        "title": route.title or None,
        "solved": route.solved,
        "problem": None if route.solved else {"code": route.why_not_code, "text": route.why_not},
        "scale": found.scales.get(route.name),
    }
    if route.solved:
        for row in rows:
            if row.group == "hazards":
                continue
            entry.setdefault(row.group, {})[row.key] = row.values[place]
        entry["hazards"] = list(route.hazards)
    return entry


def _difference_entry(first: Route, other: Route, one: Difference | None) -> Document:
    entry: Document = {"route": other.name, "against": first.name}
    if one is None:
        return entry | {"of": None}
    return entry | {
        "of": one.of,
        "share": one.second,
        "share_against": one.first,
        "gained": dict(one.gained),
        "text": _difference_line(first, other, one),
    }


def comparison_csv(found: Comparison) -> str:
    """Return the rows of a comparison as CSV: group, figure, unit, one column for each route."""
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\n")
    writer.writerow(["group", "figure", "unit", *(route.name for route in found.routes)])
    for row in figures(found):
        unit = {"share": "1", "text": "", "money": "currency"}.get(row.unit, row.unit)
        writer.writerow([row.group, row.key, unit, *row.values])
    writer.writerow(["answer", "problem", "", *(route.why_not for route in found.routes)])
    return out.getvalue()

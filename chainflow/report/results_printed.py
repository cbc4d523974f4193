"""What each piece of equipment found, as people read it: voltages, sizes, shares, losses."""

from __future__ import annotations

from typing import TYPE_CHECKING, TextIO

from chainflow.basis.formatting import format_number, format_quantity
from chainflow.basis.units import is_named, resolve
from chainflow.flowsheet.addresses import is_difference, short_name, unit_of_result
from chainflow.report.plain import console, plain_table
from chainflow.solver.solution import Solution

if TYPE_CHECKING:
    from rich.table import Table


def print_results(solution: Solution, out: TextIO | None = None) -> None:
    """Print the own results of all equipment, in the order of the file."""
    screen = console(out)
    screen.print()
    screen.print("Results of the equipment", style="bold")
    screen.print(_table(solution))


def _table(solution: Solution) -> Table:
    table = plain_table("equipment", "result", "value", right=("value",))
    for name, outcome in solution.outcomes.items():
        for place, (result, value) in enumerate(outcome.results.items()):
            label = short_name(result).replace("_", " ")
            table.add_row("" if place else name, label, _shown(float(value), result))
    return table


def _shown(value: float, result: str) -> str:
    unit = unit_of_result(result)
    if value != value:  # a result that has no value here
        return "-"
    if unit == "1":
        return format_number(value)
    if unit == "J/m3" or is_named(resolve(unit).exponents):
        return format_quantity(value, unit, difference=is_difference(result))
    return f"{format_number(value)} {unit}"

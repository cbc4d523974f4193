"""What `chainflow check` prints: who sets the amount of each line, and which loops there are.

Pressures are those that follow from the settings alone [bar]; nothing is solved.
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING, TextIO

from chainflow.flowsheet.network import Flowsheet, Line
from chainflow.report import numbers
from chainflow.report.plain import console, encoding_of, printable

if TYPE_CHECKING:
    from rich.table import Table

    from chainflow.solver.solve import Structure


def print_check(structure: Structure, out: TextIO | None = None) -> None:
    """Print lines with who sets their amounts, then the loops and where they are cut."""
    flowsheet = structure.flowsheet
    screen = console(out)
    encoding = encoding_of(screen.file)
    screen.print(printable(flowsheet.title or "untitled", encoding), style="bold")
    counts = f"{len(flowsheet.equipment)} pieces of equipment, {len(flowsheet.lines)} lines"
    screen.print(f"{counts}, {len(flowsheet.holds)} holds: no faults\n")
    screen.print(_table(structure))
    screen.print()
    for line in _loop_lines(structure):
        screen.print(line, soft_wrap=True)


def _table(structure: Structure) -> Table:
    from rich import box
    from rich.table import Table

    table = Table(box=box.SIMPLE_HEAD, pad_edge=False, show_edge=False)
    for name in ("line", "content", "bar", "amount set by"):
        table.add_column(name, justify="right" if name == "bar" else "left", overflow="fold")
    for line in structure.flowsheet.lines:
        pressure = structure.pressures.get((line.source, line.outlet))
        shown = "" if pressure is None else numbers.bar(pressure)
        ends = f"{line.start} -> {line.end}"
        table.add_row(ends, line.content, shown, who_sets(structure.flowsheet, line))
    return table


def _loop_lines(structure: Structure) -> Iterator[str]:
    if not structure.loops:
        yield "No loops: one pass solves it."
    for number, members in enumerate(structure.loops, start=1):
        yield f"Loop {number}: {', '.join(members)}"
    if structure.tears:
        yield f"Closed by moving: {', '.join(structure.tears)}"
    for hold in structure.flowsheet.holds:
        yield f"Hold: {hold.text} by moving {hold.by}"


def who_sets(flowsheet: Flowsheet, line: Line) -> str:
    """Say which port decides how much passes a line."""
    if not line.called:
        return f"{line.start} (offers)"
    here = line
    seen = {line.number}
    while here.content == "material" and flowsheet.calls_through(here.target):
        main = flowsheet.equipment[here.target].main_port(inlet=False)
        onward = flowsheet.line_from(here.target, main.name) if main else ()
        if not onward or onward[0].number in seen:
            break
        here = onward[0]
        seen.add(here.number)
    through = f" through {line.target}" if here is not line else ""
    return f"{here.end} (calls){through}"

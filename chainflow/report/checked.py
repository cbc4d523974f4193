"""What `chainflow check` prints: who sets the amount of each line, and which loops there are."""

from __future__ import annotations

from typing import TYPE_CHECKING, TextIO

from chainflow.flowsheet.network import Flowsheet, Line
from chainflow.report.plain import console, encoding_of, printable

if TYPE_CHECKING:
    from chainflow.solver.solve import Structure


def print_check(flowsheet: Flowsheet, structure: Structure, out: TextIO | None = None) -> None:
    """Print lines with who sets their amounts, loops, and what is torn to close them."""
    from rich import box
    from rich.table import Table

    screen = console(out)
    encoding = encoding_of(screen.file)  # type: ignore[arg-type] # rich types it as IO[str]
    screen.print(printable(flowsheet.title or "untitled", encoding), style="bold")
    counts = f"{len(flowsheet.equipment)} pieces of equipment, {len(flowsheet.lines)} lines"
    screen.print(f"{counts}, {len(flowsheet.holds)} holds, no faults\n")
    table = Table("line", "content", "amount set by", box=box.SIMPLE_HEAD, pad_edge=False, show_edge=False)
    for line in flowsheet.lines:
        table.add_row(f"{line.start} -> {line.end}", line.content, who_sets(flowsheet, line))
    screen.print(table)


def who_sets(flowsheet: Flowsheet, line: Line) -> str:
    """Say which port decides how much passes a line."""
    if not line.called:
        return f"{line.start} (offers)"
    here = line
    seen = {line.number}
    while flowsheet.calls_through(here.target):
        main = flowsheet.equipment[here.target].main_port(inlet=False)
        onward = flowsheet.line_from(here.target, main.name) if main else ()
        if not onward or onward[0].number in seen:
            break
        here = onward[0]
        seen.add(here.number)
    through = f" through {line.target}" if here is not line else ""
    return f"{here.end} (calls){through}"

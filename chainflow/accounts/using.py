"""Which equipment uses the fuel, after it has been made and kept?

The *using part* is what the lines of the fuel kept lead to (`chainflow.accounts.fuel`), through
lines whose amount the sender sets, up to stores, switchboards and equipment that makes things; and
what serves that part alone, such as the blower of an engine. All else is the *making part*. An
engine, its blower and the condenser of its flue are using; the compressor that fills the fuel
store is making.
"""

from __future__ import annotations

from chainflow.accounts.fuel import fuel_lines
from chainflow.equipment.base import Equipment
from chainflow.equipment.power import Grid, Switchboard
from chainflow.equipment.stores import Store
from chainflow.flowsheet.network import Flowsheet
from chainflow.solver.solution import Solution

PARTS = ("making", "using")


def part_of(name: str, using: frozenset[str]) -> str:
    """Return which part of the plant a piece of equipment belongs to."""
    return "using" if name in using else "making"


def using_part(solution: Solution) -> frozenset[str]:
    """Return the names of the equipment that uses the fuel kept; empty if no fuel is kept."""
    sheet, keys = solution.flowsheet, fuel_lines(solution).kept
    kept = [line for line in sheet.lines if line.start in keys]
    reached: set[str] = set()
    queue = [line.target for line in kept]
    while queue:
        name = queue.pop()
        if name in reached or _ends_it(sheet.equipment[name]):
            continue
        reached.add(name)
        queue += [line.target for line in sheet.out_of(name) if not line.called]
    return frozenset(_with_servants(sheet, reached, {line.source for line in kept}))


def _ends_it(piece: Equipment) -> bool:
    return isinstance(piece, Store | Switchboard | Grid) or (piece.makes and not piece.burns)


def _with_servants(sheet: Flowsheet, reached: set[str], keeping: set[str]) -> set[str]:
    """Add equipment all of whose lines lead to the part, unless the fuel comes through it."""
    found, making = set(reached), _upstream(sheet, reached, keeping)
    grown = bool(found)
    while grown:
        grown = False
        for name, piece in sheet.equipment.items():
            lines = sheet.out_of(name)
            if name in found or name in making or _ends_it(piece) or not lines:
                continue
            if all(line.target in found for line in lines):
                found.add(name)
                grown = True
    return found


def _upstream(sheet: Flowsheet, using: set[str], keeping: set[str]) -> set[str]:
    """Return all that the fuel kept comes from, not looked for behind its users."""
    found: set[str] = set()
    queue = list(keeping)
    while queue:
        name = queue.pop()
        if name not in found and name not in using:
            found.add(name)
            queue += [line.source for line in sheet.into(name)]
    return found

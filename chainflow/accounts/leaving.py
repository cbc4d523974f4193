"""What matter leaves the plant without being useful, and what fuel is thrown away with it?

Flows [mol/s], heating value [W]. A *purge* here is everything that still burns: the gas of a purge,
what is dissolved in a drain, unburnt fuel in a flue.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from chainflow.accounts.fuel import fuel_lines, worth_of_lines
from chainflow.equipment.boundary import Product, Vent
from chainflow.solver.solution import Solution, SolvedStream
from chainflow.thermo.streams import Stream

_LEAST = 1e-6  # of the fuel kept: less fuel is no purge


@dataclass(frozen=True, slots=True)
class Purge:
    """One stream that leaves with fuel in it."""

    key: str  # the sending port
    stream: Stream
    share_of_fuel: float | None  # its LHV per LHV of the fuel kept, or made


def matter_leaving(solution: Solution) -> Iterator[tuple[SolvedStream, Stream]]:
    """Yield matter that leaves the plant to a vent or by an outlet without a line."""
    pieces = solution.flowsheet.equipment
    for stream in solution.streams:
        into_vent = any(isinstance(pieces[t.partition(".")[0]], Vent) for t in stream.targets)
        if isinstance(stream.flow, Stream) and (into_vent or not stream.targets):
            yield stream, stream.flow


def matter_sold(solution: Solution) -> Iterator[tuple[SolvedStream, Stream]]:
    """Yield matter that arrives at products."""
    pieces = solution.flowsheet.equipment
    for stream in solution.streams:
        sold = any(isinstance(pieces[t.partition(".")[0]], Product) for t in stream.targets)
        if isinstance(stream.flow, Stream) and sold:
            yield stream, stream.flow


def fuel_kept(solution: Solution) -> float:
    """Return the LHV of the fuel kept, or of the fuel made where none is kept [W]."""
    lines = fuel_lines(solution)
    kept = worth_of_lines(solution, lines.kept).lhv
    return kept if kept > 0.0 else worth_of_lines(solution, lines.made).lhv


def purges(solution: Solution) -> tuple[Purge, ...]:
    """Return the streams that leave with fuel in them, the richest first."""
    fuel = fuel_kept(solution)
    lines = fuel_lines(solution)
    kept = frozenset((*lines.kept, *lines.staying))
    found = [
        Purge(sent.key, stream, float(stream.lhv) / fuel if fuel > 0.0 else None)
        for sent, stream in matter_leaving(solution)
        if sent.key not in kept and float(stream.lhv) > _LEAST * fuel
    ]
    return tuple(sorted(found, key=lambda purge: -float(purge.stream.lhv)))

"""Which line carries how much?

SI throughout. A material outlet has one line, and what a product takes comes from outlets that
offer, so the flow of such a line is the flow of its outlet.
"""

from __future__ import annotations

from chainflow.equipment.ports import Flow
from chainflow.flowsheet.network import Line
from chainflow.solver.solution import Solution, SolvedStream
from chainflow.thermo.streams import Stream


class Flows:
    """Finds what leaves each outlet of a solution."""

    def __init__(self, solution: Solution) -> None:
        self._by_key = {stream.key: stream for stream in solution.streams}

    def on(self, line: Line) -> Flow | None:
        """Return what passes a line from an outlet that offers; None if nothing was solved."""
        found = self._by_key.get(line.start)
        return None if found is None else found.flow

    def material(self, line: Line) -> Stream | None:
        """Return the matter on a line, or None if it carries something else."""
        flow = self.on(line)
        return flow if isinstance(flow, Stream) else None


def leaving(solution: Solution, name: str) -> list[SolvedStream]:
    """Return all that leaves a piece of equipment, linked or not."""
    return [stream for stream in solution.streams if stream.source == name]

"""How much of the water and of the CO2 that reactions use up does the plant get back?

returned = 1 - top-up / consumed, flows [mol/s], not clipped. *Consumed* is the net use by each
piece of equipment with chemistry, so vapour that only circulates does not flatter the number.
*Top-up* is what stores make up (bought, or through `make_up`) and what supplies bring that are
mostly the substance and do not already feed a store's `make_up`. None if nothing is consumed.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator

from chainflow.accounts.purchases import topped_up
from chainflow.equipment.boundary import Supply
from chainflow.equipment.ports import Flow, arriving
from chainflow.equipment.stores import Store
from chainflow.flowsheet.network import Flowsheet
from chainflow.solver.solution import Solution
from chainflow.thermo.streams import Stream

_MOSTLY = 0.5  # mole fraction from which a supply counts as one of the substance
_ROUND_OFF = 1e-12  # of what passes the equipment


def returned(solution: Solution, substance: str) -> float | None:
    """Return the share of a substance that reactions use and the plant gets back [-]."""
    used = consumed(solution, substance)
    if used <= 0.0:
        return None
    return 1.0 - topped_up_flow(solution, substance) / used


def consumed(solution: Solution, substance: str) -> float:
    """Return what reactions use of a substance, equipment by equipment [mol/s]."""
    total = 0.0
    for name, piece in solution.flowsheet.equipment.items():
        if piece.makes:
            entering = list(_entering(solution, name))
            leaving = [s for s in solution.outcomes[name].outlets.values() if isinstance(s, Stream)]
            net = _flow(entering, substance) - _flow(leaving, substance)
            passing = sum(float(stream.total) for stream in entering)
            total += net if net > _ROUND_OFF * passing else 0.0
    return total


def topped_up_flow(solution: Solution, substance: str) -> float:
    """Return what is bought of a substance to replace losses [mol/s]."""
    return _flow(_fresh(solution, substance), substance)


def _fresh(solution: Solution, substance: str) -> Iterator[Stream]:
    for name, piece in solution.flowsheet.equipment.items():
        if isinstance(piece, Store):
            if solution.flowsheet.line_into(name, "make_up"):
                yield from _streams(solution.feeds[name].get("make_up"))
            else:
                yield topped_up(solution, name, piece)
        elif isinstance(piece, Supply) and not _feeds_store(solution.flowsheet, name):
            bought = solution.outcomes[name].outlets["outlet"]
            if isinstance(bought, Stream) and float(bought.fraction(substance)) > _MOSTLY:
                yield bought
        elif not _feeds_store(solution.flowsheet, name):
            yield from solution.outcomes[name].taken  # out of the air, through no store


def _feeds_store(flowsheet: Flowsheet, name: str) -> bool:
    """Whether a supply ends at a store's make-up, perhaps through pumps and valves."""
    lines, seen = list(flowsheet.out_of(name)), set[int]()
    while lines:
        line = lines.pop()
        piece = flowsheet.equipment[line.target]
        if isinstance(piece, Store):
            return line.inlet == "make_up"
        if piece.through and line.number not in seen:
            seen.add(line.number)
            main = piece.main_port(inlet=False)
            lines += flowsheet.line_from(line.target, main.name) if main else ()
    return False


def _entering(solution: Solution, name: str) -> Iterator[Stream]:
    feeds = solution.feeds[name]
    for port in feeds:
        yield from (flow for flow in arriving(feeds, port) if isinstance(flow, Stream))


def _streams(flow: Flow | tuple[Flow, ...] | None) -> Iterator[Stream]:
    flows = flow if isinstance(flow, tuple) else (flow,)
    yield from (one for one in flows if isinstance(one, Stream))


def _flow(streams: Iterable[Stream], substance: str) -> float:
    return sum(float(stream.flow(substance)) for stream in streams)

"""Results of a solution by their address."""

from __future__ import annotations

from chainflow.basis.faults import UsageFault
from chainflow.equipment.junctions import joined
from chainflow.equipment.ports import arriving
from chainflow.flowsheet.addresses import AddressError, of_outcome, parse_result, property_of
from chainflow.solver.solution import Solution
from chainflow.thermo.streams import Stream


def value_at(solution: Solution, address: str) -> float:
    """The number that an address names, in SI; UsageFault if it names nothing."""
    flowsheet = solution.flowsheet
    try:
        found = parse_result(address, flowsheet.equipment, flowsheet.components)
        if found.where in ("own", "duty"):
            return of_outcome(solution.outcomes[found.piece], found.where, found.name)
        if found.where == "inlet":
            flows = arriving(solution.feeds[found.piece], found.name)
        else:
            flow = solution.outcomes[found.piece].outlets.get(found.name)
            flows = () if flow is None else (flow,)
        if not flows:
            raise AddressError(f"'{address}': nothing is linked there")
        streams = [f for f in flows if isinstance(f, Stream)]
        whole = joined(streams, flowsheet.matter) if len(streams) > 1 else flows[0]
        return property_of(whole, found.prop, found.argument)
    except AddressError as problem:
        raise UsageFault(str(problem)) from None

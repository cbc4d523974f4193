"""Where is the ability to do work destroyed?

Exergy destroyed in each piece of equipment [W] = exergy that enters - exergy that leaves, in the
environment of 298.15 K and 1.01325 bar. Streams count physical plus chemical exergy, power counts
fully, light by Petela's formula, heat by Carnot's factor at its entropy-mean temperature. Heat
given to the ambient, or at an outlet without a line, carries nothing out: it is lost where it is
given off. The plant's border (sunlight, supply, product, vent, grid) destroys nothing.
"""

from __future__ import annotations

from chainflow.accounts.border import leaving
from chainflow.accounts.purchases import topped_up
from chainflow.basis.constants import T_REFERENCE
from chainflow.equipment.boundary import Product, Supply, Vent
from chainflow.equipment.ports import Flow, Heat, arriving, rate_of
from chainflow.equipment.power import Grid
from chainflow.equipment.stores import Store
from chainflow.equipment.sunlight import Sunlight
from chainflow.solver.solution import Solution
from chainflow.thermo.exergy import heat_exergy, solar_exergy_factor
from chainflow.thermo.streams import Stream

_BORDER = (Sunlight, Supply, Product, Vent, Grid)


def exergy_destroyed(solution: Solution) -> dict[str, float]:
    """Return the exergy destroyed in every piece of equipment [W]."""
    return {name: destroyed_in(solution, name) for name in solution.outcomes}


def destroyed_in(solution: Solution, name: str) -> float:
    """Return the exergy destroyed in one piece of equipment [W]; zero at the plant's border."""
    piece = solution.flowsheet.equipment[name]
    if isinstance(piece, _BORDER):
        return 0.0
    outcome = solution.outcomes[name]
    entering = outcome.power + _bought_heat(solution, name) + _fed(solution, name)
    entering += sum(float(stream.exergy()) for stream in outcome.taken)
    if isinstance(piece, Store) and not solution.flowsheet.line_into(name, "make_up"):
        entering += float(topped_up(solution, name, piece).exergy())
    return entering - _sent(solution, name)


def _bought_heat(solution: Solution, name: str) -> float:
    """Return the exergy of heat and cold that come from outside [W]."""
    duties = solution.outcomes[name].duties
    return sum(_carnot(duty.heat, duty.mean) for duty in duties if duty.met_by == "bought")


def _fed(solution: Solution, name: str) -> float:
    """Return the exergy of streams, heat and light that arrive [W]."""
    feeds, total = solution.feeds[name], 0.0
    contents = {line.inlet: line.content for line in solution.flowsheet.into(name)}
    for port, content in contents.items():
        total += sum(_exergy(flow, content) for flow in arriving(feeds, port))
    return total


def _sent(solution: Solution, name: str) -> float:
    """Return the exergy of streams, heat and light that leave [W]."""
    total = 0.0
    for stream in leaving(solution, name):
        if stream.targets or isinstance(stream.flow, Stream):
            total += _exergy(stream.flow, stream.content)
    return total


def _exergy(flow: Flow, content: str) -> float:
    """Return the exergy of a flow [W]; power is left out, it is in the outcome's net power."""
    if isinstance(flow, Stream):
        return float(flow.exergy())
    if isinstance(flow, Heat):
        return _carnot(flow.rate, flow.mean)
    return rate_of(flow) * solar_exergy_factor(T_REFERENCE) if content == "light" else 0.0


def _carnot(heat: float, mean: float) -> float:
    return float(heat_exergy(heat, mean, T_REFERENCE)) if heat else 0.0

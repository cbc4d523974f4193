"""Where is the ability to do work destroyed?

Exergy destroyed in each piece of equipment [W] = exergy that enters - exergy that leaves, in the
environment that the flowsheet names. Streams count physical plus chemical exergy, power counts
fully, light by Petela's formula, heat by Carnot's factor at its entropy-mean temperature. Heat
given to the ambient, or at an outlet without a line, carries nothing out here: it is lost where it
is given off (`chainflow.accounts.losses` tells it apart). The plant's border (sunlight, supply,
product, vent, grid) destroys nothing.
"""

from __future__ import annotations

from chainflow.accounts.border import leaving
from chainflow.accounts.purchases import topped_up
from chainflow.equipment.boundary import Product, Supply, Vent
from chainflow.equipment.ports import Flow, Heat, arriving, rate_of
from chainflow.equipment.power import Grid
from chainflow.equipment.stores import Store
from chainflow.equipment.sunlight import Sunlight
from chainflow.solver.solution import Solution
from chainflow.thermo.exergy import Environment, heat_exergy, solar_exergy_factor
from chainflow.thermo.streams import Stream

BORDER = (Sunlight, Supply, Product, Vent, Grid)


def flow_exergy(flow: Flow, content: str, environment: Environment) -> float:
    """Return the exergy of what passes a port [W]; power counts fully."""
    if isinstance(flow, Stream):
        return float(flow.exergy(environment))
    if isinstance(flow, Heat):
        return carnot(flow.rate, flow.mean, environment)
    factor = solar_exergy_factor(environment.temperature) if content == "light" else 1.0
    return rate_of(flow) * factor


def carnot(heat: float, mean: float, environment: Environment) -> float:
    """Return the exergy of heat at its entropy-mean temperature [W], negative below T0."""
    return float(heat_exergy(heat, mean, environment.temperature)) if heat else 0.0


def exergy_destroyed(solution: Solution) -> dict[str, float]:
    """Return the exergy destroyed in every piece of equipment [W]."""
    return {name: destroyed_in(solution, name) for name in solution.outcomes}


def destroyed_in(solution: Solution, name: str) -> float:
    """Return the exergy destroyed in one piece of equipment [W]; zero at the plant's border."""
    piece = solution.flowsheet.equipment[name]
    if isinstance(piece, BORDER):
        return 0.0
    surroundings = solution.flowsheet.environment
    outcome = solution.outcomes[name]
    bought = (d for d in outcome.duties if d.met_by == "bought")
    entering = outcome.power + sum(carnot(d.heat, d.mean, surroundings) for d in bought)
    entering += _fed(solution, name, surroundings)
    entering += sum(float(stream.exergy(surroundings)) for stream in outcome.taken)
    if isinstance(piece, Store) and not solution.flowsheet.line_into(name, "make_up"):
        entering += float(topped_up(solution, name, piece).exergy(surroundings))
    return entering - _sent(solution, name, surroundings)


def _fed(solution: Solution, name: str, environment: Environment) -> float:
    """Return the exergy of streams, heat and light that arrive [W]; power is in the outcome."""
    feeds, total = solution.feeds[name], 0.0
    contents = {line.inlet: line.content for line in solution.flowsheet.into(name)}
    for port, content in contents.items():
        if content != "power":
            total += sum(flow_exergy(f, content, environment) for f in arriving(feeds, port))
    return total


def _sent(solution: Solution, name: str, environment: Environment) -> float:
    """Return the exergy of streams, heat and light that leave [W]."""
    total = 0.0
    for stream in leaving(solution, name):
        if stream.content != "power" and (stream.targets or isinstance(stream.flow, Stream)):
            total += flow_exergy(stream.flow, stream.content, environment)
    return total

"""What does the plant buy?

SI throughout: power and heat [W], flows [mol/s]. Bought are: electric power that no line brings,
and what a grid serves; heat needs that nothing in the plant meets; cooling below the ambient; what
supplies give; and what stores make up where no line arrives at `make_up`.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from chainflow.accounts.worth import Worth, of_heat, of_material, of_power
from chainflow.equipment.base import Equipment, Outcome
from chainflow.equipment.boundary import Supply
from chainflow.equipment.heat_needs import Duty
from chainflow.equipment.ports import Heat, Role
from chainflow.equipment.power import Grid
from chainflow.equipment.stores import Store
from chainflow.solver.solution import Solution
from chainflow.thermo.exergy import STANDARD_ENVIRONMENT, Environment
from chainflow.thermo.streams import Stream

_ROUND_OFF = 1e-13  # of the enthalpy that leaves: what is left of two that should be equal


@dataclass(frozen=True, slots=True)
class Purchases:
    """All that is bought, by the equipment that needs or gives it."""

    power: dict[str, float]  # [W]
    heat: tuple[tuple[str, Duty], ...]  # needs that nothing meets
    cold: tuple[tuple[str, Duty], ...]  # heat to take away below the ambient, negative
    material: dict[str, Stream]
    environment: Environment = STANDARD_ENVIRONMENT

    @property
    def power_total(self) -> float:
        """Electricity bought [W]."""
        return sum(self.power.values())

    @property
    def heat_total(self) -> float:
        """Heat bought [W]."""
        return sum(duty.heat for _, duty in self.heat)

    @property
    def cold_total(self) -> float:
        """Cooling bought [W], positive."""
        return -sum(duty.heat for _, duty in self.cold)

    @property
    def worth(self) -> Worth:
        """What counts against the plant: power, heat and the worth of all material."""
        heats = (Heat(duty.heat, duty.start, duty.end, duty.mean) for _, duty in self.heat)
        parts = [of_power(self.power_total), *(of_heat(h, self.environment) for h in heats)]
        streams = (of_material(s, self.environment) for s in self.material.values())
        return Worth.total([*parts, *streams])


def purchases(solution: Solution) -> Purchases:
    """Return everything that a solution buys."""
    bought = list(_duties(solution))
    return Purchases(
        power=dict(_power(solution)),
        heat=tuple((name, duty) for name, duty in bought if duty.heat > 0.0),
        cold=tuple((name, duty) for name, duty in bought if duty.heat < 0.0),
        material=dict(_material(solution)),
        environment=solution.flowsheet.environment,
    )


def _duties(solution: Solution) -> Iterator[tuple[str, Duty]]:
    for name, outcome in solution.outcomes.items():
        for duty in outcome.duties:
            if duty.met_by == "bought" and abs(duty.heat) > _ROUND_OFF * _throughput(outcome):
                yield name, duty


def _throughput(outcome: Outcome) -> float:
    """Enthalpy that leaves a piece of equipment, whatever its sign [W]."""
    leaving = outcome.outlets.values()
    return sum(abs(float(flow.enthalpy)) for flow in leaving if isinstance(flow, Stream))


def _power(solution: Solution) -> Iterator[tuple[str, float]]:
    for name, outcome in solution.outcomes.items():
        piece = solution.flowsheet.equipment[name]
        amount = _from_grid(piece, outcome) + _unlinked(solution, name, piece, outcome)
        if amount > 0.0:
            yield name, amount


def _from_grid(piece: Equipment, outcome: Outcome) -> float:
    return outcome.results.get("bought_W", 0.0) if isinstance(piece, Grid) else 0.0


def _unlinked(solution: Solution, name: str, piece: Equipment, outcome: Outcome) -> float:
    """Return the power asked at inlets that no line reaches [W]."""
    asked = 0.0
    for port in piece.port_list():
        if port.role is not Role.CALLS or port.content != "power":
            continue
        if not solution.flowsheet.line_into(name, port.name):
            amount = outcome.drawn.get(port.name, outcome.power if port.name == "power" else 0.0)
            asked += amount if isinstance(amount, float | int) else 0.0
    return asked


def _material(solution: Solution) -> Iterator[tuple[str, Stream]]:
    for name, piece in solution.flowsheet.equipment.items():
        outcome = solution.outcomes[name]
        if isinstance(piece, Supply):
            given = outcome.outlets["outlet"]
            if isinstance(given, Stream) and float(given.total) > 0.0:
                yield name, given
        elif isinstance(piece, Store) and not solution.flowsheet.line_into(name, "make_up"):
            fresh = topped_up(solution, name, piece)
            if float(fresh.total) > 0.0:
                yield name, fresh


def topped_up(solution: Solution, name: str, store: Store) -> Stream:
    """Return what a store without a `make_up` line gets from outside."""
    matter = solution.flowsheet.matter
    amount = solution.outcomes[name].results.get("top_up_mol_s", 0.0)
    return store.bought(matter).scaled(amount)

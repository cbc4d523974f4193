"""How much of the heat that the plant needs could it give itself?

All heat needs and all usable heat given off, each with the temperatures over which it is needed or
given, in one problem table for the whole plant (`chainflow.equipment.cascade`): the least heat from
outside and the least heat to take away at the flowsheet's `approach`, the pinch, and the composite
curves.  Beside it stands what the plant does now.

Needs are those met by power, by heat or bought; what the ambient meets is free.  Given off is what
a line could take; losses to the ambient are none of it.  What takes heat as it comes (an engine, a
boiler, a town) keeps what it has.  Cooling below the ambient is not looked at.

SI throughout: heat [W], temperature [K].
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import Any

from chainflow.equipment.base import Equipment
from chainflow.equipment.boundary import Vent
from chainflow.equipment.cascade import Cascade, cascade, composite
from chainflow.equipment.heat_needs import Duty
from chainflow.equipment.heat_network import HeatNetwork
from chainflow.equipment.junctions import Splitter
from chainflow.equipment.ports import Heat, Part, Role, arriving
from chainflow.solver.solution import Solution

_PASS_ON = (HeatNetwork, Splitter, Vent)  # they take heat and use none


@dataclass(frozen=True)
class HeatAccount:
    """The heat of a plant as it is, and as it could be."""

    approach: float  # [K]
    needs: tuple[tuple[str, Duty], ...]  # by the equipment that has them
    given: tuple[tuple[str, Duty], ...]
    kept: tuple[tuple[str, Heat], ...]  # taken as it comes, by equipment
    networks: Mapping[str, Network]

    @cached_property
    def table(self) -> Cascade:
        """The problem table of all heat."""
        return cascade(self._sources, self._sinks, self.approach)

    @property
    def _sources(self) -> list[Heat]:
        return [duty.flow for _, duty in self.given]

    @property
    def _sinks(self) -> list[Heat]:
        """All needs; heat taken as it comes stands one approach lower, where it is just met."""
        kept = [_lowered(heat, self.approach) for _, heat in self.kept]
        return [*(duty.flow for _, duty in self.needs), *kept]

    @property
    def needed(self) -> float:
        """All heat needed [W]."""
        return sum(duty.heat for _, duty in self.needs)

    @property
    def bought(self) -> float:
        """Heat bought now [W]."""
        return sum(duty.heat for _, duty in self.needs if duty.met_by == "bought")

    @property
    def electric(self) -> float:
        """Heat made from power now [W], by heaters and for networks that are short."""
        by_power = sum(duty.heat for _, duty in self.needs if duty.met_by == "power")
        return by_power + sum(network.electric for network in self.networks.values())

    @property
    def recovered(self) -> float:
        """Heat of the plant that meets needs now [W]."""
        return self.needed - self.bought - self.electric

    @property
    def rejected(self) -> float:
        """Usable heat that the plant throws away now [W]."""
        given = -sum(duty.heat for _, duty in self.given)
        return given - self.recovered - sum(heat.rate for _, heat in self.kept)

    def as_data(self) -> dict[str, Any]:
        """Everything as plain data; names end in their unit."""
        table = self.table
        return {
            "approach_K": self.approach,
            "needed_W": self.needed,
            "now": {
                "bought_W": self.bought,
                "electric_W": self.electric,
                "recovered_W": self.recovered,
                "rejected_W": self.rejected,
            },
            "least": {"heat_W": table.hot_utility, "cooling_W": table.cold_utility},
            "pinch_given_K": table.pinch_given,
            "pinch_needed_K": table.pinch_needed,
            "cascade": {"shifted_K": table.levels, "heat_W": table.flow},
            "curves": {
                "given": _points(composite(self._sources)),
                "needed": _points(composite(self._sinks), table.cold_utility),
                "grand": _points(table.grand_composite),
            },
            "flows": list(self._flows()),
            "networks": {name: network.as_data() for name, network in self.networks.items()},
        }

    def _flows(self) -> Iterator[dict[str, Any]]:
        """Each need (positive) and each heat given off (negative), in pieces."""
        for name, duty in (*self.needs, *self.given):
            for heat, start, end, _ in duty.curve or ((duty.heat, duty.start, duty.end, 0.0),):
                yield {
                    "equipment": name,
                    "purpose": duty.purpose,
                    "met_by": duty.met_by,
                    "heat_W": heat,
                    "from_K": start,
                    "to_K": end,
                }


@dataclass(frozen=True)
class Network:
    """How one heat network meets its users."""

    approach: float  # [K]
    results: Mapping[str, float]
    asked: Mapping[str, float]  # by user [W]
    recovered: Mapping[str, float]  # of it from the heat fed in [W]
    electric: float  # shortage met by power [W]

    def as_data(self) -> dict[str, Any]:
        """Everything as plain data; names end in their unit."""
        users = {
            name: {
                "asked_W": asked,
                "recovered_W": self.recovered[name],
                "shortage_W": asked - self.recovered[name],
            }
            for name, asked in self.asked.items()
        }
        return {"approach_K": self.approach, **self.results, "users": users}


def heat_account(solution: Solution) -> HeatAccount:
    """Return the heat account of a solution."""
    duties = list(_duties(solution))
    return HeatAccount(
        approach=solution.flowsheet.approach,
        needs=tuple((name, duty) for name, duty in duties if duty.heat > 0.0),
        given=tuple((name, duty) for name, duty in duties if duty.heat < 0.0),
        kept=tuple(_kept(solution)),
        networks=dict(_networks(solution)),
    )


def _duties(solution: Solution) -> Iterator[tuple[str, Duty]]:
    """Needs that somebody meets, and heat that a line takes or could take."""
    for name, outcome in solution.outcomes.items():
        takes = _takes_heat(solution.flowsheet.equipment[name])
        for duty in outcome.duties:
            if duty.heat > 0.0:
                as_it_comes = takes and duty.met_by == "heat"
                counts = duty.met_by in ("power", "heat", "bought") and not as_it_comes
            else:
                counts = duty.usable or duty.met_by == "heat"
            if counts and duty.heat != 0.0:
                yield name, duty


def _takes_heat(piece: Equipment) -> bool:
    ports = piece.port_list()
    return any(p.role is Role.TAKES and p.content in ("heat", "any") for p in ports)


def _kept(solution: Solution) -> Iterator[tuple[str, Heat]]:
    """Heat that is taken as it comes."""
    for name, feeds in solution.feeds.items():
        piece = solution.flowsheet.equipment[name]
        if isinstance(piece, _PASS_ON) or not _takes_heat(piece):
            continue
        for port in feeds:
            for flow in arriving(feeds, port):
                role = piece.port(port, inlet=True)
                if isinstance(flow, Heat) and role is not None and role.role is Role.TAKES:
                    yield name, flow


def _networks(solution: Solution) -> Iterator[tuple[str, Network]]:
    for name, piece in solution.flowsheet.equipment.items():
        if not isinstance(piece, HeatNetwork):
            continue
        outcome = solution.outcomes[name]
        users = {
            outlet: flow
            for outlet, flow in outcome.outlets.items()
            if outlet != "rest" and isinstance(flow, Heat)
        }
        recovered = piece.recovered(solution.feeds[name], users)
        asked = {outlet: flow.rate for outlet, flow in users.items()}
        yield name, Network(piece.approach, outcome.results, asked, recovered, outcome.power)


def _lowered(heat: Heat, by: float) -> Heat:
    def part(piece: Heat) -> Part:
        return piece.rate, piece.start - by, piece.end - by, piece.mean - by

    parts = tuple(part(piece) for piece in heat.pieces)
    return Heat(heat.rate, heat.start - by, heat.end - by, heat.mean - by, parts)


def _points(points: Sequence[tuple[float, float]], offset: float = 0.0) -> dict[str, list[float]]:
    return {
        "heat_W": [heat + offset for heat, _ in points],
        "temperature_K": [level for _, level in points],
    }

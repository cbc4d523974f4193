"""What useful things does the plant deliver?

SI throughout: power and heat [W]. Useful are: everything that flows into a `product`, power into a
grid's `surplus`, and power that leaves by an outlet without a line. Matter and heat that leave by
an outlet without a line leave the plant and are reported with the streams, but are not useful.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from chainflow.accounts.border import Flows
from chainflow.accounts.worth import Worth, of_heat, of_material, of_power
from chainflow.equipment.boundary import Product
from chainflow.equipment.ports import Heat, rate_of
from chainflow.equipment.power import Grid, Switchboard
from chainflow.flowsheet.network import Line
from chainflow.solver.solution import Solution
from chainflow.thermo.exergy import STANDARD_ENVIRONMENT, Environment
from chainflow.thermo.streams import Stream


@dataclass(frozen=True, slots=True)
class Deliveries:
    """All that is useful; each entry carries the name of who gets it, or of who sends it."""

    power: tuple[tuple[str, float], ...]  # [W]
    heat: tuple[tuple[str, Heat], ...]
    material: tuple[tuple[str, Stream], ...]
    environment: Environment = STANDARD_ENVIRONMENT

    @property
    def power_total(self) -> float:
        """Power delivered or sold [W]."""
        return sum(power for _, power in self.power)

    @property
    def heat_total(self) -> float:
        """Heat delivered [W]."""
        return sum(heat.rate for _, heat in self.heat)

    @property
    def worth(self) -> Worth:
        """All of it, on the three bases."""
        parts = [
            of_power(self.power_total),
            *(of_heat(heat, self.environment) for _, heat in self.heat),
        ]
        streams = (of_material(stream, self.environment) for _, stream in self.material)
        return Worth.total([*parts, *streams])


def deliveries(solution: Solution) -> Deliveries:
    """Return everything useful that a solution delivers."""
    flows = Flows(solution)
    into = [(line, flows.on(line)) for line in _to_products(solution)]
    return Deliveries(
        power=tuple(_power(solution, flows)),
        heat=tuple((line.target, flow) for line, flow in into if isinstance(flow, Heat)),
        material=tuple((line.target, flow) for line, flow in into if isinstance(flow, Stream)),
        environment=solution.flowsheet.environment,
    )


def _to_products(solution: Solution) -> Iterator[Line]:
    for line in solution.flowsheet.lines:
        if isinstance(solution.flowsheet.equipment[line.target], Product):
            yield line


def _power(solution: Solution, flows: Flows) -> Iterator[tuple[str, float]]:
    for line in solution.flowsheet.lines:
        target = solution.flowsheet.equipment[line.target]
        if line.content == "power" and isinstance(target, Product | Grid):
            flow = flows.on(line)
            if flow is not None:
                yield line.target, rate_of(flow)
    for stream in solution.streams:
        sender = solution.flowsheet.equipment[stream.source]
        # the rest that a switchboard cannot give to anybody is round-off, else it is not solved
        leaves = stream.content == "power" and not stream.targets
        if leaves and not isinstance(sender, Switchboard | Grid):
            yield stream.source, rate_of(stream.flow)

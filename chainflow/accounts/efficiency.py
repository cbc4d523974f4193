"""How much of what goes in comes out as something useful, and where is it lost on the way?

Overall efficiency = useful energy / (sunlight + power bought + heat bought + the heating value of
all material bought), by LHV, HHV and exergy. Nothing is netted. *Rungs* are the ratios of
successive cuts through the plant: what goes in, the power made from light or bought, hydrogen made
by electrolysis, fuel made, fuel kept (see `chainflow.accounts.fuel`) and what is useful. Cuts that
a plant does not have are left out, so the rungs multiply to the overall efficiency on each basis.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from itertools import pairwise

from chainflow.accounts.border import leaving
from chainflow.accounts.deliveries import Deliveries, deliveries
from chainflow.accounts.fuel import fuel_lines, worth_of_lines
from chainflow.accounts.purchases import Purchases, purchases
from chainflow.accounts.worth import Worth, of_light, of_material, of_power
from chainflow.equipment.base import Equipment
from chainflow.equipment.ports import rate_of
from chainflow.equipment.sunlight import Sunlight
from chainflow.solver.solution import Solution
from chainflow.thermo.streams import Stream

_SAME = 1e-12  # relative; two cuts through the same lines differ by round-off only
ByBasis = dict[str, float | None]


@dataclass(frozen=True, slots=True)
class Cut:
    """The energy that passes one cut through the plant."""

    name: str
    worth: Worth


@dataclass(frozen=True, slots=True)
class Rung:
    """The ratio of two successive cuts, on each basis."""

    start: str
    end: str
    ratio: ByBasis


@dataclass(frozen=True, slots=True)
class Efficiency:
    """The efficiencies of a plant; None where nothing goes in."""

    overall: ByBasis
    sunlight_to_fuel: ByBasis  # fuel made over all that goes in
    sunlight_share: float | None  # of the input, as energy
    rungs: tuple[Rung, ...]


def efficiency(
    solution: Solution, bought: Purchases | None = None, delivered: Deliveries | None = None
) -> Efficiency:
    """Return the efficiencies and rungs of a solution."""
    bought = bought or purchases(solution)
    delivered = delivered or deliveries(solution)
    light = sunlight(solution)
    entering = of_light(light, solution.flowsheet.environment) + bought.worth
    made = worth_of_lines(solution, fuel_lines(solution).made)
    cuts = list(_cuts(solution, light, entering, bought, delivered))
    return Efficiency(
        overall=delivered.worth.over(entering),
        sunlight_to_fuel=made.over(entering),
        sunlight_share=light / entering.lhv if entering.lhv > 0.0 else None,
        rungs=tuple(Rung(a.name, b.name, b.worth.over(a.worth)) for a, b in pairwise(cuts)),
    )


def sunlight(solution: Solution) -> float:
    """Return the light that falls on all apertures [W]."""
    pieces = solution.flowsheet.equipment
    return sum(
        rate_of(stream.flow)
        for stream in solution.streams
        if stream.content == "light" and isinstance(pieces[stream.source], Sunlight)
    )


def _cuts(
    solution: Solution, light: float, entering: Worth, bought: Purchases, delivered: Deliveries
) -> Iterator[Cut]:
    """Yield the cuts that this plant has, in order; each is more than nothing but the last."""
    if not entering.positive:
        return
    yield Cut("light" if light > 0.0 else "input", entering)
    air = solution.flowsheet.environment
    hydrogen = Worth.total(of_material(gas, air) for gas in _hydrogen(solution))
    lines = fuel_lines(solution)
    made, kept = worth_of_lines(solution, lines.made), worth_of_lines(solution, lines.kept)
    solar = _solar_power(solution)
    if solar > 0.0 or hydrogen.positive:  # else power only drives a plant that runs on bought fuel
        yield Cut("power", of_power(solar + bought.power_total))
    if hydrogen.positive:
        yield Cut("hydrogen", hydrogen)
    if made.positive:
        yield Cut("fuel made", made)
    if made.positive and kept.positive:
        yield Cut("fuel kept", kept)
    if not (made.positive and _same(kept, delivered.worth)):
        yield Cut(_last_name(delivered), delivered.worth)


def _last_name(delivered: Deliveries) -> str:
    matter = any(float(stream.total) > 0.0 for _, stream in delivered.material)
    only_power = delivered.power_total > 0.0 and not delivered.heat_total and not matter
    return "power out" if only_power else "useful"


def _same(first: Worth, second: Worth) -> bool:
    pairs = zip(first.by_basis.values(), second.by_basis.values(), strict=True)
    return all(abs(a - b) <= _SAME * abs(a) for a, b in pairs)


def _solar_power(solution: Solution) -> float:
    """Return the power that leaves equipment which takes light [W]."""
    return sum(
        rate_of(stream.flow)
        for name, piece in solution.flowsheet.equipment.items()
        if _takes_light(piece)
        for stream in leaving(solution, name)
        if stream.content == "power"
    )


def _takes_light(piece: Equipment) -> bool:
    return any(port.is_inlet and port.content == "light" for port in piece.port_list())


def _hydrogen(solution: Solution) -> Iterator[Stream]:
    """Yield what leaves the hydrogen outlets of equipment that makes it."""
    for name, piece in solution.flowsheet.equipment.items():
        if piece.makes:
            for stream in leaving(solution, name):
                if stream.outlet == "hydrogen" and isinstance(stream.flow, Stream):
                    yield stream.flow

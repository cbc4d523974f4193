"""How much of what goes in comes out as something useful, and where is it lost on the way?

Overall efficiency = useful energy / (sunlight + power bought + heat bought + the heating value of
all material bought), by LHV, HHV and exergy. Nothing is netted. *Rungs* are the ratios of
successive cuts through the plant (`chainflow.accounts.cuts`); they multiply to the overall
efficiency on each basis. Each rung lists the power that its equipment draws for itself and what is
bought for it (`chainflow.accounts.own_use`).
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

from chainflow.accounts.cuts import Cut, cuts, sunlight
from chainflow.accounts.deliveries import Deliveries, deliveries
from chainflow.accounts.fuel import fuel_lines, worth_of_lines
from chainflow.accounts.own_use import Use, uses_by_rung
from chainflow.accounts.purchases import Purchases, purchases
from chainflow.accounts.worth import of_light
from chainflow.solver.solution import Solution

ByBasis = dict[str, float | None]


@dataclass(frozen=True, slots=True)
class Rung:
    """The ratio of two successive cuts, on each basis, and what enters on the way."""

    start: str
    end: str
    ratio: ByBasis
    uses: tuple[Use, ...] = ()


@dataclass(frozen=True, slots=True)
class Efficiency:
    """The efficiencies of a plant; None where nothing goes in."""

    overall: ByBasis
    sunlight_to_fuel: ByBasis  # fuel made over all that goes in
    sunlight_share: float | None  # of the input, as energy
    rungs: tuple[Rung, ...]
    left_out: tuple[str, ...] = ()  # cuts that the file names and nothing passes


def efficiency(
    solution: Solution, bought: Purchases | None = None, delivered: Deliveries | None = None
) -> Efficiency:
    """Return the efficiencies and rungs of a solution."""
    bought = bought or purchases(solution)
    delivered = delivered or deliveries(solution)
    light = sunlight(solution)
    entering = of_light(light, solution.flowsheet.environment) + bought.worth
    made = worth_of_lines(solution, fuel_lines(solution).made)
    found = cuts(solution, entering, bought, delivered)
    names = {cut.name for cut in found}
    return Efficiency(
        overall=delivered.worth.over(entering),
        sunlight_to_fuel=made.over(entering),
        sunlight_share=light / entering.lhv if entering.lhv > 0.0 else None,
        rungs=_rungs(solution, found, bought),
        left_out=tuple(c.name for c in solution.flowsheet.blocks.cuts if c.name not in names),
    )


def _rungs(solution: Solution, found: tuple[Cut, ...], bought: Purchases) -> tuple[Rung, ...]:
    uses = uses_by_rung(solution, found, bought)
    pairs = zip(pairwise(found), uses, strict=True)
    return tuple(Rung(a.name, b.name, b.worth.over(a.worth), use) for (a, b), use in pairs)


__all__ = ["ByBasis", "Efficiency", "Rung", "efficiency", "sunlight"]

"""What does the fuel cost, what the power, and which piece of equipment makes it so?

Money is in the currency of the file and yearly amounts are rates over its full-load hours.

* purchase cost = cost at the reference size x (size / reference)^exponent x index ratio
* installed cost = purchase cost x installation factor
* capital recovery factor = i (1 + i)^n / ((1 + i)^n - 1), 1/n without interest: the yearly share of
  the installed cost over n years of life (textbook engineering economics)
* levelised cost = (recovery x installed + fixed + variable + what is bought - what else is sold)
  per year / yearly product

The levelised cost of *fuel* carries the making part of the plant and its product is the fuel kept;
that of *power* carries the whole plant and its product is the power delivered. Where a plant sells
both, each carries all of its part: nothing is shared out unless the file prices the other product.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass, field
from math import expm1, log1p
from typing import Any

from chainflow.accounts.deliveries import Deliveries, deliveries
from chainflow.accounts.fuel import fuel_lines, is_fuel, worth_of_lines
from chainflow.accounts.purchases import Purchases, purchases
from chainflow.accounts.using import PARTS, part_of, using_part
from chainflow.flowsheet.cost_plan import CostPlan, Measure, PieceFigures, without_figures
from chainflow.flowsheet.money import Money
from chainflow.solver.lookup import value_at
from chainflow.solver.solution import Solution
from chainflow.thermo.streams import Stream

KWH = 3.6e6  # [J]
Item = tuple[str, str]  # what it is ("power", "material.carbon"), and the part it belongs to


def capital_recovery_factor(interest: float, years: float) -> float:
    """Return the yearly payment per amount lent at `interest` a year over `years` [1/a]."""
    if interest == 0.0:
        return 1.0 / years
    return interest / -expm1(-years * log1p(interest))  # the same, also where interest is tiny


@dataclass(frozen=True, slots=True)
class PieceAccount:
    """The costs of one piece of equipment; money a year but for purchase and installed."""

    size: float  # SI
    size_of: str
    size_unit: str
    purchase: float
    installed: float
    lifetime: float  # [a]
    recovery: float
    fixed: float
    variable: float
    part: str  # "making" or "using"

    @property
    def yearly(self) -> float:
        """All it costs in a year."""
        return self.recovery + self.fixed + self.variable


@dataclass(frozen=True, slots=True)
class CostAccount:
    """The costs of a plant; money a year but for `installed`."""

    currency: str
    year: int | None
    interest: float
    hours: float  # [s] a year
    pieces: dict[str, PieceAccount]
    bought: dict[Item, float]
    credited: dict[Item, float]  # what is sold at a price
    fuel_lhv: float  # [J] a year
    fuel_hhv: float
    fuel_mass: float  # [kg] a year, of what burns in it
    power: float  # [J] a year
    unpriced: tuple[str, ...] = ()  # bought at no price: taken as free
    without_cost: tuple[str, ...] = ()  # equipment without figures: taken as free
    fuel_products: frozenset[str] = field(default_factory=frozenset)

    @property
    def installed(self) -> float:
        """Installed cost of everything."""
        return sum(piece.installed for piece in self.pieces.values())

    def yearly(self, *parts: str) -> float:
        """What these parts of the plant cost in a year, nothing credited."""
        own = sum(piece.yearly for piece in self.pieces.values() if piece.part in parts)
        return own + sum(cost for (_, part), cost in self.bought.items() if part in parts)

    @property
    def total(self) -> float:
        """What the whole plant costs in a year, nothing credited."""
        return self.yearly(*PARTS)

    def share(self, cost: float) -> float | None:
        """Part of the whole plant's yearly cost; None if it costs nothing."""
        return cost / self.total if self.total > 0.0 else None

    @property
    def fuel_cost(self) -> float:
        """What the yearly fuel has to earn."""
        others = (
            earned
            for (what, part), earned in self.credited.items()
            if part == "making" and what not in self.fuel_products
        )
        return self.yearly("making") - sum(others)

    @property
    def power_cost(self) -> float:
        """What the yearly power has to earn."""
        return self.total - sum(v for (what, _), v in self.credited.items() if what != "power")

    def as_data(self) -> dict[str, Any]:
        """Return everything as plain data; money in the currency named, a year for `_a`."""
        fuel, power = self.fuel_cost, self.power_cost
        return {
            "currency": self.currency,
            "year": self.year,
            "interest": self.interest,
            "hours_h": self.hours / 3600.0,
            "installed": self.installed,
            "total_a": self.total,
            "bought_a": _nested(self.bought),
            "sold_a": _nested(self.credited),
            "levelised": {
                "fuel": {
                    "LHV_per_kWh": self.per_kwh(fuel, self.fuel_lhv),
                    "HHV_per_kWh": self.per_kwh(fuel, self.fuel_hhv),
                    "per_kg": fuel / self.fuel_mass if self.fuel_mass > 0.0 else None,
                },
                "power": {"per_kWh": self.per_kwh(power, self.power)},
            },
            "equipment": {name: self._piece_data(piece) for name, piece in self.pieces.items()},
            "unpriced": list(self.unpriced),
            "without_cost": list(self.without_cost),
        }

    def _piece_data(self, piece: PieceAccount) -> dict[str, Any]:
        return {
            "size": piece.size,
            "size_of": piece.size_of,
            "size_unit": piece.size_unit,
            "purchase": piece.purchase,
            "installed": piece.installed,
            "lifetime_a": piece.lifetime,
            "recovery_a": piece.recovery,
            "fixed_a": piece.fixed,
            "variable_a": piece.variable,
            "total_a": piece.yearly,
            "share": self.share(piece.yearly),
            "part": piece.part,
        }

    def per_kwh(self, cost: float, product: float) -> float | None:
        """Money per kWh of a yearly product [J]; None without product."""
        return cost / (product / KWH) if product > 0.0 else None


def cost_account(
    solution: Solution, bought: Purchases | None = None, sold: Deliveries | None = None
) -> CostAccount | None:
    """Return the costs of a solution, or None if its file has no ``costs:``."""
    plan = solution.flowsheet.blocks.costs
    if plan is None:
        return None
    bought, sold = bought or purchases(solution), sold or deliveries(solution)
    using, lines = using_part(solution), fuel_lines(solution)
    keys = lines.kept or lines.made
    worth, hours = worth_of_lines(solution, keys), plan.hours
    found = list(_bought(plan, bought, using))
    return CostAccount(
        currency=plan.currency,
        year=plan.year,
        interest=plan.interest,
        hours=hours,
        pieces={
            one.name: _piece(solution, plan, one, part_of(one.name, using))
            for one in plan.pieces
            if one.name in solution.outcomes
        },
        bought=_summed((key, cost) for key, cost in found if cost is not None),
        credited=_credits(plan, sold, using),
        fuel_lhv=worth.lhv * hours,
        fuel_hhv=worth.hhv * hours,
        fuel_mass=_burning_mass(solution, keys) * hours,
        power=sold.power_total * hours,
        unpriced=tuple(dict.fromkeys(what for (what, _), cost in found if cost is None)),
        without_cost=tuple(without_figures(plan, solution.flowsheet.equipment)),
        fuel_products=frozenset(
            f"material.{name}" for name, stream in sold.material if is_fuel(stream)
        ),
    )


def _piece(solution: Solution, plan: CostPlan, figures: PieceFigures, part: str) -> PieceAccount:
    size = max(_value(solution, figures.size), 0.0)
    purchase = figures.purchase * (size / figures.reference) ** figures.exponent if size else 0.0
    installed = purchase * figures.installation
    passing = 0.0 if figures.counted is None else _value(solution, figures.counted)
    return PieceAccount(
        size=size,
        size_of=figures.size.address,
        size_unit=figures.size.unit,
        purchase=purchase,
        installed=installed,
        lifetime=figures.lifetime,
        recovery=installed * capital_recovery_factor(plan.interest, figures.lifetime),
        fixed=installed * figures.fixed_share + figures.fixed_amount,
        variable=figures.variable * passing * plan.hours,
        part=part,
    )


def _value(solution: Solution, measure: Measure) -> float:
    if measure.path:
        return solution.flowsheet.equipment[measure.piece].setting(measure.path)
    return value_at(solution, measure.address)


def _bought(
    plan: CostPlan, bought: Purchases, using: frozenset[str]
) -> Iterator[tuple[Item, float | None]]:
    """Yield what is bought, by which part, and its yearly cost; None where it has no price."""
    prices = plan.bought
    rates = [("power", name, power) for name, power in bought.power.items()]
    rates += [("heat", name, duty.heat) for name, duty in bought.heat]
    rates += [("cold", name, -duty.heat) for name, duty in bought.cold]
    for what, name, rate in rates:
        price: Money | None = getattr(prices, what)
        yield (
            (what, part_of(name, using)),
            None if price is None else price.value * rate * plan.hours,
        )
    for name, stream in bought.material.items():
        price = prices.material.get(name)
        cost = None if price is None else price.value * _amount(stream, price) * plan.hours
        yield (f"material.{name}", part_of(name, using)), cost


def _amount(stream: Stream, price: Money) -> float:
    """Return the rate of what a price counts: mass, amount or lower heating value."""
    rates = {"kg": stream.mass_flow, "mol": stream.total, "J": stream.lhv}
    return float(rates[price.per])


def _credits(plan: CostPlan, sold: Deliveries, using: frozenset[str]) -> dict[Item, float]:
    """Return what is sold at a price, a year."""
    prices, found = plan.sold, list[tuple[Item, float]]()
    if prices.power is not None:
        for name, power in sold.power:
            found.append((("power", part_of(name, using)), prices.power.value * power))
    if prices.heat is not None:
        for name, heat in sold.heat:
            found.append((("heat", part_of(name, using)), prices.heat.value * heat.rate))
    for name, stream in sold.material:
        price = prices.material.get(name)
        if price is not None:
            item = (f"material.{name}", part_of(name, using))
            found.append((item, price.value * _amount(stream, price)))
    return {item: rate * plan.hours for item, rate in _summed(found).items()}


def _summed(entries: Iterable[tuple[Item, float]]) -> dict[Item, float]:
    total: dict[Item, float] = {}
    for key, value in entries:
        total[key] = total.get(key, 0.0) + value
    return total


def _nested(items: dict[Item, float]) -> dict[str, float]:
    """Return yearly amounts by what they are for, both parts together."""
    found: dict[str, float] = {}
    for (what, _), cost in items.items():
        found[what] = found.get(what, 0.0) + cost
    return found


def _burning_mass(solution: Solution, keys: tuple[str, ...]) -> float:
    """Return the mass flow of what burns in the named streams [kg/s]."""
    total = 0.0
    for stream in solution.streams:
        if stream.key in keys and isinstance(stream.flow, Stream):
            matter = stream.flow.matter
            burns = matter.lhv > 0.0
            total += float((stream.flow.flows * matter.molar_mass)[burns].sum())
    return total

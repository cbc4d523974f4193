"""Where does the exergy of the sunlight go?

exergy in = exergy in products + destroyed in each piece of equipment + thrown away with each stream
and heat that leaves, in [W] and in the environment that the flowsheet names (see
`chainflow.accounts.exergy`). What comes in and goes out is taken at the plant's border and what is
destroyed piece by piece, so that the sum closes only if every line carries at both ends the same.

Heat that a piece gives to the ambient from above the ambient's temperature is thrown away there;
at or below it, it counts as destroyed. Light or heat at an outlet without a line is thrown away.
Fuel that stays in a store without a line behind it is kept: no product yet, not thrown away either.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any, Literal

from chainflow.accounts.efficiency import sunlight
from chainflow.accounts.exergy import BORDER, carnot, destroyed_in, flow_exergy
from chainflow.accounts.fuel import fuel_lines, worth_of_lines
from chainflow.accounts.purchases import Purchases, purchases
from chainflow.equipment.boundary import Product, Vent
from chainflow.equipment.power import Grid, Switchboard
from chainflow.solver.solution import Solution, SolvedStream
from chainflow.thermo.exergy import solar_exergy_factor
from chainflow.thermo.streams import Stream

Cause = Literal["destroyed", "heat", "light", "power", "stream", "kept"]
_SLACK = 1e-6  # [K]
_CAUSES: dict[str, Cause] = {  # by content
    "heat": "heat",
    "light": "light",
    "power": "power",
    "material": "stream",
}
_THROWN_AWAY: tuple[Cause, ...] = ("heat", "light", "power", "stream")


@dataclass(frozen=True, slots=True)
class Loss:
    """One loss: `where` is equipment, or the sending port of what leaves."""

    where: str
    cause: Cause
    exergy: float  # [W]


@dataclass(frozen=True, slots=True)
class LossMap:
    """All exergy that enters a plant and where it ends; [W]."""

    entering: dict[str, float]  # sunlight, power, heat, cold, material, air
    products: dict[str, float]  # by who gets it, or who sends it
    losses: tuple[Loss, ...]  # largest first
    fuel_lhv: float  # of the fuel kept, or made where nothing is kept

    def as_data(self) -> list[dict[str, Any]]:
        """Return the losses as plain data, largest first."""
        return [
            {
                "where": loss.where,
                "cause": loss.cause,
                "exergy_W": loss.exergy,
                "share_of_sunlight": self.share_of_sunlight(loss.exergy),
                "kWh_per_kWh_fuel": self.per_fuel(loss.exergy),
            }
            for loss in self.losses
        ]

    def sums(self) -> dict[str, Any]:
        """Return the whole balance as plain data."""
        return {
            "entering_W": dict(self.entering),
            "products_W": self.products_total,
            "destroyed_W": self.total("destroyed"),
            "thrown_away_W": self.total(*_THROWN_AWAY),
            "kept_W": self.total("kept"),
            "closure": self.closure,
        }

    @property
    def entering_total(self) -> float:
        """All exergy that enters."""
        return sum(self.entering.values())

    @property
    def products_total(self) -> float:
        """All exergy in what is useful."""
        return sum(self.products.values())

    def total(self, *causes: Cause) -> float:
        """The losses of these causes."""
        return sum(loss.exergy for loss in self.losses if loss.cause in causes)

    @property
    def closure(self) -> float | None:
        """What is missing in the sum, relative to what enters; None if nothing does."""
        gap = (
            self.entering_total
            - self.products_total
            - self.total("destroyed", "kept", *_THROWN_AWAY)
        )
        return abs(gap) / self.entering_total if self.entering_total > 0.0 else None

    def share_of_sunlight(self, exergy: float) -> float | None:
        """Part of the sunlight's exergy; None without sunlight."""
        light = self.entering["sunlight"]
        return exergy / light if light > 0.0 else None

    def per_fuel(self, exergy: float) -> float | None:
        """Exergy per lower heating value of the fuel [-]; None without fuel."""
        return exergy / self.fuel_lhv if self.fuel_lhv > 0.0 else None


def loss_map(solution: Solution, bought: Purchases | None = None) -> LossMap:
    """Return where the exergy of a solution comes from and where it goes."""
    losses = [*_in_equipment(solution), *_leaving(solution)]
    lines = fuel_lines(solution)
    kept, made = worth_of_lines(solution, lines.kept).lhv, worth_of_lines(solution, lines.made).lhv
    return LossMap(
        entering=_entering(solution, bought or purchases(solution)),
        products=_products(solution),
        losses=tuple(sorted(losses, key=lambda loss: -loss.exergy)),
        fuel_lhv=kept if kept > 0.0 else made,
    )


def _entering(solution: Solution, bought: Purchases) -> dict[str, float]:
    air = solution.flowsheet.environment
    taken = (stream for outcome in solution.outcomes.values() for stream in outcome.taken)
    return {
        "sunlight": sunlight(solution) * solar_exergy_factor(air.temperature),
        "power": bought.power_total,
        "heat": sum(carnot(duty.heat, duty.mean, air) for _, duty in bought.heat),
        "cold": sum(carnot(duty.heat, duty.mean, air) for _, duty in bought.cold),
        "material": sum(float(stream.exergy(air)) for stream in bought.material.values()),
        "air": sum(float(stream.exergy(air)) for stream in taken),
    }


def _products(solution: Solution) -> dict[str, float]:
    found: dict[str, float] = {}
    for stream in solution.streams:
        receiver = _receiver(solution, stream)
        if receiver is not None:
            exergy = flow_exergy(stream.flow, stream.content, solution.flowsheet.environment)
            found[receiver] = found.get(receiver, 0.0) + exergy
    return found


def _receiver(solution: Solution, stream: SolvedStream) -> str | None:
    """Return who gets something useful, or who sends power away; None if it is not useful."""
    pieces = solution.flowsheet.equipment
    for target in stream.targets:
        name = target.partition(".")[0]
        if isinstance(pieces[name], Product | Grid):
            return name
    sender = pieces[stream.source]
    away = stream.content == "power" and not stream.targets
    return stream.source if away and not isinstance(sender, Switchboard | Grid) else None


def _in_equipment(solution: Solution) -> Iterator[Loss]:
    """Yield what is destroyed in each piece and what it gives off as heat."""
    air, ambient = solution.flowsheet.environment, solution.flowsheet.ambient
    for name, outcome in solution.outcomes.items():
        if isinstance(solution.flowsheet.equipment[name], BORDER):
            continue
        given = sum(
            carnot(-duty.heat, duty.mean, air)
            for duty in outcome.duties
            if duty.met_by == "ambient" and duty.heat < 0.0 and duty.mean > ambient + _SLACK
        )
        unlinked = sum(
            flow_exergy(stream.flow, stream.content, air)
            for stream in solution.streams
            if stream.source == name and _is_unlinked_energy(stream)
        )
        yield Loss(name, "destroyed", destroyed_in(solution, name) - given - unlinked)
        if given:
            yield Loss(name, "heat", given)


def _leaving(solution: Solution) -> Iterator[Loss]:
    """Yield what leaves the plant and is not useful, by the port that sends it."""
    pieces, air = solution.flowsheet.equipment, solution.flowsheet.environment
    staying = fuel_lines(solution).staying
    for stream in solution.streams:
        into_vent = any(isinstance(pieces[t.partition(".")[0]], Vent) for t in stream.targets)
        unlinked = not stream.targets and isinstance(stream.flow, Stream)
        if into_vent or unlinked or _is_unlinked_energy(stream):
            exergy = flow_exergy(stream.flow, stream.content, air)
            if exergy:
                kept = stream.key in staying
                yield Loss(stream.key, "kept" if kept else _CAUSES[stream.content], exergy)


def _is_unlinked_energy(stream: SolvedStream) -> bool:
    return not stream.targets and stream.content in ("heat", "light")

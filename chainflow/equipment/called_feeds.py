"""Reactors that ask for what they react with: oxygen for their heat, steam for their carbon.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], heat [W].  Oxygen is called so that
the product has the wanted temperature without any heat from outside; it burns to equilibrium with
everything else.  Each amount called is fixed by one equation that is linear in small changes of
all that enters, and the slopes follow from these equations.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import replace
from types import MappingProxyType
from typing import Annotated, Any, ClassVar, NamedTuple

import numpy as np
from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.quantities import Temperature, measured
from chainflow.equipment.base import Array, Caution, Outcome, Port, Role, Site, material
from chainflow.equipment.burning import oxygen_demand
from chainflow.equipment.carbon_margin import (
    DUSTING_FROM,
    DUSTING_TO,
    cooling_activity,
    dusting_caution,
    greatest_activity,
    inlet_caution,
)
from chainflow.equipment.junctions import joined, spread_faults
from chainflow.equipment.ports import Feeds
from chainflow.equipment.reactor_base import Product, ReactorBase, holds_carbon
from chainflow.thermo.stream_slopes import enthalpy_slopes
from chainflow.thermo.streams import Stream

_MOST_STEPS = 100
_CLOSE = 1e-8  # of what is fed: a step this small ends the search, its error is its square
OXYGEN_PORT = Port(
    "oxygen",
    "material",
    Role.CALLS,
    optional=True,
    means="oxygen or air that brings the product to `temperature` (with `autothermal: true`)",
)


class Call(NamedTuple):
    """One amount that is asked for, and the equation that fixes it."""

    port: str
    one: Stream  # one mol/s of what its server gives
    amount: float  # [mol/s]
    row: Array  # weights of [n_1..n_C, H] whose sum over `counted` is zero
    counted: tuple[str, ...]  # ports that take part in the equation


class Fed(NamedTuple):
    """All that enters a reactor, what was called for it, and why an amount has no answer."""

    stream: Stream
    calls: tuple[Call, ...] = ()
    unmet: Mapping[str, str] = MappingProxyType({})

    @property
    def drawn(self) -> dict[str, float]:
        return {call.port: call.amount for call in self.calls}


class _Inner(NamedTuple):
    """What the slopes use again."""

    fed: Fed
    made: Product


class FedReactor(ReactorBase):
    """Common part of reactors to equilibrium that may call for oxygen or steam."""

    gives: ClassVar[tuple[str, ...]] = (
        *ReactorBase.gives,
        "carbon_activity_inlet",
        "carbon_activity_cooling",
    )

    autothermal: bool = Field(
        False,
        description="`oxygen` is called so that the outlet reaches `temperature` without heat",
    )
    carbon_margin: Annotated[float, measured("1", gt=0, le=10)] = Field(
        1.0, description="carbon activity above which there is a caution; 0.5 to 0.7 are prudent"
    )
    dusting_from: Temperature = Field(
        DUSTING_FROM, description="cold end of the window of metal dusting, for a caution"
    )
    dusting_to: Temperature = Field(
        DUSTING_TO, description="hot end of the window of metal dusting, for a caution"
    )

    @model_validator(mode="after")
    def _oxygen_needs_a_temperature(self) -> FedReactor:
        if self.autothermal and self.level is None:
            raise PydanticCustomError(
                "reactor",
                "'autothermal' wants the 'temperature' that the outlet is to reach, and neither "
                "'duty' nor 'adiabatic'",
                {},
            )
        if self.dusting_from >= self.dusting_to:
            raise PydanticCustomError(
                "reactor", "'dusting_from' is not below 'dusting_to': wanted a window", {}
            )
        return self

    def port_list(self) -> tuple[Port, ...]:
        return tuple(
            replace(port, optional=False) if port.name == "oxygen" else port
            for port in self.ports
            if port.name != "oxygen" or self.autothermal
        )

    def pressure_faults(self, inlets: Mapping[str, tuple[float, ...]]) -> Iterator[tuple[str, str]]:
        yield from spread_faults(inlets)

    @property
    def carbon_limit(self) -> float:
        return self.carbon_margin

    @property
    def burns_oxygen(self) -> bool:
        return self.autothermal

    # --- physics -----------------------------------------------------------------------------

    def fed(self, feeds: Feeds, site: Site) -> Fed:
        """What enters before the oxygen."""
        return Fed(material(feeds, "feed"))

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        fed = self.fed(feeds, site)
        if self.autothermal:
            return self._autothermal(fed, material(feeds, "oxygen"), site)
        return self._finished(fed, self.react(fed.stream, site))

    def _finished(self, fed: Fed, outcome: Outcome) -> Outcome:
        return replace(
            outcome,
            drawn={**outcome.drawn, **fed.drawn},
            unmet={**outcome.unmet, **fed.unmet},
            inner=_Inner(fed, outcome.inner),
        )

    def _autothermal(self, fed: Fed, oxygen: Stream, site: Site) -> Outcome:
        """Find the oxygen, and let the energy balance have the last word on the temperature."""
        level, pressure = self.level, min(float(fed.stream.pressure), float(oxygen.pressure))
        assert level is not None
        amount, why = self._oxygen_needed(fed.stream, oxygen, pressure - self.pressure_drop, site)
        entering = joined((fed.stream, oxygen.scaled(amount)), site.matter, pressure)
        unmet = {**fed.unmet, **({"oxygen": why} if why else {})}
        if why or float(entering.total) == 0.0:
            outcome = self._unheated(entering, pressure - self.pressure_drop, site)
            row = np.zeros(len(entering.flows) + 1)
        else:
            outcome, row = self._burning(entering, level, site)
        call = Call("oxygen", oxygen, amount, row, ("feed", "steam", "oxygen"))
        return self._finished(Fed(entering, (*fed.calls, call), unmet), outcome)

    def _burning(self, entering: Stream, level: float, site: Site) -> tuple[Outcome, Array]:
        """The outcome at the wanted temperature and the row of the energy balance."""
        matter, pressure = site.matter, float(entering.pressure) - self.pressure_drop
        made = self._made_at(entering.flows, level, pressure, matter)
        product = Stream.from_enthalpy(
            matter, made.flows, float(entering.enthalpy), pressure, level
        )
        assert made.by_feed is not None
        row = np.append(enthalpy_slopes(product)[0] @ made.by_feed, -1.0)
        return self._outcome(entering, product, [], made, site), row

    def _oxygen_needed(
        self, fed: Stream, oxygen: Stream, pressure: float, site: Site
    ) -> tuple[float, str]:
        """Amount of oxygen [mol/s] that closes the energy balance, or why there is none.

        Newton on the amount between none and what burns everything, halving what a step would
        leave; the residual is the enthalpy of the product at the wanted temperature less what
        enters.
        """
        matter, level = site.matter, self.level
        assert level is not None
        if float(fed.total) == 0.0:
            return 0.0, ""
        demand = oxygen_demand(matter)
        brings = float(oxygen.flow("O2")) - float(demand @ oxygen.flows)
        most = float(demand @ fed.flows - fed.flow("O2")) / brings if brings > 0.0 else 0.0
        if brings <= 0.0:
            return 0.0, "what is served there brings no oxygen: serve oxygen or air"
        least, amount = 0.0, 0.0
        hot_enough: float | None = None
        for _ in range(_MOST_STEPS):
            excess, slope = self._lacking(fed, oxygen, amount, pressure, site)
            if amount == 0.0 and excess < 0.0:
                return 0.0, _too_hot(level)
            if amount == most and excess > 0.0:
                return most, _too_cold(level)
            step = -excess / slope if slope < 0.0 else most
            if abs(step) <= _CLOSE * float(fed.total):
                return max(amount + step, 0.0), ""
            if excess > 0.0:
                least = amount
            else:
                hot_enough = amount
            greatest = most if hot_enough is None else hot_enough
            middle = most if hot_enough is None else 0.5 * (least + greatest)
            amount = amount + step if least < amount + step < greatest else middle
        return amount, ""

    def _lacking(
        self, fed: Stream, oxygen: Stream, amount: float, pressure: float, site: Site
    ) -> tuple[float, float]:
        """Heat that an amount of oxygen leaves wanting [W], and its slope [J/mol]."""
        matter, level = site.matter, self.level
        assert level is not None
        made = self._made_at(fed.flows + amount * oxygen.flows, level, pressure, matter)
        assert made.by_feed is not None
        partial = matter.gas_partial(made.flows, level, pressure).enthalpy
        brought = float(fed.enthalpy) + amount * float(oxygen.enthalpy)
        slope = float(partial @ (made.by_feed @ oxygen.flows)) - float(oxygen.enthalpy)
        return float(made.flows @ partial) - brought, slope

    def _report(
        self, feed: Stream, product: Stream, site: Site
    ) -> tuple[dict[str, float], tuple[Caution, ...]]:
        results, cautions = super()._report(feed, product, site)
        if "C" not in site.matter.elements or not holds_carbon(feed):
            return results, cautions
        level = float(feed.temperature)
        before = greatest_activity(site.matter, feed.flows, level, float(feed.pressure))
        results["carbon_activity_inlet"] = before
        cooled = cooling_activity(product, self.dusting_from, self.dusting_to)
        if cooled is not None:
            results["carbon_activity_cooling"] = cooled.activity
        dusting = dusting_caution(cooled, self.dusting_from)
        more = (*inlet_caution(before, level, self.carbon_limit), *dusting)
        return results, (*cautions, *more)

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        inner = outcome.inner
        assert isinstance(inner, _Inner)
        fed, made = inner
        if outcome.unmet or any(call.amount <= 0.0 for call in fed.calls):
            return {}
        blocks = self.blocks(fed.stream, made, site, outcome)
        return through_calls(blocks, fed.calls) if blocks else {}


def _too_hot(level: float) -> str:
    return (
        f"overfull, the product is hotter than {level - 273.15:.4g} degC without any oxygen: "
        "feed it colder, or leave 'autothermal' out"
    )


def _too_cold(level: float) -> str:
    return (
        f"the product stays below {level - 273.15:.4g} degC even if all of the feed burns: heat "
        "the feed, or lower 'temperature'"
    )


def through_calls(blocks: dict[str, Array], calls: tuple[Call, ...]) -> dict[str, dict[str, Array]]:
    """Slopes by each inlet, from those by all that enters, with the amounts called following."""
    size = next(iter(blocks.values())).shape[1]
    columns = np.zeros((size, len(calls)))
    for place, call in enumerate(calls):
        columns[:, place] = np.append(call.one.flows, call.one.enthalpy)
    matrix = np.array(
        [
            [
                call.row @ columns[:, place] if other.port in call.counted else 0.0
                for place, other in enumerate(calls)
            ]
            for call in calls
        ]
    ).reshape(len(calls), len(calls))
    slopes = {}
    for port, factor in (("feed", 1.0), *((call.port, call.amount) for call in calls)):
        rows = np.array(
            [call.row if port in call.counted else np.zeros(size) for call in calls]
        ).reshape(len(calls), size)
        gain = -np.linalg.solve(matrix, rows) if calls else rows
        entering = np.eye(size) + columns @ gain
        slopes[port] = {name: factor * (block @ entering) for name, block in blocks.items()}
        for place, call in enumerate(calls):
            slopes[port][f"drawn:{call.port}"] = factor * gain[place][None, :]
    return slopes

"""Pressure-swing adsorption by stated recovery and purity.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], power [W].
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from typing import Annotated, Any, ClassVar

import numpy as np
from pydantic import Field

from chainflow.basis.quantities import OpenFraction, Pressure, PressureDrop, measured
from chainflow.equipment.base import (
    HEAT_PORTS,
    Array,
    Caution,
    Duty,
    Equipment,
    Outcome,
    Port,
    Role,
    Site,
    material,
)
from chainflow.equipment.parting import (
    at_one_temperature,
    free_separation,
    minimum_work,
    one_temperature_blocks,
)
from chainflow.equipment.ports import Feeds
from chainflow.equipment.pressures import lower_feed
from chainflow.equipment.published import pressure_swing_practice as practice
from chainflow.thermo.components import Matter
from chainflow.thermo.streams import Stream


class PressureSwing(Equipment):
    """Gives one component at a recovery and purity; all else leaves with the tail gas.

    The impurities of the product are those of the feed in their own ratio, water apart, which
    stays on the adsorbent and leaves with the tail.  No heat is exchanged with outside: both gases
    leave at the one temperature that closes the energy.
    """

    kind: ClassVar[str] = "pressure-swing"
    family: ClassVar[str] = "separation"
    gives: ClassVar[tuple[str, ...]] = (
        "purity",
        "recovery",
        "minimum_work_W",
        "stated_power_W",
        "outlet_K",
    )
    ports: ClassVar[tuple[Port, ...]] = (
        Port("feed", "material", Role.TAKES, main=True, means="the gas"),
        Port("power", "power", Role.CALLS, optional=True, means="the stated power (vacuum pumps)"),
        HEAT_PORTS[2],
        Port("product", "material", Role.OFFERS, main=True, means="the component wanted"),
        Port("tail", "material", Role.OFFERS, optional=True, means="all else, at low pressure"),
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "product_i = recovery * feed_i for the component",
        (
            "impurities = product * (1 - purity) / purity, in the feed's own ratio without water, "
            "at most as concentrated as in the feed"
        ),
    )
    sources: ClassVar[tuple[str, ...]] = (
        (
            "defaults and ranges: common practice, no source (hydrogen: recovery 75 to 92 %, "
            "purity "
            "99.9 to 99.999 %, feed 10 to 40 bar, tail 1.1 to 1.5 bar)"
        ),
    )

    component: str = Field("H2", description="component that is wanted")
    recovery: OpenFraction = Field(0.85, description="share of it that leaves as product")
    purity: OpenFraction = Field(0.999, description="mole fraction of it in the product")
    tail_pressure: Pressure = Field(1.3e5, description="pressure of the tail gas, absolute")
    product_pressure: Pressure | None = Field(
        None, description="pressure of the product (default: the feed's less `pressure_drop`)"
    )
    pressure_drop: PressureDrop = Field(0.5e5, description="pressure lost by the product")
    power_use: Annotated[float, measured("J/kg", ge=0)] = Field(
        0.0, description="electric power per mass of product, for vacuum pumps"
    )

    def component_names(self) -> Iterator[tuple[tuple[str, ...], str]]:
        yield ("component",), self.component

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        mine = species == self.component
        goes = {
            "product": mine or (species != "H2O" and self.purity < 1.0),
            "tail": not mine or self.recovery < 1.0,
        }
        return [(outlet, species) for outlet in outlets if goes[outlet]]

    def outlet_pressures(self, inlets: Mapping[str, tuple[float, ...]]) -> dict[str, float]:
        feed = min(inlets.get("feed", (float("inf"),)))
        return {"product": self._product_pressure(feed), "tail": self.tail_pressure}

    def _product_pressure(self, feed: float) -> float:
        return feed - self.pressure_drop if self.product_pressure is None else self.product_pressure

    def pressure_faults(self, inlets: Mapping[str, tuple[float, ...]]) -> Iterator[tuple[str, str]]:
        wanted = max(self.tail_pressure, self.product_pressure or self.pressure_drop)
        yield from lower_feed(inlets, wanted)

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        feed, matter = material(feeds, "feed"), site.matter
        product = self._product(feed.flows, matter)
        level = float(feed.temperature)
        parts = [
            (product, self._product_pressure(float(feed.pressure))),
            (feed.flows - product, self.tail_pressure),
        ]
        one, other = at_one_temperature(matter, parts, float(feed.enthalpy), level)
        power = self.power_use * float(one.mass_flow)
        needs = [Duty("pump heat", -power, level, level, level)]
        duties, _, drawn, given = self.settle(needs if power else [], site)
        drawn["power"] = power
        least = minimum_work((feed,), (one, other)) if site.detail else 0.0
        return Outcome(
            {"product": one, "tail": other, **given},
            drawn,
            duties,
            power=power,
            results={
                "purity": float(one.fraction(self.component)),
                "recovery": self.recovery,
                "minimum_work_W": least,
                "stated_power_W": power,
                "outlet_K": float(one.temperature),
            },
            cautions=self._cautions(feed) if site.detail else (),
            idealisations=free_separation(power, least) if site.detail else (),
        )

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        feed, matter = material(feeds, "feed"), site.matter
        if float(feed.total) == 0.0 or (self.power_use and "heat" in site.outlets):
            return {}
        one, other = outcome.outlets["product"], outcome.outlets["tail"]
        assert isinstance(one, Stream) and isinstance(other, Stream)
        part = self._product_slopes(feed.flows, matter)
        blocks = one_temperature_blocks((one, other), (part, np.eye(len(part)) - part))
        if blocks is None:
            return {}
        power = np.append(self.power_use * (matter.molar_mass @ part), 0.0)
        found = {"product": blocks[0], "tail": blocks[1], "drawn:power": power[None, :]}
        if "heat" in site.outlets:
            found["heat"] = np.zeros((4, len(power)))
        return {"feed": found}

    def _product_slopes(self, flows: Array, matter: Matter) -> Array:
        """How the product's flows answer to the feed's; shape (components, components)."""
        place = matter.index[self.component]
        others = self._others(flows, matter)
        total, gain = float(others.sum()), self.recovery * (1.0 - self.purity) / self.purity
        slopes = np.zeros((len(flows), len(flows)))
        slopes[place, place] = self.recovery
        counted = self._others(np.ones_like(flows), matter)
        if gain * flows[place] >= self.recovery * total:
            return slopes + self.recovery * np.diag(counted)
        share = gain * flows[place] / total
        slopes += share * (np.diag(counted) - np.outer(others / total, counted))
        slopes[:, place] += gain * others / total
        return slopes

    def _others(self, flows: Array, matter: Matter) -> Array:
        """The flows without the component that is wanted and without water."""
        others = flows.copy()
        others[matter.index[self.component]] = 0.0
        if matter.water is not None and self.component != "H2O":
            others[matter.water] = 0.0
        return others

    def _product(self, flows: Array, matter: Matter) -> Array:
        place = matter.index[self.component]
        others = self._others(flows, matter)
        product = np.zeros_like(flows)
        product[place] = self.recovery * flows[place]
        total = float(others.sum())
        if total > 0.0:
            allowed = product[place] * (1.0 - self.purity) / self.purity
            product += others * min(allowed / total, self.recovery)
        return product

    def _cautions(self, feed: Stream) -> tuple[Caution, ...]:
        found = []
        share = float(feed.dry_fraction(self.component))
        if self.component == "H2" and 0.0 < share < practice.LEAST_HYDROGEN:
            text = (
                f"the feed holds {100 * share:.3g} % hydrogen: pressure swing is used from some "
                "60 % on"
            )
            found.append(Caution("lean-feed", text))
        low, high = practice.RECOVERY
        if self.component == "H2" and self.recovery > high:
            text = (
                f"recovery {100 * self.recovery:.4g} % is above the usual {100 * low:g} to "
                f"{100 * high:g} %; it falls by 5 to 10 points for each decade of purity"
            )
            found.append(Caution("high-recovery", text))
        if float(feed.water.sum()) > 1e-9 * float(feed.total):
            text = "liquid water arrives at the adsorber: put a condenser and a heater before it"
            found.append(Caution("liquid-at-adsorber", text))
        return tuple(found)

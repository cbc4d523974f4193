"""What all reactors share: how the temperature is set, how the heat is booked, what is reported.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], heat [W].  Equilibrium compositions
come from ideal-gas Gibbs energies, enthalpies from the real gas.  No solid carbon is formed; the
carbon activity of the product says whether it would be.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from typing import Any, ClassVar, NamedTuple

import numpy as np
from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.quantities import (
    Power,
    PressureDrop,
)
from chainflow.equipment.base import (
    HEAT_PORTS,
    Array,
    Caution,
    Duty,
    Equipment,
    Flow,
    Outcome,
    Port,
    Role,
    Site,
    material,
)
from chainflow.equipment.beyond_equilibrium import beyond_equilibrium
from chainflow.equipment.carbon_margin import CARBON_FORMS_ABOVE
from chainflow.equipment.cooling import cooling_duties
from chainflow.equipment.ports import Feeds
from chainflow.equipment.reactions import Reaction
from chainflow.thermo.carbon import carbon_activity
from chainflow.thermo.components import Matter
from chainflow.thermo.equilibrium import equilibrate, equilibrate_adiabatic
from chainflow.thermo.stream_slopes import enthalpy_slopes
from chainflow.thermo.streams import Stream

TRACE = 1e-4  # mole fraction from which CO or O2 deserves a caution


class Product(NamedTuple):
    """What a reactor makes of a feed, with slopes where they are known."""

    flows: Array
    by_feed: Array | None  # at fixed temperature, or at fixed enthalpy if none is set
    unmet: dict[str, str]
    by_enthalpy: Array | None = None  # where no temperature is set
    temperature: float | None = None  # [K], where an equilibrium found it


class ReactorBase(Equipment):
    """Common part: how the temperature is set and how the heat is booked."""

    family: ClassVar[str] = "reactors"
    makes: ClassVar[bool] = True
    followed: ClassVar[tuple[str, ...]] = ("CO2", "CO")  # whose conversion is reported
    gives: ClassVar[tuple[str, ...]] = (
        "outlet_temperature_K",
        "carbon_activity",
        "conversion_CO2",
        "conversion_CO",
    )
    ports: ClassVar[tuple[Port, ...]] = (
        Port("feed", "material", Role.TAKES, main=True, means="what reacts"),
        *HEAT_PORTS,
        Port("product", "material", Role.OFFERS, main=True, means="what leaves"),
    )
    sources: ClassVar[tuple[str, ...]] = (
        (
            "species data: NASA polynomials (McBride, Gordon, Reno, NASA TM-4513, 1993) "
            "as shipped with Cantera"
        ),
    )

    adiabatic: bool = Field(
        False, description="no heat passes the wall (also if nothing else is said)"
    )
    duty: Power | None = Field(None, description="heat into the reactor, negative for cooling")
    pressure_drop: PressureDrop = Field(0.0, description="pressure lost on the way")

    @model_validator(mode="after")
    def _one_heat(self) -> ReactorBase:
        given = [
            n
            for n, on in (
                ("temperature", self.level is not None),
                ("adiabatic", self.adiabatic),
                ("duty", self.duty is not None),
            )
            if on
        ]
        if len(given) > 1:
            raise PydanticCustomError(
                "reactor",
                "{given} are given, wanted one of them",
                {"given": " and ".join(f"'{n}'" for n in given)},
            )
        return self

    @property
    def level(self) -> float | None:
        """The temperature that is set, if one is."""
        value: float | None = getattr(self, "temperature", None)
        return value

    def equilibrium_species(self, matter: Matter) -> tuple[str, ...] | None:
        """The species that come to equilibrium, or None if conversions are stated."""
        raise NotImplementedError  # every reactor gives its own

    @property
    def shift_of_temperature(self) -> float:
        """What is added to the temperature where equilibrium constants are taken [K]."""
        return 0.0

    def stated(self, flows: Array, matter: Matter) -> tuple[Reaction, ...]:
        """The reactions whose conversions or extents are stated."""
        return ()

    def convert(self, flows: Array, matter: Matter) -> Product:
        """The product of stated conversions."""
        raise NotImplementedError  # every reactor gives its own

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        return self.react(material(feeds, "feed"), site)

    def react(self, feed: Stream, site: Site) -> Outcome:
        """Do the work on all that enters, as one stream."""
        matter, pressure = site.matter, float(feed.pressure) - self.pressure_drop
        if self.level is None:
            return self._unheated(feed, pressure, site)
        made = self._made_at(feed.flows, self.level, pressure, matter)
        product = Stream.at(matter, made.flows, self.level, pressure)
        needs = self._needs(feed, product, site)
        return self._outcome(feed, product, needs, made, site)

    def _unheated(self, feed: Stream, pressure: float, site: Site) -> Outcome:
        """Adiabatic, or with a duty: the energy balance sets the temperature."""
        heat, matter = self.duty or 0.0, site.matter
        enthalpy = float(feed.enthalpy) + heat
        made = self._made_of(feed, enthalpy, pressure, matter)
        guess = float(feed.temperature) if made.temperature is None else made.temperature
        product = Stream.from_enthalpy(matter, made.flows, enthalpy, pressure, guess)
        needs = self._needs(feed, product, site) if heat else []
        return self._outcome(feed, product, needs, made, site)

    def _needs(self, feed: Stream, product: Stream, site: Site) -> list[Duty]:
        """Heat that brings the feed to the outlet's temperature, and heat of reaction there."""
        level, pressure = float(product.temperature), float(product.pressure)
        if float(feed.total) == 0.0:
            return [Duty("reaction", 0.0, level, level, level)]
        heated = Stream.at(site.matter, feed.flows, level, pressure)
        reaction = float(product.enthalpy) - float(heated.enthalpy)
        needs = cooling_duties("bring feed to temperature", feed, heated, site)
        return [*needs, Duty("reaction", reaction, level, level, level)]

    def _made_at(self, flows: Array, level: float, pressure: float, matter: Matter) -> Product:
        """The product at a temperature."""
        species = self.equilibrium_species(matter)
        if species is None:
            return self.convert(flows, matter)
        if not flows.any():
            return Product(flows, np.eye(len(flows)), {})
        constants_at = level + self.shift_of_temperature
        found = equilibrate(matter, flows, level, pressure, species, constants_at)
        return Product(found.flows, found.by_feed, {})

    def _made_of(self, feed: Stream, enthalpy: float, pressure: float, matter: Matter) -> Product:
        """The product with an enthalpy."""
        species = self.equilibrium_species(matter)
        nothing = np.zeros(len(feed.flows))
        if species is None or float(feed.total) == 0.0:
            made = self.convert(feed.flows, matter) if species is None else None
            return (made or Product(feed.flows, np.eye(len(nothing)), {}))._replace(
                by_enthalpy=nothing
            )
        found = equilibrate_adiabatic(
            matter, feed.flows, enthalpy, pressure, species, self.shift_of_temperature
        )
        return Product(found.flows, found.by_feed, {}, found.by_enthalpy, found.temperature)

    def _outcome(
        self, feed: Stream, product: Stream, needs: list[Duty], made: Product, site: Site
    ) -> Outcome:
        duties, electric, drawn, given = self.settle(needs, site)
        outlets: dict[str, Flow] = {"product": product, **given}
        results, cautions = self._report(feed, product, site) if site.detail else ({}, ())
        return Outcome(
            outlets,
            drawn,
            duties,
            power=electric,
            results=results,
            cautions=cautions,
            unmet=made.unmet,
            inner=made,
        )

    def _report(
        self, feed: Stream, product: Stream, site: Site
    ) -> tuple[dict[str, float], tuple[Caution, ...]]:
        matter = site.matter
        results = {"outlet_temperature_K": float(product.temperature)}
        cautions = list(self._window(float(product.temperature)))
        if "C" in matter.elements and holds_carbon(product):
            activity = carbon_activity(
                matter, product.flows, float(product.temperature), float(product.pressure)
            )
            results["carbon_activity"] = activity
            if activity > self.carbon_limit and float(product.temperature) > CARBON_FORMS_ABOVE:
                text = (
                    f"carbon activity {activity:.3g} at the product: soot can form; "
                    "more steam or hydrogen lowers it"
                )
                cautions.append(Caution("carbon-activity", text))
        results |= conversions(feed.flows, product.flows, matter, self.followed)
        if not self.burns_oxygen:
            cautions += _oxygen(feed)
        cautions += self._traces(feed, product)
        cautions += beyond_equilibrium(feed, product, self.stated(feed.flows, matter), matter)
        return results, tuple(cautions)

    @property
    def carbon_limit(self) -> float:
        """The carbon activity above which there is a caution."""
        return 1.0

    @property
    def burns_oxygen(self) -> bool:
        """Whether oxygen is there to react, so that its catalyst stands it."""
        return False

    def _window(self, level: float) -> Iterator[Caution]:
        """Cautions of a reactor outside the window of its catalyst."""
        return iter(())

    def _traces(self, feed: Stream, product: Stream) -> Iterator[Caution]:
        """Cautions about what can meet the catalyst."""
        return iter(())

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        made = outcome.inner
        assert isinstance(made, Product)
        blocks = self.blocks(material(feeds, "feed"), made, site, outcome)
        return {"feed": blocks} if blocks else {}

    def blocks(self, feed: Stream, made: Product, site: Site, outcome: Outcome) -> dict[str, Array]:
        """Slopes by all that enters; {} if they are not known."""
        product = outcome.outlets["product"]
        assert isinstance(product, Stream)
        known = made.by_feed is not None and not made.unmet and not product.water.any()
        if not known or float(feed.total) == 0.0 or "heat" in site.inlets:
            return {}
        blocks = {"product": self._block(made, product)}
        if "heat" in site.outlets:
            given = [d for d in outcome.duties if d.met_by != "own" and d.heat != 0.0]
            if len(given) != 1 or given[0].purpose != "reaction" or given[0].met_by != "heat":
                return {}
            blocks["heat"] = np.zeros((4, len(feed.flows) + 1))
            blocks["heat"][0] = -blocks["product"][-1]
            blocks["heat"][0, -1] += 1.0
        if "power" in site.inlets and self.level is not None:
            if any(duty.met_by not in ("power", "own") for duty in outcome.duties):
                return {}
            blocks["drawn:power"] = _electric_slope(blocks["product"], outcome)
        return blocks

    def _block(self, made: Product, product: Stream) -> Array:
        """Slopes of the product by the feed."""
        assert made.by_feed is not None
        size = len(made.flows)
        block = np.zeros((size + 1, size + 1))
        block[:size, :size] = made.by_feed
        if made.by_enthalpy is not None:
            block[:size, size] = made.by_enthalpy
            block[size, size] = 1.0
        else:
            block[size, :size] = enthalpy_slopes(product)[0] @ made.by_feed
        return block


def _electric_slope(block: Array, outcome: Outcome) -> Array:
    """Slopes of the electric power by the feed: it meets the whole heat need, or there is none."""
    if not any(duty.met_by == "power" and duty.heat > 0.0 for duty in outcome.duties):
        return np.zeros((1, block.shape[1]))
    row = block[-1].copy()
    row[-1] -= 1.0
    return row[None, :]


def exchanging(
    species: str, reacting: Iterable[str], outlets: Iterable[str], matter: Matter
) -> list[tuple[str, str]]:
    """A species that reacts may leave as any reacting species it shares an element with."""
    reacting = tuple(name for name in reacting if name in matter.index)
    if species not in reacting:
        return [(o, species) for o in outlets]
    made = [name for name in reacting if name == species or share_element(species, name, matter)]
    return [(o, name) for o in outlets for name in made]


def share_element(first: str, second: str, matter: Matter) -> bool:
    """Whether two components have an element in common."""
    a, b = matter.formula[:, matter.index[first]], matter.formula[:, matter.index[second]]
    return bool(((a > 0) & (b > 0)).any())


def holds_carbon(stream: Stream) -> bool:
    """Whether any component with carbon flows."""
    row = stream.matter.formula[stream.matter.elements.index("C")]
    return bool((row @ stream.flows) > 0.0)


def conversions(
    entering: Array, leaving: Array, matter: Matter, names: Iterable[str]
) -> dict[str, float]:
    """Share of each named component that reacted, where there was any."""
    total, results = float(entering.sum()), {}
    for name in names:
        place = matter.index.get(name)
        if place is not None and entering[place] > 1e-9 * total:
            results[f"conversion_{name}"] = 1.0 - float(leaving[place] / entering[place])
    return results


def _oxygen(feed: Stream) -> Iterator[Caution]:
    """Oxygen burns on a reduced catalyst."""
    oxygen = share_of(feed, "O2")
    if oxygen > TRACE:
        text = (
            f"{100 * oxygen:.2g} % O2 in the feed burns on a reduced catalyst: take it out before"
        )
        yield Caution("oxygen-into-catalyst", text)


def share_of(stream: Stream, name: str) -> float:
    """Mole fraction of a component, zero if it is not there."""
    place = stream.matter.index.get(name)
    total = float(stream.total)
    return float(stream.flows[place]) / total if place is not None and total > 0.0 else 0.0

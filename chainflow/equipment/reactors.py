"""Reactors: stated conversions or chemical equilibrium, at a temperature, adiabatic or with a duty.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], heat [W].  Equilibrium compositions
come from ideal-gas Gibbs energies, enthalpies from the real gas.  No solid carbon is formed; the
carbon activity of the product says whether it would be.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from typing import Annotated, Any, ClassVar, Literal, NamedTuple

import numpy as np
from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.quantities import (
    Fraction, Power, PressureDrop, Temperature, TemperatureDifference, measured,
)
from chainflow.equipment.base import (
    HEAT_PORTS, Array, Caution, Duty, Equipment, Flow, Outcome, Port, Role, Site, material,
)
from chainflow.equipment.ports import Feeds
from chainflow.equipment.reactions import Reaction, parse_equation
from chainflow.thermo.carbon import carbon_activity
from chainflow.thermo.components import Matter
from chainflow.thermo.equilibrium import equilibrate, equilibrate_adiabatic
from chainflow.thermo.streams import Stream, enthalpy_slopes

_SHIFT = ("H2", "H2O", "CO", "CO2")
_METHANATION = (*_SHIFT, "CH4")
_OXYGEN = ("O2",)  # burns on every one of these catalysts
_NICKEL_CARBONYL_BELOW = 473.15  # [K], with CO over nickel; common practice, no source
_TRACE = 1e-4  # mole fraction from which CO or O2 deserves a caution


class Product(NamedTuple):
    """What a reactor makes of a feed at fixed temperature, with slopes where they are known."""

    flows: Array
    by_feed: Array | None
    unmet: dict[str, str]


class _Reactor(Equipment):
    """Common part: how the temperature is set and how the heat is booked."""

    family: ClassVar[str] = "reactors"
    makes: ClassVar[bool] = True
    gives: ClassVar[tuple[str, ...]] = ("outlet_temperature_K", "carbon_activity", "conversion_CO2", "conversion_CO")
    ports: ClassVar[tuple[Port, ...]] = (
        Port("feed", "material", Role.TAKES, main=True, means="what reacts"),
        *HEAT_PORTS,
        Port("product", "material", Role.OFFERS, main=True, means="what leaves"),
    )
    sources: ClassVar[tuple[str, ...]] = (
        "species data: NASA polynomials (McBride, Gordon, Reno, NASA TM-4513, 1993) as shipped with Cantera",
    )

    adiabatic: bool = Field(False, description="no heat passes the wall (also if nothing else is said)")
    duty: Power | None = Field(None, description="heat into the reactor, negative for cooling")
    pressure_drop: PressureDrop = Field(0.0, description="pressure lost on the way")

    @model_validator(mode="after")
    def _one_heat(self) -> _Reactor:
        given = [n for n, on in (("temperature", self.level is not None), ("adiabatic", self.adiabatic), ("duty", self.duty is not None)) if on]
        if len(given) > 1:
            raise PydanticCustomError("reactor", "{given} are given, wanted one of them", {"given": " and ".join(f"'{n}'" for n in given)})
        return self

    @property
    def level(self) -> float | None:
        """The temperature that is set, if one is."""
        value: float | None = getattr(self, "temperature", None)
        return value

    def equilibrium_species(self, matter: Matter) -> tuple[str, ...] | None:
        """The species that come to equilibrium, or None if conversions are stated."""
        raise NotImplementedError

    @property
    def shift_of_temperature(self) -> float:
        """What is added to the temperature where equilibrium constants are taken [K]."""
        return 0.0

    def convert(self, flows: Array, matter: Matter) -> Product:
        """The product of stated conversions."""
        raise NotImplementedError

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        feed, matter = material(feeds, "feed"), site.matter
        pressure = float(feed.pressure) - self.pressure_drop
        if self.level is None:
            return self._unheated(feed, pressure, site)
        flows, _, unmet = self._product(feed.flows, matter, self.level, pressure)
        product = Stream.at(matter, flows, self.level, pressure)
        heated = float(feed.enthalpy) if float(feed.total) == 0.0 else float(Stream.at(matter, feed.flows, self.level, pressure).enthalpy)
        needs = [
            Duty.between("bring feed to temperature", heated - float(feed.enthalpy), float(feed.temperature), self.level),
            Duty("reaction", float(product.enthalpy) - heated, self.level, self.level, self.level),
        ]
        return self._outcome(feed, product, needs, unmet, site)

    def _unheated(self, feed: Stream, pressure: float, site: Site) -> Outcome:
        """Adiabatic, or with a duty: the energy balance sets the temperature."""
        heat, matter = self.duty or 0.0, site.matter
        enthalpy = float(feed.enthalpy) + heat
        species = self.equilibrium_species(matter)
        unmet: dict[str, str] = {}
        if float(feed.total) == 0.0:
            product = feed.at_pressure(pressure)
        elif species is not None:
            found = equilibrate_adiabatic(matter, feed.flows, enthalpy, pressure, species, self.shift_of_temperature)
            product = Stream.from_enthalpy(matter, found.flows, enthalpy, pressure, found.temperature)
        else:
            flows, _, unmet = self.convert(feed.flows, matter)
            product = Stream.from_enthalpy(matter, flows, enthalpy, pressure, float(feed.temperature))
        needs = [Duty.between("duty", heat, float(feed.temperature), float(product.temperature))]
        return self._outcome(feed, product, needs, unmet, site)

    def _product(self, flows: Array, matter: Matter, level: float, pressure: float) -> Product:
        species = self.equilibrium_species(matter)
        if species is None:
            return self.convert(flows, matter)
        if not flows.any():
            return Product(flows, np.eye(len(flows)), {})
        found = equilibrate(matter, flows, level, pressure, species, level + self.shift_of_temperature)
        return Product(found.flows, found.by_feed, {})

    def _outcome(self, feed: Stream, product: Stream, needs: list[Duty], unmet: dict[str, str], site: Site) -> Outcome:
        duties, electric, drawn, given = self.settle(needs, site)
        outlets: dict[str, Flow] = {"product": product, **given}
        results, cautions = self._report(feed, product, site) if site.detail else ({}, ())
        return Outcome(outlets, drawn, duties, power=electric, results=results, cautions=cautions, unmet=unmet)

    def _report(self, feed: Stream, product: Stream, site: Site) -> tuple[dict[str, float], tuple[Caution, ...]]:
        matter = site.matter
        results = {"outlet_temperature_K": float(product.temperature)}
        cautions = list(self._window(float(product.temperature)))
        if "C" in matter.elements and _carbon(product):
            activity = carbon_activity(matter, product.flows, float(product.temperature), float(product.pressure))
            results["carbon_activity"] = activity
            if activity > 1.0:
                text = f"carbon activity {activity:.3g} at the product: soot can form; more steam or hydrogen lowers it"
                cautions.append(Caution("carbon-activity", text))
        results |= _conversions(feed, product)
        return results, tuple(cautions) + _traces(self, feed, product)

    def _window(self, level: float) -> Iterator[Caution]:
        """Cautions of a reactor outside the window of its catalyst."""
        return iter(())

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        if "heat" in site.outlets or "heat" in site.inlets:
            return {}
        feed, product = material(feeds, "feed"), outcome.outlets["product"]
        assert isinstance(product, Stream)
        if float(feed.total) == 0.0 or product.water.any():
            return {}
        if self.level is None:
            return self._unheated_slopes(feed, product, site)
        found = self._product(feed.flows, site.matter, self.level, float(product.pressure))
        if found.by_feed is None or found.unmet:
            return {}
        partial, _ = enthalpy_slopes(product)
        size = len(partial)
        block = np.zeros((size + 1, size + 1))
        block[:size, :size] = found.by_feed
        block[size, :size] = partial @ found.by_feed
        blocks = {"product": block}
        if "power" in site.inlets:
            if any(duty.met_by not in ("power", "own") for duty in outcome.duties):
                return {}
            blocks["drawn:power"] = _electric_slope(block, outcome)
        return {"feed": blocks}

    def _unheated_slopes(self, feed: Stream, product: Stream, site: Site) -> dict[str, dict[str, Array]]:
        species = self.equilibrium_species(site.matter)
        size = len(feed.flows)
        block = np.zeros((size + 1, size + 1))
        block[size, size] = 1.0
        if species is None:
            by_feed = self.convert(feed.flows, site.matter).by_feed
            if by_feed is None:
                return {}
            block[:size, :size] = by_feed
        else:
            found = equilibrate_adiabatic(
                site.matter, feed.flows, float(product.enthalpy), float(product.pressure), species, self.shift_of_temperature
            )
            block[:size, :size] = found.by_feed
            block[:size, size] = found.by_enthalpy
        return {"feed": {"product": block}} if not self.duty else {}


class Reactor(_Reactor):
    """Any reactions at stated conversions or extents, or the equilibrium of named species.

    Several conversions all refer to the feed.
    """

    kind: ClassVar[str] = "reactor"
    formulas: ClassVar[tuple[str, ...]] = (
        "extent_r = conversion_r * feed_key / |nu_key|", "product = feed + sum_r nu_r * extent_r",
    )

    reactions: tuple[Reaction, ...] | None = Field(None, description="[{equation: CO2 + 3 H2 -> CH3OH + H2O, conversion: {CO2: 20 %}}]")
    equilibrium: tuple[str, ...] | None = Field(None, description="species that come to equilibrium, [H2, CO2, CH3OH, H2O]")
    temperature: Temperature | None = Field(None, description="temperature of the product")

    @model_validator(mode="after")
    def _one_chemistry(self) -> Reactor:
        if (self.reactions is None) == (self.equilibrium is None):
            raise PydanticCustomError("reactor", "give one of 'reactions' and 'equilibrium'", {})
        return self

    def component_names(self) -> Iterator[tuple[tuple[str, ...], str]]:
        for place, name in enumerate(self.equilibrium or ()):
            yield ("equilibrium", str(place)), name
        for place, reaction in enumerate(self.reactions or ()):
            for name in parse_equation(reaction.equation):
                yield ("reactions", str(place), "equation"), name
            for name in reaction.conversion or {}:
                yield ("reactions", str(place), "conversion", name), name

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        for place, reaction in enumerate(self.reactions or ()):
            for path, text in reaction.faults(matter):
                yield ("reactions", str(place), *path), text

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        if self.equilibrium is not None:
            return _exchanging(species, self.equilibrium, outlets, matter)
        made = {species}
        for reaction in self.reactions or ():
            numbers = reaction.numbers
            if numbers.get(species, 0.0) < 0.0:
                made |= {name for name, number in numbers.items() if number > 0.0 and _share_element(species, name, matter)}
        return [(o, name) for o in outlets for name in matter.components if name in made]

    def equilibrium_species(self, matter: Matter) -> tuple[str, ...] | None:
        return self.equilibrium

    def convert(self, flows: Array, matter: Matter) -> Product:
        by_feed, out = np.eye(len(flows)), flows.copy()
        for reaction in self.reactions or ():
            vector = reaction.vector(matter)
            row = reaction.by_feed(matter)
            by_feed = by_feed + np.outer(vector, row)
            extent = float(row @ flows) + (reaction.extent.value if reaction.extent is not None else 0.0)
            out = out + vector * extent
        if (out >= -1e-12 * flows.sum()).all():
            return Product(np.maximum(out, 0.0), by_feed, {})
        return self._too_much(flows, out, matter)

    def _too_much(self, flows: Array, out: Array, matter: Matter) -> Product:
        """More is asked than there is: react as far as the feed allows and say so."""
        change = out - flows
        worst = int(np.argmin(out))
        short = change < 0.0
        share = float(min(1.0, (flows[short] / -change[short]).min()))
        name = matter.components[worst]
        text = f"the reactions use {-change[worst]:.6g} mol/s of {name}, the feed has {flows[worst]:.6g}: lower a conversion or extent"
        return Product(np.maximum(flows + share * change, 0.0), None, {"feed": text})


class ShiftReactor(_Reactor):
    """Reverse water-gas shift, CO2 + H2 = CO + H2O, with or without methane, at equilibrium.

    With an `approach` the equilibrium constants are taken that much below the outlet temperature
    (the reaction takes heat in).  `conversion` of CO2 (of CO if there is no CO2) replaces it.
    """

    kind: ClassVar[str] = "shift-reactor"
    formulas: ClassVar[tuple[str, ...]] = ("minimum of the Gibbs energy of H2 H2O CO CO2 (CH4), constants at T - approach",)

    temperature: Annotated[float, measured("K", ge=573.15, le=1573.15)] | None = Field(None, description="temperature of the product")
    methane: Literal["formed", "excluded"] = Field("formed", description="whether the catalyst lets methane form")
    approach: TemperatureDifference = Field(0.0, description="distance from equilibrium in temperature")
    conversion: Fraction | None = Field(None, description="stated conversion of CO2 instead of equilibrium")

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        return _needs(matter, _METHANATION if self.methane == "formed" and self.conversion is None else _SHIFT, "the shift")

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        reacting = _METHANATION if self.methane == "formed" and self.conversion is None else _SHIFT
        return _exchanging(species, (*reacting, *_OXYGEN), outlets, matter)

    def equilibrium_species(self, matter: Matter) -> tuple[str, ...] | None:
        if self.conversion is not None:
            return None
        return _there(matter, _METHANATION if self.methane == "formed" else _SHIFT)

    @property
    def shift_of_temperature(self) -> float:
        return -self.approach

    def convert(self, flows: Array, matter: Matter) -> Product:
        return _converted(flows, matter, self.conversion or 0.0, ("CO2 + H2 -> CO + H2O", "CO + H2O -> CO2 + H2"))


class MethanationReactor(_Reactor):
    """Methanation of CO2 and CO with the shift beside it, at equilibrium, cooled or adiabatic.

    With an `approach` the equilibrium constants are taken that much above the outlet temperature
    (the reaction gives heat off).  `conversion` of CO2 (of CO if there is no CO2) replaces it.
    """

    kind: ClassVar[str] = "methanation-reactor"
    formulas: ClassVar[tuple[str, ...]] = (
        "CO2 + 4 H2 = CH4 + 2 H2O, CO + 3 H2 = CH4 + H2O", "minimum of the Gibbs energy, constants at T + approach",
    )
    sources: ClassVar[tuple[str, ...]] = (
        *_Reactor.sources, "window of nickel catalysts: Roensch et al., Fuel 166 (2016) 276 (from memory)",
    )

    temperature: Annotated[float, measured("K", ge=423.15, le=1273.15)] | None = Field(None, description="temperature of the product")
    approach: TemperatureDifference = Field(0.0, description="distance from equilibrium in temperature")
    conversion: Fraction | None = Field(None, description="stated conversion of CO2 instead of equilibrium")

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        return _needs(matter, ("H2", "H2O", "CO2", "CH4") if self.conversion is not None else _METHANATION, "methanation")

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        return _exchanging(species, (*_METHANATION, *_OXYGEN), outlets, matter)

    def equilibrium_species(self, matter: Matter) -> tuple[str, ...] | None:
        return None if self.conversion is not None else _there(matter, _METHANATION)

    @property
    def shift_of_temperature(self) -> float:
        return self.approach

    def convert(self, flows: Array, matter: Matter) -> Product:
        return _converted(flows, matter, self.conversion or 0.0, ("CO2 + 4 H2 -> CH4 + 2 H2O", "CO + 3 H2 -> CH4 + H2O"))

    def _window(self, level: float) -> Iterator[Caution]:
        if level > 973.15:
            yield Caution("above-catalyst-window", f"{level - 273.15:.4g} degC is above the 700 degC that high-temperature nickel catalysts stand")
        elif level > 823.15:
            yield Caution("above-catalyst-window", f"{level - 273.15:.4g} degC is above the 550 degC of ordinary nickel catalysts")
        elif level < 473.15:
            yield Caution("below-catalyst-window", f"{level - 273.15:.4g} degC is below the 200 degC where nickel catalysts start to work")


def _electric_slope(block: Array, outcome: Outcome) -> Array:
    """d electric power / d feed: all of the heat need is met by power, or none is left."""
    if not any(duty.met_by == "power" and duty.heat > 0.0 for duty in outcome.duties):
        return np.zeros((1, block.shape[1]))
    row = block[-1].copy()
    row[-1] -= 1.0
    return row[None, :]


def _converted(flows: Array, matter: Matter, share: float, equations: tuple[str, str]) -> Product:
    """One reaction by the conversion of CO2, or its CO twin where there is no CO2."""
    carbon_dioxide = flows[matter.index["CO2"]] > 0.0 or "CO" not in matter.index
    key, equation = ("CO2", equations[0]) if carbon_dioxide else ("CO", equations[1])
    reactor = Reactor(reactions=(Reaction(equation=equation, conversion={key: share}),))
    return reactor.convert(flows, matter)


def _exchanging(
    species: str, reacting: Iterable[str], outlets: Iterable[str], matter: Matter
) -> list[tuple[str, str]]:
    """A species that reacts may leave as any reacting species it shares an element with."""
    reacting = tuple(name for name in reacting if name in matter.index)
    if species not in reacting:
        return [(o, species) for o in outlets]
    made = [name for name in reacting if name == species or _share_element(species, name, matter)]
    return [(o, name) for o in outlets for name in made]


def _there(matter: Matter, reacting: tuple[str, ...]) -> tuple[str, ...]:
    """The reacting species, and oxygen where it is a component."""
    return tuple(name for name in (*reacting, *_OXYGEN) if name in matter.index)


def _share_element(first: str, second: str, matter: Matter) -> bool:
    a, b = matter.formula[:, matter.index[first]], matter.formula[:, matter.index[second]]
    return bool(((a > 0) & (b > 0)).any())


def _needs(matter: Matter, names: tuple[str, ...], what: str) -> Iterator[tuple[tuple[str, ...], str]]:
    missing = [name for name in names if name not in matter.index]
    if missing:
        yield ("kind",), f"{what} needs {', '.join(missing)} among the components"


def _carbon(stream: Stream) -> bool:
    row = stream.matter.formula[stream.matter.elements.index("C")]
    return bool((row @ stream.flows) > 0.0)


def _conversions(feed: Stream, product: Stream) -> dict[str, float]:
    results = {}
    for name in ("CO2", "CO"):
        place = feed.matter.index.get(name)
        if place is not None and feed.flows[place] > 1e-9 * float(feed.total):
            results[f"conversion_{name}"] = 1.0 - float(product.flows[place] / feed.flows[place])
    return results


def _traces(reactor: _Reactor, feed: Stream, product: Stream) -> tuple[Caution, ...]:
    """Oxygen into a reduced catalyst, and CO that can meet nickel when it is cold."""
    cautions = []
    oxygen = _share_of(feed, "O2")
    if oxygen > _TRACE:
        text = f"{100 * oxygen:.2g} % O2 in the feed burns on a reduced catalyst: heat and damage; take it out before"
        cautions.append(Caution("oxygen-into-catalyst", text))
    if isinstance(reactor, MethanationReactor):
        coldest = min(float(feed.temperature), float(product.temperature))
        monoxide = max(_share_of(feed, "CO"), _share_of(product, "CO"))
        if monoxide > _TRACE and coldest < _NICKEL_CARBONYL_BELOW:
            text = f"{100 * monoxide:.2g} % CO can meet nickel at {coldest - 273.15:.4g} degC: below about 200 degC very toxic nickel carbonyl forms; preheat the feed before the catalyst"
            cautions.append(Caution("nickel-carbonyl", text))
    return tuple(cautions)


def _share_of(stream: Stream, name: str) -> float:
    place = stream.matter.index.get(name)
    total = float(stream.total)
    return float(stream.flows[place]) / total if place is not None and total > 0.0 else 0.0

"""Parting streams: an ideal separator by stated recoveries, and a condenser for water and oil.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], heat and work [W].
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import replace
from typing import Any, ClassVar

import numpy as np
from pydantic import Field

from chainflow.basis.quantities import Fraction, MolarEnergy, PressureDrop, Temperature
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
from chainflow.equipment.cooling import cooling_duties, wrong_way
from chainflow.equipment.cooling_slopes import add_heat_slopes
from chainflow.equipment.ports import Feeds
from chainflow.thermo.components import Matter
from chainflow.thermo.exergy import Environment
from chainflow.thermo.phases import split_at
from chainflow.thermo.stream_slopes import enthalpy_slopes, temperature_slopes
from chainflow.thermo.streams import Stream
from chainflow.thermo.three_phases import Split, liquid_slopes
from chainflow.thermo.water import water_split_slopes

WET = ("H2O", "CO2")  # what can be in a condensate


class Separator(Equipment):
    """Sends stated shares of components to `kept` and the rest to `passed`.

    Both leave at the feed's temperature and pressure.  Components that are not named pass.  The
    least work of the separation is reported; a separator whose stated work and heat are worth less
    is listed as an idealisation.
    """

    kind: ClassVar[str] = "separator"
    family: ClassVar[str] = "separation"
    gives: ClassVar[tuple[str, ...]] = ("minimum_work_W", "stated_work_W", "stated_heat_W")
    ports: ClassVar[tuple[Port, ...]] = (
        Port("inlet", "material", Role.TAKES, main=True, means="what is separated"),
        Port(
            "power",
            "power",
            Role.CALLS,
            optional=True,
            means="the stated work (and heat, if `heat` is not linked)",
        ),
        *HEAT_PORTS[1:],
        Port("passed", "material", Role.OFFERS, main=True, means="what is not kept"),
        Port("kept", "material", Role.OFFERS, optional=True, means="the recovered shares"),
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "kept_i = recovery_i * inlet_i",
        "minimum work = exergy(kept) + exergy(passed) - exergy(inlet)",
    )

    recovery: dict[str, Fraction] = Field(
        description="share of each component that is kept, {CO2: 90 %}"
    )
    work: MolarEnergy = Field(0.0, description="electric work per mol of all that is kept")
    heat: MolarEnergy = Field(0.0, description="heat per mol of all that is kept")
    heat_temperature: Temperature = Field(
        393.15, description="temperature at which the heat is needed"
    )

    def component_names(self) -> Iterator[tuple[tuple[str, ...], str]]:
        return ((("recovery", name), name) for name in self.recovery)

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        kept = self.recovery.get(species, 0.0)
        goes = {"kept": kept > 0.0, "passed": kept < 1.0}
        return [(outlet, species) for outlet in outlets if goes[outlet]]

    def material_outlets(self) -> tuple[str, ...]:
        return ("passed", "kept")

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        inlet, matter = material(feeds, "inlet"), site.matter
        share = self._shares(matter)
        level, pressure = float(inlet.temperature), float(inlet.pressure)
        kept = Stream.at(matter, share * inlet.flows, level, pressure)
        passed = Stream.at(matter, (1.0 - share) * inlet.flows, level, pressure)
        amount = float(kept.total)
        work, heat = self.work * amount, self.heat * amount
        mixing = float(kept.enthalpy) + float(passed.enthalpy) - float(inlet.enthalpy)
        duties, electric, drawn, given = self.settle(
            self._needs(heat, mixing - work - heat, level), site
        )
        drawn["power"] = electric + work  # without a line it is bought
        least = self._minimum_work(inlet, kept, passed) if site.detail else 0.0
        return Outcome(
            {"passed": passed, "kept": kept, **given},
            drawn,
            duties,
            power=electric + work,
            results={"minimum_work_W": least, "stated_work_W": work, "stated_heat_W": heat},
            idealisations=self._idealisations(least, work, heat, site) if site.detail else (),
        )

    def _needs(self, heat: float, balance: float, level: float) -> list[Duty]:
        needs = [
            Duty(
                "regeneration",
                heat,
                self.heat_temperature,
                self.heat_temperature,
                self.heat_temperature,
            )
        ]
        needs.append(Duty("separation", balance, level, level, level))
        return [need for need in needs if need.heat != 0.0] or needs[-1:]

    def _shares(self, matter: Matter) -> Array:
        share = np.zeros(len(matter.components))
        for name, value in self.recovery.items():
            share[matter.index[name]] = value
        return share

    def _minimum_work(self, inlet: Stream, kept: Stream, passed: Stream) -> float:
        environment = Environment()
        return float(
            kept.exergy(environment) + passed.exergy(environment) - inlet.exergy(environment)
        )

    def _idealisations(
        self, least: float, work: float, heat: float, site: Site
    ) -> tuple[Caution, ...]:
        worth = work + heat * max(0.0, 1.0 - site.ambient / self.heat_temperature)
        if worth >= least - 1e-9 * abs(least) or least <= 0.0:
            return ()
        text = (
            f"separates for {worth / 1e3:.4g} kW of work, "
            f"the least that any separation takes is {least / 1e3:.4g} kW"
        )
        return (Caution("free-separation", text),)

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        if "heat" in site.outlets or any(duty.met_by == "own" for duty in outcome.duties):
            return {}
        inlet = material(feeds, "inlet")
        by_flow, by_enthalpy = temperature_slopes(inlet)
        share = self._shares(site.matter)
        block = {}
        for name, part in (("kept", share), ("passed", 1.0 - share)):
            outlet = outcome.outlets[name]
            assert isinstance(outlet, Stream)
            partial, capacity = enthalpy_slopes(outlet)
            row = np.append(partial * part + capacity * by_flow, capacity * by_enthalpy)
            block[name] = np.vstack([np.hstack([np.diag(part), np.zeros((len(part), 1))]), row])
        return {"inlet": block | self._energy_slopes(share, site, outcome)}

    def _energy_slopes(self, share: Array, site: Site, outcome: Outcome) -> dict[str, Array]:
        """Work and heat asked, in proportion to what is kept."""
        kept = np.append(share, 0.0)
        asked: dict[str, Array] = {}
        by_power = any(d.met_by == "power" and d.heat > 0.0 for d in outcome.duties)
        if "power" in site.inlets:
            asked["drawn:power"] = (self.work + self.heat * by_power) * kept[None, :]
        if "heat" in site.inlets:
            asked["drawn:heat"] = np.zeros((4, len(kept)))
            if any(d.met_by == "heat" and d.heat > 0.0 for d in outcome.duties):
                asked["drawn:heat"][0] = self.heat * kept
        return asked


class Condenser(Equipment):
    """Cools a gas to a temperature and takes out the water that condenses.

    The gas leaves saturated (Raoult with the IAPWS saturation pressure); CO2 dissolves in the
    condensate by Henry's law unless `dissolved: false`.  Hydrocarbons condense too if long ones
    are among the components; water and oil then leave together, a `flash-drum` parts them.
    """

    kind: ClassVar[str] = "condenser"
    family: ClassVar[str] = "separation"
    through: ClassVar[bool] = True
    gives: ClassVar[tuple[str, ...]] = ("condensed_mol_s",)
    ports: ClassVar[tuple[Port, ...]] = (
        Port("inlet", "material", Role.TAKES, main=True, means="the wet gas"),
        *HEAT_PORTS,
        Port("gas", "material", Role.OFFERS, main=True, means="the cooled gas, saturated"),
        Port("liquid", "material", Role.OFFERS, optional=True, means="the condensate"),
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "y_H2O p = x_H2O p_sat(T); y_CO2 p = x_CO2 k_H(T); Rachford-Rice over the two phases",
        "hydrocarbons: y_i p = x_i p_i(T) in an oil that does not mix with the water",
    )
    sources: ClassVar[tuple[str, ...]] = (
        "saturation pressure: Wagner and Pruss, J. Phys. Chem. Ref. Data 31 (2002) 387",
        "Henry constants: IAPWS G7-04",
    )

    temperature: Temperature = Field(description="temperature at which gas and condensate leave")
    pressure_drop: PressureDrop = Field(0.0, description="pressure lost on the way")
    dissolved: bool = Field(True, description="CO2 dissolves in the condensate")

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        if matter.water is None and matter.oil is None:
            yield ("kind",), "a condenser needs H2O or a long hydrocarbon among the components"

    def material_outlets(self) -> tuple[str, ...]:
        return ("gas", "liquid")

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        wet = species == "H2O" or (species == "CO2" and self.dissolved)
        wet = wet or (matter.oil is not None and species in matter.oil.names)
        return [(o, species) for o in outlets if o == "gas" or wet]

    @property
    def _gases(self) -> tuple[str, ...]:
        return ("CO2",) if self.dissolved else ()

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        inlet, matter = material(feeds, "inlet"), site.matter
        pressure, level = float(inlet.pressure) - self.pressure_drop, self.temperature
        found = split_at(matter, inlet.flows, level, pressure, self._gases)
        phases = found or Split(inlet.flows, matter.nothing, matter.nothing)
        gas = Stream.gaseous(matter, phases.gas, level, pressure)
        liquid = condensate(matter, phases.water, phases.oil, level, pressure)
        heat = float(gas.enthalpy) + float(liquid.enthalpy) - float(inlet.enthalpy)
        enthalpy = float(gas.enthalpy) + float(liquid.enthalpy)
        together = replace(gas, water=liquid.water, liquid=liquid.liquid, enthalpy=enthalpy)
        needs = cooling_duties("cooling and condensing", inlet, together, site, self._gases)
        duties, electric, drawn, given = self.settle(needs, site)
        return Outcome(
            {"gas": gas, "liquid": liquid, **given},
            drawn,
            duties,
            power=electric,
            results={"condensed_mol_s": float(liquid.total)},
            cautions=wrong_way("condenser", heat, float(inlet.total), cools=True),
        )

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        inlet, matter = material(feeds, "inlet"), site.matter
        gas, liquid = outcome.outlets["gas"], outcome.outlets["liquid"]
        assert isinstance(gas, Stream) and isinstance(liquid, Stream)
        level, pressure = self.temperature, float(gas.pressure)
        parts = phase_blocks(
            matter, Split(gas.gas, liquid.water, liquid.liquid), level, pressure, self._gases
        )
        blocks = {"gas": parts["gas"], "liquid": parts["water"] + parts["oil"]}
        leaving = blocks["gas"][-1] + blocks["liquid"][-1]
        at = (level, pressure)
        return add_heat_slopes(blocks, inlet, leaving, site, outcome, at, self._gases)


def condensate(matter: Matter, water: Array, oil: Array, level: float, pressure: float) -> Stream:
    """Water with what is dissolved in it, and oil, as they leave the vapour they touched."""
    enthalpy = matter.water_enthalpy(water, level, pressure)
    enthalpy += matter.oil_enthalpy(oil, level, pressure)
    for flows in (water, oil):
        flows.setflags(write=False)
    return Stream(matter, matter.nothing, water, oil, level, pressure, enthalpy)


def phase_blocks(
    matter: Matter, phases: Split, level: float, pressure: float, dissolved: tuple[str, ...]
) -> dict[str, Array]:
    """Slopes of gas, water and oil that leave apart, by ``[n_1..n_C, H]`` of what enters."""
    size = len(matter.components)
    none = np.zeros((size, size))
    to_water, to_oil, oil = none, none, matter.nothing
    if phases.oil.any():
        assert matter.oil is not None
        moved = liquid_slopes(matter, phases, level, pressure, dissolved)
        to_water, to_oil = moved.water_by_flows, moved.oil_by_flows
        oil = matter.oil.enthalpies(level, pressure)
    elif phases.water.any():
        to_water = water_split_slopes(
            matter, phases.gas + phases.water, phases.gas, phases.water, level, pressure, dissolved
        )
    gas = matter.gas_partial(phases.gas, level, pressure)[0]
    wet = matter.water_partial(level, pressure, WET).enthalpy if to_water.any() else gas
    return {
        "gas": _with_enthalpy(np.eye(size) - to_water - to_oil, gas),
        "water": _with_enthalpy(to_water, wet),
        "oil": _with_enthalpy(to_oil, oil),
    }


def _with_enthalpy(block: Array, partial: Array) -> Array:
    """Append the enthalpy row and an empty column (the inlet's enthalpy does not matter)."""
    return np.hstack([np.vstack([block, partial @ block]), np.zeros((len(partial) + 1, 1))])

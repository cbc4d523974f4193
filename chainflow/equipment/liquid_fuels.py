"""Parting what Fischer-Tropsch synthesis makes: a three-phase drum, and cuts by carbon number.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], heat [W].
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import replace
from typing import Annotated, Any, ClassVar

import numpy as np
from pydantic import AfterValidator, Field, field_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.names import name_trouble
from chainflow.basis.quantities import MolarEnergy, Pressure, Temperature
from chainflow.equipment.base import (
    HEAT_PORTS,
    Array,
    Duty,
    Equipment,
    Flow,
    Outcome,
    Port,
    Role,
    Site,
    material,
)
from chainflow.equipment.cooling import cooling_duties
from chainflow.equipment.cooling_slopes import add_heat_slopes, carried_at_levels
from chainflow.equipment.parting import free_separation, minimum_work, worth_of
from chainflow.equipment.ports import ANY_NAME, Feeds
from chainflow.equipment.pressures import lower_feed
from chainflow.equipment.separation import condensate, phase_blocks
from chainflow.thermo.chains import carbon_range
from chainflow.thermo.components import Matter
from chainflow.thermo.stream_slopes import enthalpy_slopes, temperature_slopes
from chainflow.thermo.streams import Stream
from chainflow.thermo.three_phases import Split

REST = "rest"


class FlashDrum(Equipment):
    """Parts a stream into gas, oil and water that are in equilibrium with each other.

    Oil: an ideal solution of the hydrocarbons from C2 up (Raoult, vapour pressures of the table);
    water with the CO2 it dissolves (Henry); the two do not mix, other gases do not dissolve.
    Without a `temperature` no heat is exchanged.
    """

    kind: ClassVar[str] = "flash-drum"
    family: ClassVar[str] = "separation"
    gives: ClassVar[tuple[str, ...]] = ("gas_mol_s", "oil_kg_s", "water_mol_s")
    ports: ClassVar[tuple[Port, ...]] = (
        Port("inlet", "material", Role.TAKES, main=True, means="what is parted"),
        *HEAT_PORTS,
        Port("gas", "material", Role.OFFERS, main=True, means="the gas, saturated"),
        Port("oil", "material", Role.OFFERS, optional=True, means="the liquid hydrocarbons"),
        Port("water", "material", Role.OFFERS, optional=True, means="the water"),
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "oil: y_i p = x_i p_i(T); water: y p = x p_sat(T), CO2: y p = x k_H(T)",
        "amounts minimise sum(b_j) - sum(z_i ln(sum_j b_j e_ij)); e: 1 in the gas, 1/K in liquids",
    )
    sources: ClassVar[tuple[str, ...]] = (
        "phase amounts: Michelsen, Comput. Chem. Eng. 18 (1994) 545",
        "hydrocarbons: library chemicals 1.5.2, fitted by carbon number (hydrocarbons.yaml)",
        "saturation pressure: Wagner and Pruss, J. Phys. Chem. Ref. Data 31 (2002) 387",
        "Henry constants: IAPWS G7-04",
    )

    temperature: Temperature | None = Field(
        None, description="temperature of all outlets; without it no heat is exchanged"
    )
    pressure: Pressure | None = Field(None, description="pressure, absolute; that of the inlet")
    dissolved: bool = Field(True, description="CO2 dissolves in the water")

    def pressure_faults(self, inlets: Mapping[str, tuple[float, ...]]) -> Iterator[tuple[str, str]]:
        if self.pressure is not None:
            yield from lower_feed(inlets, self.pressure, "put a pump or compressor before it")

    def material_outlets(self) -> tuple[str, ...]:
        return ("gas", "oil", "water")

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        there = {
            "gas": True,
            "oil": matter.oil is not None and species in matter.oil.names,
            "water": species == "H2O" or (species == "CO2" and self.dissolved),
        }
        return [(outlet, species) for outlet in outlets if there[outlet]]

    @property
    def _gases(self) -> tuple[str, ...]:
        return ("CO2",) if self.dissolved else ()

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        inlet, matter = material(feeds, "inlet"), site.matter
        level = float(inlet.pressure) if self.pressure is None else self.pressure
        needs: list[Duty] = []
        if self.temperature is None:
            held = Stream.from_enthalpy(
                matter,
                inlet.flows,
                float(inlet.enthalpy),
                level,
                float(inlet.temperature),
                self._gases,
            )
        else:
            held = Stream.at(matter, inlet.flows, self.temperature, level, self._gases)
        gas, oil, water = _apart(held, matter)
        if self.temperature is not None:
            enthalpy = float(gas.enthalpy) + float(oil.enthalpy) + float(water.enthalpy)
            whole = replace(held, enthalpy=enthalpy)
            needs = cooling_duties("cooling and condensing", inlet, whole, site, self._gases)
        duties, electric, drawn, given = self.settle(needs, site)
        outlets: dict[str, Flow] = {"gas": gas, "oil": oil, "water": water, **given}
        results = {
            "gas_mol_s": float(gas.total),
            "oil_kg_s": float(oil.mass_flow),
            "water_mol_s": float(water.total),
        }
        return Outcome(outlets, drawn, duties, power=electric, results=results)

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        if self.temperature is None:
            return {}
        inlet, parts = material(feeds, "inlet"), outcome.outlets
        gas, oil, water = parts["gas"], parts["oil"], parts["water"]
        assert isinstance(gas, Stream) and isinstance(oil, Stream) and isinstance(water, Stream)
        at = (self.temperature, float(gas.pressure))
        split = Split(gas.gas, water.water, oil.liquid)
        blocks = phase_blocks(site.matter, split, *at, self._gases)
        leaving = blocks["gas"][-1] + blocks["oil"][-1] + blocks["water"][-1]
        return add_heat_slopes(blocks, inlet, leaving, site, outcome, at, self._gases)


def _apart(held: Stream, matter: Matter) -> tuple[Stream, Stream, Stream]:
    """Gas, oil and water of one stream, each by itself; they add up to its enthalpy."""
    level, pressure, none = float(held.temperature), float(held.pressure), matter.nothing
    oil = condensate(matter, none, held.liquid, level, pressure)
    water = condensate(matter, held.water, none, level, pressure)
    rest = float(held.enthalpy) - float(oil.enthalpy) - float(water.enthalpy)
    if not held.gas.any():  # the round-off goes to what is there
        largest = water if float(water.total) > float(oil.total) else oil
        whole = replace(largest, enthalpy=float(largest.enthalpy) + rest)
        oil, water, rest = (whole, water, 0.0) if largest is oil else (oil, whole, 0.0)
    return Stream(matter, held.gas, none, none, level, pressure, rest), oil, water


def _readable(text: str) -> str:
    try:
        carbon_range(text)
    except ValueError as problem:
        raise PydanticCustomError("carbon-range", "{text}", {"text": str(problem)}) from None
    return text


CarbonRange = Annotated[str, AfterValidator(_readable)]


class Cut(Equipment):
    """Parts hydrocarbons by their carbon number; all else leaves by `rest`.

    Every cut takes all alkanes and alkenes of its range (`wax` counts as C40), sharply, as no
    column does; where ranges overlap, the first named takes what both want.  All outlets leave at
    the feed's temperature and pressure.  The least work of the separation is reported; a cut whose
    stated heat is worth less is listed as an idealisation.
    """

    kind: ClassVar[str] = "cut"
    family: ClassVar[str] = "separation"
    gives: ClassVar[tuple[str, ...]] = ("minimum_work_W", "stated_heat_W")
    ports: ClassVar[tuple[Port, ...]] = (
        Port("inlet", "material", Role.TAKES, main=True, means="what is parted"),
        *HEAT_PORTS,
        Port(
            REST, "material", Role.OFFERS, main=True, optional=True, means="all that no cut takes"
        ),
        Port(ANY_NAME, "material", Role.OFFERS, optional=True, means="one for each name in `cuts`"),
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "cut = all hydrocarbons with a carbon number in its range",
        "minimum work = exergy of all outlets - exergy(inlet)",
    )
    sources: ClassVar[tuple[str, ...]] = (
        "usual cuts: naphtha C5-C9, kerosene C9-C16, diesel C10-C20, wax from C21 (from memory)",
    )

    cuts: dict[str, CarbonRange] = Field(
        min_length=1, description="range of carbon numbers of each outlet, {kerosene: C9-C16}"
    )
    heat: MolarEnergy = Field(0.0, description="heat per mol of all that the cuts take")
    heat_temperature: Temperature = Field(
        623.15, description="temperature at which the heat is needed"
    )

    @field_validator("cuts")
    @classmethod
    def _names(cls, cuts: dict[str, str]) -> dict[str, str]:
        for name in cuts:
            trouble = name_trouble(name)
            if not trouble and name in (REST, "inlet", "heat", "power"):
                trouble = f"a cut cannot be called '{name}', that port is there already"
            if trouble:
                raise PydanticCustomError("cut", "{trouble}", {"trouble": trouble})
        return cuts

    def port_list(self) -> tuple[Port, ...]:
        means = "its hydrocarbons"
        return (
            *self.ports[:-1],
            *(Port(n, "material", Role.OFFERS, optional=True, means=means) for n in self.cuts),
        )

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        for name, taken in self.taken(matter).items():
            if name != REST and not taken.any():
                text = (
                    f"no hydrocarbon of {self.cuts[name]} is left for '{name}' among the "
                    "components: name some, or change the ranges"
                )
                yield ("cuts", name), text

    def taken(self, matter: Matter) -> dict[str, Array]:
        """Share of each component, 0 or 1, that each outlet takes; `rest` last."""
        left = np.ones(len(matter.components))
        lengths = carbon_numbers(matter)
        shares = {}
        for name, text in self.cuts.items():
            first, last = carbon_range(text)
            shares[name] = left * ((first <= lengths) & (lengths <= last))
            left = left - shares[name]
        return {**shares, REST: left}

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        place, taken = matter.index[species], self.taken(matter)
        return [(o, species) for o in outlets if taken[o][place] > 0.0]

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        inlet, matter = material(feeds, "inlet"), site.matter
        level, pressure = float(inlet.temperature), float(inlet.pressure)
        parts = {
            name: Stream.at(matter, share * inlet.flows, level, pressure)
            for name, share in self.taken(matter).items()
        }
        amount = sum(float(part.total) for name, part in parts.items() if name != REST)
        heat = self.heat * amount
        mixing = sum(float(part.enthalpy) for part in parts.values()) - float(inlet.enthalpy)
        duties, electric, drawn, given = self.settle(self._needs(heat, mixing, level), site)
        least = minimum_work([inlet], list(parts.values())) if site.detail else 0.0
        worth = worth_of(0.0, heat, self.heat_temperature, site.ambient)
        return Outcome(
            {**parts, **given},
            drawn,
            duties,
            power=electric,
            results={"minimum_work_W": least, "stated_heat_W": heat},
            idealisations=free_separation(worth, least) if site.detail else (),
        )

    def _needs(self, heat: float, mixing: float, level: float) -> list[Duty]:
        at = self.heat_temperature
        needs = [Duty("distillation", heat, at, at, at)]
        needs.append(Duty("separation", mixing - heat, level, level, level))
        return [need for need in needs if need.heat != 0.0] or needs[-1:]

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        inlet = material(feeds, "inlet")
        by_flow, by_enthalpy = temperature_slopes(inlet)
        blocks, taken = {}, np.zeros(len(by_flow) + 1)
        mixing = np.append(np.zeros(len(by_flow)), -1.0)
        for name, share in self.taken(site.matter).items():
            outlet = outcome.outlets[name]
            assert isinstance(outlet, Stream)
            partial, capacity = enthalpy_slopes(outlet)
            if not np.isfinite(capacity):
                return {}
            row = np.append(partial * share + capacity * by_flow, capacity * by_enthalpy)
            blocks[name] = np.vstack([np.hstack([np.diag(share), np.zeros((len(share), 1))]), row])
            mixing += row
            if name != REST:
                taken[:-1] += share
        if not {"heat", "power"} & (site.inlets | site.outlets):
            return {"inlet": blocks}
        heat = self.heat * taken
        rates = {"distillation": heat, "separation": mixing - heat}
        level = {"separation": np.append(by_flow, by_enthalpy)}
        carried = carried_at_levels(rates, np.zeros(len(heat)), site, outcome, level)
        return {} if carried is None else {"inlet": blocks | carried}


def carbon_numbers(matter: Matter) -> Array:
    """Carbon atoms of each hydrocarbon, zero for all else; shape (components,)."""
    rows = {element: matter.formula[i] for i, element in enumerate(matter.elements)}
    if "C" not in rows or "H" not in rows:
        return np.zeros(len(matter.components))
    both = rows["C"] + rows["H"] == matter.formula.sum(axis=0)
    return np.where(both, rows["C"], 0.0)

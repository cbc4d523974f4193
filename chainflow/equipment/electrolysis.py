"""Electrolysis of liquid water: how much hydrogen, oxygen, moisture and heat a stack gives.

SI throughout: power [W], flows [mol/s], temperature [K], pressure [Pa], voltage [V].  Both gases
leave saturated with water at the stack's temperature and pressure (ideal gas, IAPWS saturation
pressure).  What else is dissolved in the feed water leaves with the oxygen.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import replace
from functools import cache
from typing import Annotated, Any, ClassVar, Literal

import numpy as np
from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.constants import FARADAY
from chainflow.basis.quantities import Flow as FlowSetting
from chainflow.basis.quantities import OpenFraction, Pressure, Temperature, measured
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
    rate,
)
from chainflow.equipment.boundary import amounts
from chainflow.equipment.ports import Feeds, as_number
from chainflow.equipment.pressures import lower_feed
from chainflow.thermo.components import Matter
from chainflow.thermo.electrochemistry import reversible_voltage
from chainflow.thermo.streams import Stream
from chainflow.thermo.water import saturation_pressure


class Electrolyser(Equipment):
    """Splits water with direct current: H2O -> H2 + 1/2 O2.

    It takes the power that arrives, or, with `hydrogen` set, calls for the power it needs.
    """

    kind: ClassVar[str] = "electrolyser"
    family: ClassVar[str] = "electrolysis"
    makes: ClassVar[bool] = True
    gives: ClassVar[tuple[str, ...]] = (
        "hydrogen_mol_s",
        "hydrogen_kg_s",
        "water_kg_s",
        "direct_current_W",
        "voltage_V",
        "stack_efficiency_LHV",
        "stack_efficiency_HHV",
    )
    ports: ClassVar[tuple[Port, ...]] = (
        Port(
            "power",
            "power",
            Role.TAKES,
            main=True,
            many=True,
            means="alternating or direct current before the rectifier",
        ),
        Port(
            "water",
            "material",
            Role.CALLS,
            means="water for the reaction and for the moisture of both gases",
        ),
        Port(
            "hydrogen", "material", Role.OFFERS, main=True, means="hydrogen, saturated with water"
        ),
        Port(
            "oxygen", "material", Role.OFFERS, optional=True, means="oxygen, saturated with water"
        ),
        HEAT_PORTS[1],
        HEAT_PORTS[2],
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "direct current = rectifier * power",
        "specific-energy: hydrogen = direct current / energy_use (per mass of hydrogen)",
        "voltage: hydrogen = direct current / (2 F voltage), Faraday efficiency 1",
        "moisture of a dry gas flow n: n * r / (1 - r), r = saturation pressure / pressure",
    )
    sources: ClassVar[tuple[str, ...]] = (
        "Faraday constant: CODATA 2018",
        (
            "saturation pressure: Wagner and Pruss, J. Phys. Chem. Ref. Data 31 (2002) 387 "
            "(IAPWS-95 auxiliary equation)"
        ),
    )

    model: Literal["specific-energy", "voltage"] = Field(
        "specific-energy", description="how power becomes hydrogen"
    )
    energy_use: Annotated[float, measured("J/kg", gt=0)] | None = Field(
        None, description="direct current at the stack per mass of hydrogen"
    )
    voltage: Annotated[float, measured("V", gt=0)] | None = Field(
        None, description="voltage of one cell (model: voltage)"
    )
    rectifier: OpenFraction = Field(1.0, description="direct current per power drawn")
    temperature: Temperature = Field(description="stack temperature; both gases leave at it")
    pressure: Pressure = Field(description="stack pressure, absolute")
    hydrogen: FlowSetting | None = Field(
        None, description="dry hydrogen wanted; the stack then calls for power"
    )

    @model_validator(mode="after")
    def _one_model(self) -> Electrolyser:
        wanted, other = (
            ("energy_use", "voltage")
            if self.model == "specific-energy"
            else ("voltage", "energy_use")
        )
        if getattr(self, wanted) is None or getattr(self, other) is not None:
            example = "energy_use: 52 kWh/kg" if wanted == "energy_use" else "voltage: 1.9 V"
            raise PydanticCustomError(
                "electrolyser",
                "model {model} wants '{wanted}' and not '{other}'; write {example}",
                {"model": self.model, "wanted": wanted, "other": other, "example": example},
            )
        return self

    def port_list(self) -> tuple[Port, ...]:
        if self.hydrogen is None:
            return self.ports
        called = Port(
            "power",
            "power",
            Role.CALLS,
            optional=True,
            main=True,
            means="power for the hydrogen wanted",
        )
        return (called, *self.ports[1:])

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        missing = [name for name in ("H2", "O2", "H2O") if name not in matter.index]
        if missing:
            yield ("kind",), f"electrolysis needs {', '.join(missing)} among the components"
        if (
            self.temperature > 473.15
            or saturation_pressure(self.temperature) >= 0.95 * self.pressure
        ):
            yield (
                ("temperature",),
                (
                    f"at {self.temperature - 273.15:.4g} degC and {self.pressure / 1e5:.4g} bar "
                    "the water boils, wanted liquid water: "
                    "lower the temperature or raise the pressure"
                ),
            )

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        if species == "H2O":
            made = [("hydrogen", "H2"), ("hydrogen", "H2O"), ("oxygen", "O2"), ("oxygen", "H2O")]
            return [pair for pair in made if pair[0] in outlets]
        return [("oxygen", species)] if "oxygen" in outlets else []

    def pressure_faults(self, inlets: Mapping[str, tuple[float, ...]]) -> Iterator[tuple[str, str]]:
        return lower_feed(inlets, self.pressure)

    @property
    def energy_per_mol(self) -> float:
        """Direct current per mol of hydrogen [J/mol]."""
        if self.voltage is not None:
            return 2.0 * FARADAY * self.voltage
        assert self.energy_use is not None
        return self.energy_use * hydrogen_mass()

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        water, matter = material(feeds, "water"), site.matter
        if self.hydrogen is not None:
            made = self.hydrogen.value / (hydrogen_mass() if self.hydrogen.per == "kg" else 1.0)
            power = made * self.energy_per_mol / self.rectifier
        else:
            # below zero only while a plant that is short is being solved
            power = max(rate(feeds, "power"), 0.0)
            made = power * self.rectifier / self.energy_per_mol
        moisture = self._moisture()
        amount, unmet = self._water_needed(made, water, moisture)
        made = 0.0 if unmet else made
        gases = self._gases(made, amount * water.flows, moisture, matter)
        needs = self._needs(amount, water, gases, power, site)
        # `power` feeds the cells, not a heater
        beside = replace(site, inlets=site.inlets - {"power"})
        duties, _, drawn, heat = self.settle(needs, beside)
        drawn |= {"water": amount}
        if self.hydrogen is not None:
            drawn["power"] = power
        return Outcome(
            {**gases, **heat},
            drawn,
            duties,
            power=power,
            results=self._results(made, power, amount * float(water.mass_flow), matter),
            cautions=self._cautions() if site.detail else (),
            unmet=unmet,
        )

    def _needs(
        self, amount: float, water: Stream, gases: Mapping[str, Stream], power: float, site: Site
    ) -> list[Duty]:
        """Heat of the feed water, of the stack and of the rectifier; those of nothing left out."""
        hot = Stream.at(site.matter, amount * water.flows, self.temperature, self.pressure)
        direct, level = power * self.rectifier, self.temperature
        warming = float(hot.enthalpy) - amount * float(water.enthalpy)
        stack = float(sum(g.enthalpy for g in gases.values())) - float(hot.enthalpy) - direct
        outside = (site.ambient, site.ambient, site.ambient)
        needs = [
            Duty.between("water to stack temperature", warming, float(water.temperature), level),
            Duty("stack", stack, level, level, level),
            Duty("rectifier loss", -(power - direct), *outside, "ambient"),
        ]
        return [d for d in needs if d.heat != 0.0 or d.purpose == "stack"]

    def _moisture(self) -> float:
        """Water per mol of dry gas at saturation [-]."""
        share = saturation_pressure(self.temperature) / self.pressure
        return share / (1.0 - share)

    def _water_needed(
        self, made: float, water: Stream, moisture: float
    ) -> tuple[float, dict[str, str]]:
        """Feed water [mol/s] for reaction and moisture; what is dissolved takes moisture along."""
        per_mol = _reacting_share(water, moisture)
        if per_mol <= 0.0:
            text = "what is served at 'water' holds too little H2O to be electrolysed"
            return 0.0, {"water": text}
        return made * (1.0 + 1.5 * moisture) / per_mol, {}

    def _gases(self, made: float, fed: Array, moisture: float, matter: Matter) -> dict[str, Stream]:
        dissolved = fed.copy()
        dissolved[matter.index["H2O"]] = 0.0
        oxygen = dissolved + amounts({"O2": 0.5 * made}, matter)
        oxygen[matter.index["H2O"]] = float(oxygen.sum()) * moisture
        hydrogen = amounts({"H2": made, "H2O": made * moisture}, matter)
        return {
            "hydrogen": Stream.gaseous(matter, hydrogen, self.temperature, self.pressure),
            "oxygen": Stream.gaseous(matter, oxygen, self.temperature, self.pressure),
        }

    def _results(self, made: float, power: float, water: float, matter: Matter) -> dict[str, float]:
        direct = power * self.rectifier
        ratio = {"LHV": matter.lhv, "HHV": matter.hhv}
        share = made / direct if direct > 0.0 else 0.0
        return {
            "hydrogen_mol_s": made,
            "hydrogen_kg_s": made * hydrogen_mass(),
            "water_kg_s": water,
            "direct_current_W": direct,
            "voltage_V": self.energy_per_mol / (2.0 * FARADAY),
        } | {
            f"stack_efficiency_{name}": share * float(value[matter.index["H2"]])
            for name, value in ratio.items()
        }

    def _cautions(self) -> tuple[Caution, ...]:
        cell, limit = self.energy_per_mol / (2.0 * FARADAY), reversible_voltage(self.temperature)
        if cell >= limit:
            return ()
        text = (
            f"{cell:.4g} V per cell is below the reversible voltage {limit:.4g} V: "
            "no stack can do that"
        )
        return (Caution("below-reversible-voltage", text),)

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        if outcome.unmet or site.inlets & {"heat"} or "heat" in site.outlets:
            return {}
        known = {"water": self._by_water(material(feeds, "water"), outcome, site.matter)}
        if self.hydrogen is not None or outcome.power == 0.0:
            return known
        power = outcome.power
        made = {"drawn:water": np.array([[as_number(outcome.drawn["water"]) / power]])}
        for name in ("hydrogen", "oxygen"):
            gas = outcome.outlets[name]
            assert isinstance(gas, Stream)
            made[name] = np.append(gas.flows, gas.enthalpy)[:, None] / power
        return known | {"power": made}

    def _by_water(self, water: Stream, outcome: Outcome, matter: Matter) -> dict[str, Array]:
        """Slopes by what one mol of the feed water is: its amount, and what leaves with oxygen."""
        size, place = len(matter.components), matter.index["H2O"]
        moisture = self._moisture()
        amount = as_number(outcome.drawn["water"])
        share = np.full(size, -moisture)
        share[place] = 1.0
        by_flow = -amount / _reacting_share(water, moisture) * share
        oxygen = outcome.outlets["oxygen"]
        assert isinstance(oxygen, Stream)
        block = amount * np.eye(size) + np.outer(water.flows, by_flow)
        block[place] = 0.0
        block[place] = moisture * block.sum(axis=0)
        partial = matter.gas_partial(oxygen.gas, self.temperature, self.pressure).enthalpy
        none = np.zeros((size + 1, 1))
        return {
            "drawn:water": np.append(by_flow, 0.0)[None, :],
            "oxygen": np.hstack([np.vstack([block, partial @ block]), none]),
        }


def _reacting_share(water: Stream, moisture: float) -> float:
    """Water per mol of feed that is left when what is dissolved has taken its moisture along."""
    pure = float(water.flow("H2O"))
    return pure - (float(water.total) - pure) * moisture


@cache
def hydrogen_mass() -> float:
    """Molar mass of hydrogen [kg/mol], the one of every stream."""
    return float(Matter.of(("H2",)).molar_mass[0])

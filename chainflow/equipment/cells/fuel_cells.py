"""Fuel cells: the voltage that hydrogen and air give, by current density.

SI throughout: current density [A/m2], voltage [V], temperature [K], pressure [Pa]. The physics of
the electrolysers run the other way: losses are taken off the reversible voltage. The PEM cell sees
the mean of what enters and leaves, saturated with water; hydrogen that crosses is burnt by oxygen
(an inner current). The semi-empirical sets are an older formula and a check. The solid-oxide cell
is integrated along the flow of fuel and air.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import exp, inf
from typing import Annotated, Any, Literal, NamedTuple

import numpy as np
from pydantic import Field, model_validator

from chainflow.basis.constants import ATMOSPHERE, GAS_CONSTANT
from chainflow.basis.quantities import measured
from chainflow.equipment.base import Array
from chainflow.equipment.burning import oxygen_demand
from chainflow.equipment.cells.along import AlongCell, FuelGas, nodes
from chainflow.equipment.cells.losses import Losses, activation, concentration
from chainflow.equipment.cells.pem import (
    ActivationEnergy,
    AreaResistance,
    ExchangeCurrent,
    LimitingCurrent,
    Membrane,
    Thickness,
    Transfer,
    WaterContent,
    completed,
)
from chainflow.equipment.cells.solid_oxide import SPECIES, Ceramic, along
from chainflow.equipment.published import kocha_2006, mann_2000, neyerlin_2006, springer_1991
from chainflow.thermo.components import Matter
from chainflow.thermo.electrochemistry import nernst_shift, reversible_voltage
from chainflow.thermo.equilibrium import equilibrate
from chainflow.thermo.water import saturation_pressure

COLDEST, HOTTEST = 273.15, 373.15  # [K], of PEM cells; common practice, no source
SOURCES = (
    neyerlin_2006.SOURCE,
    mann_2000.SOURCE,
    springer_1991.SOURCE,
    kocha_2006.SOURCE,
    (
        "fuel use 75-85 % (solid-oxide), 95-99 % with recirculation (PEM), air ratio "
        "1.8-2.5: usual values (M)"
    ),
)
_LEAST_STEAM = 0.01  # H2O per H2 where dry fuel enters a solid-oxide cell; our own convention
_LEAST_OXYGEN = 1e-6  # share of oxygen in air that is all used
_CARBON_SLACK = 1e-6

FuelUse = Annotated[float, measured("1", gt=0, le=0.995)]
Recirculation = Annotated[float, measured("1", ge=0, le=0.95)]
Volt = Annotated[float, measured("V")]
VoltPerKelvin = Annotated[float, measured("V/K")]
CellSize = Annotated[float, measured("m2", gt=0)]
Ohm = Annotated[float, measured("ohm", ge=0)]
Order = Annotated[float, measured("1", ge=0, le=2)]


def _semi_empirical(numbers: mann_2000.Numbers) -> dict[str, float | None]:
    return {
        "xi1": numbers.xi1,
        "xi2": numbers.xi2,
        "xi3": numbers.xi3,
        "xi4": numbers.xi4,
        "spread": numbers.spread,
        "contact_of_cell": numbers.contact,
        "water_content": numbers.water_content,
        "limiting_current": 1e4 * numbers.greatest,
        "thickness": 178e-6,
    }


SETS: dict[str, dict[str, Any]] = {
    "neyerlin-2006": neyerlin_2006.NUMBERS,
    "mark-v": _semi_empirical(mann_2000.FITTED),
    "mann-2000": _semi_empirical(mann_2000.GENERIC),
}
_N, _F = neyerlin_2006.NUMBERS, mann_2000.FITTED


class PemFuelCell(Membrane):
    """Numbers of a PEM fuel cell; those of `set` unless given."""

    set: Literal["neyerlin-2006", "mark-v", "mann-2000"] = Field(
        "neyerlin-2006",
        description="published numbers; mark-v and mann-2000 are the semi-empirical formula",
    )
    fuel_use: FuelUse = Field(0.97, description="share of the hydrogen that is used")
    thickness: Thickness = Field(_N["thickness"], description="membrane thickness")
    water_content: WaterContent = Field(
        _N["water_content"], description="water per acid group of the membrane"
    )
    contact_resistance: AreaResistance = Field(
        _N["contact_resistance"], description="contacts and plates, by cell area"
    )
    limiting_current: LimitingCurrent = Field(
        _N["limiting_current"], description="current density at which transport gives out"
    )
    exchange_current: ExchangeCurrent = Field(
        _N["exchange_current"], description="of oxygen, by cell area, 80 degC and 101.3 kPa oxygen"
    )
    activation_energy: ActivationEnergy = Field(
        _N["activation_energy"], description="of the exchange current"
    )
    oxygen_order: Order = Field(
        _N["oxygen_order"], description="order of the exchange current in oxygen pressure"
    )
    transfer: Transfer = Field(_N["transfer"], description="transfer coefficient times electrons")
    xi1: Volt = Field(_F.xi1, description="semi-empirical activation")
    xi2: VoltPerKelvin | None = Field(
        _F.xi2, description="the same by temperature; without it from cell size and hydrogen"
    )
    xi3: VoltPerKelvin = Field(_F.xi3, description="the same by temperature and oxygen")
    xi4: VoltPerKelvin = Field(_F.xi4, description="the same by temperature and current")
    spread: Volt = Field(_F.spread, description="semi-empirical concentration loss, B")
    contact_of_cell: Ohm = Field(_F.contact, description="semi-empirical contact resistance")
    cell_size: CellSize = Field(
        50.6e-4, description="area of one cell, which the semi-empirical formula counts"
    )

    @model_validator(mode="before")
    @classmethod
    def _of_set(cls, given: Any) -> Any:
        return completed(given, SETS, "neyerlin-2006")

    def curve(self, temperature: float, hydrogen: float, oxygen: float) -> PemFuelCurve:
        """Return the cell at a temperature and the pressures of hydrogen and oxygen."""
        semi_empirical = self.set != "neyerlin-2006"
        leak = 0.0 if semi_empirical else self.leak(temperature) * hydrogen
        warmth = 1.0 / temperature - 1.0 / neyerlin_2006.REFERENCE_TEMPERATURE
        exchange = self.exchange_current * exp(-self.activation_energy / GAS_CONSTANT * warmth)
        exchange *= (oxygen / neyerlin_2006.REFERENCE_PRESSURE) ** self.oxygen_order
        return PemFuelCurve(
            self,
            temperature,
            hydrogen,
            oxygen,
            reversible_voltage(temperature) + nernst_shift(temperature, hydrogen, oxygen),
            exchange,
            self.resistance(temperature),
            leak,
            self.limiting_current,
            semi_empirical,
        )


@dataclass(frozen=True, slots=True)
class PemFuelCurve:
    """A PEM fuel cell in its state."""

    cell: PemFuelCell
    temperature: float
    hydrogen: float  # [Pa]
    oxygen: float  # [Pa]
    reversible: float  # [V]
    exchange: float  # [A/m2]
    resistance: float  # [ohm m2]
    leak: float  # [A/m2] that hydrogen crossing is worth
    limit: float  # [A/m2]
    semi_empirical: bool

    def losses(self, density: float) -> Losses:
        """The voltage by its parts; losses are taken off."""
        if self.semi_empirical:
            return self._semi_empirical(density)
        inner = density + self.leak
        return Losses(
            self.reversible,
            activation(inner, self.exchange, self.cell.transfer, self.temperature),
            density * self.resistance,
            concentration(density, self.limit, self.temperature),
        )

    def _semi_empirical(self, density: float) -> Losses:
        cell = self.cell
        area = 1e4 * cell.cell_size  # [cm2]
        parts = mann_2000.voltage(
            mann_2000.Numbers(
                cell.xi1,
                cell.xi2,
                cell.xi3,
                cell.xi4,
                cell.water_content,
                cell.spread,
                cell.contact_of_cell,
                1e-4 * cell.limiting_current,
            ),
            max(1e-4 * density, 1e-9) * area,
            area,
            100.0 * cell.thickness,
            self.temperature,
            self.hydrogen / ATMOSPHERE,
            self.oxygen / ATMOSPHERE,
        )
        active = max(parts.activation, 0.0)  # the formula has no end at rest
        return Losses(parts.reversible, active, parts.ohmic, parts.concentration)


class SolidOxideFuelCell(Ceramic):
    """Numbers of a solid-oxide fuel cell; those of `set` unless given."""

    fuel_use: FuelUse = Field(
        0.80, description="share of the oxygen that the fuel could take up which it gets"
    )
    recirculation: Recirculation = Field(
        0.0, description="share of the spent fuel that is led back to the inlet of the cells"
    )


@dataclass(frozen=True, slots=True)
class SolidOxideFuelCurve:
    """A solid-oxide fuel cell in its state."""

    cell: AlongCell
    limit: float = inf
    leak: float = 0.0

    def losses(self, density: float) -> Losses:
        """The voltage by its parts; reversible is the mean along the cell."""
        ohmic = density * self.cell.mean_resistance
        uneven = self.cell.mean - self.cell.voltage(density) - ohmic
        return Losses(self.cell.mean, 0.0, ohmic, uneven)


@dataclass(frozen=True, slots=True)
class Working:
    """How a fuel cell works."""

    losses: Losses
    current: float  # [A], all cells added up
    density: float  # [A/m2]
    area: float  # [m2]
    trouble: str = ""

    @property
    def voltage(self) -> float:
        """The voltage of one cell [V], not below zero."""
        return max(self.losses.reversible - self.losses.total, 0.0)

    @property
    def direct(self) -> float:
        """Direct current [W]."""
        return self.current * self.voltage


class Used(NamedTuple):
    """What becomes of the fuel, as it flows; oxygen [mol O2/s] comes from the oxidiser."""

    spent: Array  # (components,) [mol/s], water of a PEM cell not among it
    oxygen: float
    water: float  # made on the side of the air [mol/s]


def hydrogen_used(use: float, fuel: Array, matter: Matter) -> Used:
    """Return what a PEM cell makes of a fuel: it takes hydrogen, all else passes."""
    place = matter.index["H2"]
    taken = use * float(fuel[place])
    spent = fuel.copy()
    spent[place] -= taken
    return Used(spent, 0.5 * taken, taken)


def fuel_burnt(
    use: float, fuel: Array, matter: Matter, temperature: float, pressure: float
) -> Used:
    """Return what a solid-oxide cell makes of a fuel: hydrogen, CO and methane take up oxygen."""
    spent, index = fuel.copy(), matter.index
    oxygen = 0.0
    demand = oxygen_demand(matter)
    for name in ("H2", "CO", "CH4"):
        if name not in index:
            continue
        taken = use * float(fuel[index[name]])
        spent[index[name]] -= taken
        oxygen += taken * float(demand[index[name]])
        for product, count in _BURNT[name].items():
            if product in index:
                spent[index[product]] += count * taken
    names = tuple(name for name in SPECIES if name in index)
    return Used(equilibrate(matter, spent, temperature, pressure, names).flows, oxygen, 0.0)


_BURNT = {"H2": {"H2O": 1.0}, "CO": {"CO2": 1.0}, "CH4": {"CO2": 1.0, "H2O": 2.0}}


def pem_pressures(
    fuel: Array, used: Used, air: Array, matter: Matter, temperature: float, pressure: float
) -> tuple[float, float]:
    """Return the pressures of hydrogen and oxygen [Pa]: means of inlet and outlet, saturated."""
    dry = pressure - saturation_pressure(temperature)
    after = air.copy()
    after[matter.index["O2"]] -= used.oxygen
    pairs = ((fuel, used.spent, "H2"), (air, after, "O2"))
    hydrogen, oxygen = (
        dry * 0.5 * (_dry_share(before, name, matter) + _dry_share(behind, name, matter))
        for before, behind, name in pairs
    )
    return hydrogen, oxygen


def _dry_share(flows: Array, name: str, matter: Matter) -> float:
    dry = float(flows.sum()) - float(flows[matter.index["H2O"]])
    return float(flows[matter.index[name]]) / dry if dry > 0.0 else 0.0


def solid_oxide_cell(
    cell: SolidOxideFuelCell,
    fuel: Array,
    used: Used,
    air_ratio: float,
    oxygen_share: float,
    matter: Matter,
    temperature: float,
    pressure: float,
) -> AlongCell | None:
    """Return the cell along its flow, or None if the fuel would turn to soot where it enters."""
    again = cell.recirculation / (1.0 - cell.recirculation)
    entering = fuel + again * used.spent
    carbon, hydrogen, oxygen = (_atoms(entering, e, matter) for e in ("C", "H", "O"))
    if carbon > 0.0 and oxygen < carbon * (1.0 + _CARBON_SLACK):
        return None
    names = [name for name in SPECIES if name in matter.index]
    passing = float(entering.sum()) - sum(float(entering[matter.index[n]]) for n in names)
    gas = FuelGas(carbon, hydrogen, passing, pressure, "CH4" in matter.index)
    s = nodes()
    atoms = oxygen + 2.0 * used.oxygen * s
    if carbon == 0.0:
        least = 0.5 * hydrogen * _LEAST_STEAM / (1.0 + _LEAST_STEAM)
        atoms = np.maximum(atoms, least)
    left = np.maximum((air_ratio - s) / (air_ratio / oxygen_share - s), _LEAST_OXYGEN)
    return along(cell, gas, atoms, pressure * left, temperature, -1.0)


def _atoms(flows: Array, element: str, matter: Matter) -> float:
    if element not in matter.elements:
        return 0.0
    row = matter.formula[matter.elements.index(element)]
    places = [matter.index[name] for name in SPECIES if name in matter.index]
    return float(row[places] @ flows[places])

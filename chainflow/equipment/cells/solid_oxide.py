"""The solid-oxide cell: steam and CO2 lose their oxygen through a hot ceramic.

SI throughout: flows [mol/s], voltage [V], temperature [K], pressure [Pa], area resistance [ohm
m2]. The feed is mixed with a share of the product, hot, until it holds the hydrogen that keeps
nickel reduced; along the cell the gas is at shift and methane equilibrium; the temperature is one
number or goes straight from `entry` to the stack's. All losses are one area resistance that falls
with temperature; what the uneven current costs on top is the concentration loss.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import exp, inf
from typing import Annotated, Any, Literal

import numpy as np
from pydantic import BaseModel, ConfigDict, Field, model_validator

from chainflow.basis.constants import GAS_CONSTANT
from chainflow.basis.quantities import Temperature, measured
from chainflow.equipment.base import Array
from chainflow.equipment.cells.along import AlongCell, FuelGas, local_voltage, nodes
from chainflow.equipment.cells.losses import Losses, Share
from chainflow.equipment.cells.pem import ActivationEnergy, completed
from chainflow.equipment.published import obrien_2010, schefold_2015
from chainflow.thermo.components import Matter
from chainflow.thermo.equilibrium import equilibrate

COLDEST, HOTTEST = 773.15, 1273.15  # [K], wider than the 700 to 850 degC of use
SPECIES = ("H2", "H2O", "CO", "CO2", "CH4")
SOURCES = (
    schefold_2015.SOURCE,
    obrien_2010.SOURCE,
    "shift and methane equilibrium along the cell: usual assumption for nickel electrodes (M)",
)
SETS: dict[str, dict[str, float]] = {
    "schefold-2015": schefold_2015.NUMBERS,
    "obrien-2010": obrien_2010.NUMBERS,
}
_REFERENCE = 1073.15  # [K] of the default resistance
_LEAST_OXYGEN = 1e-6  # share of a sweep that brings none

Resistance = Annotated[float, measured("ohm*m2", gt=0)]
Conversion = Annotated[float, measured("1", gt=0, lt=1)]
InletHydrogen = Annotated[float, measured("1", ge=0.02, le=0.5)]
SweepRatio = Annotated[float, measured("1", ge=0, le=100)]


class Ceramic(BaseModel):
    """The resistance of a solid-oxide cell; the numbers of `set` unless given."""

    model_config = ConfigDict(frozen=True, extra="forbid")

    set: Literal["schefold-2015", "obrien-2010"] = Field(
        "schefold-2015", description="published numbers that hold where none is given"
    )
    resistance: Resistance = Field(
        schefold_2015.NUMBERS["resistance"],
        description="area resistance at 800 degC (obrien-2010: at 1100 K)",
    )
    activation_energy: ActivationEnergy = Field(
        schefold_2015.NUMBERS["activation_energy"],
        description="how the resistance falls with temperature (schefold-2015)",
    )
    entry: Temperature | None = Field(
        None, description="temperature at which the gases enter the cell, if not the stack's"
    )

    @model_validator(mode="before")
    @classmethod
    def _of_set(cls, given: Any) -> Any:
        return completed(given, SETS, "schefold-2015")

    def area_resistance(self, temperature: float) -> float:
        """Return the area resistance [ohm m2] at a temperature [K]."""
        if self.set == "obrien-2010":
            return max(obrien_2010.area_resistance(self.resistance, temperature), 1e-7)
        warmth = 1.0 / temperature - 1.0 / _REFERENCE
        return self.resistance * exp(self.activation_energy / GAS_CONSTANT * warmth)

    def levels(self, temperature: float) -> Array:
        """Return the temperature at each node of the cell [K]."""
        start = temperature if self.entry is None else self.entry
        return start + (temperature - start) * nodes()

    def resistances(self, levels: Array) -> Array:
        """Return the area resistance at each node [ohm m2]."""
        if self.entry is None:
            return np.full(len(levels), self.area_resistance(float(levels[0])))
        return np.array([self.area_resistance(level) for level in levels.tolist()])


class SolidOxideCell(Ceramic):
    """Numbers of a solid-oxide electrolyser; those of `set` unless given."""

    conversion: Conversion = Field(
        0.70, description="share of the steam and CO2 fed that loses an oxygen"
    )
    inlet_hydrogen: InletHydrogen = Field(
        0.10, description="hydrogen where the gas enters the cells, kept by recirculating product"
    )
    sweep_ratio: SweepRatio = Field(3.0, description="sweep gas asked for per oxygen made, in mol")
    thermoneutral: bool = Field(
        False, description="run at the current at which the stack neither takes nor gives heat"
    )


@dataclass(frozen=True, slots=True)
class Conversions:
    """What becomes of one mol of feed, and how much product is recirculated."""

    product: Array  # [mol/mol]
    oxygen: float  # atoms taken out [mol/mol]
    recirculated: float  # product per product that leaves
    gas: FuelGas  # in the cell
    oxygen_in: float  # atoms where the gas enters the cell [mol/mol]
    per_pass: float  # conversion of H2O and CO2 in the cell

    @property
    def oxygen_along(self) -> Array:
        """Oxygen atoms at the nodes [mol per mol of feed]."""
        return self.oxygen_in - self.oxygen * nodes()


def converted(
    cell: SolidOxideCell, feed: Array, matter: Matter, temperature: float, pressure: float
) -> Conversions | None:
    """Return what one mol of feed becomes; None if it holds next to nothing to split."""
    index = matter.index
    steam, dioxide = (_of(feed, name, matter) for name in ("H2O", "CO2"))
    oxygen = cell.conversion * (steam + dioxide)
    if oxygen <= 1e-6:
        return None
    reduced = feed.copy()
    reduced[index["H2O"]] -= cell.conversion * steam
    reduced[index["H2"]] += cell.conversion * steam
    if dioxide > 0.0:
        reduced[index["CO2"]] -= cell.conversion * dioxide
        reduced[index["CO"]] += cell.conversion * dioxide
    names = tuple(name for name in SPECIES if name in index)
    product = equilibrate(matter, reduced, temperature, pressure, names).flows
    again = _recirculated(cell.inlet_hydrogen, feed, product, matter)
    carbon, hydrogen, atoms = (_atoms(feed, e, names, matter) for e in ("C", "H", "O"))
    passing = float(feed.sum()) - sum(_of(feed, name, matter) for name in names)
    back = _of(product, "H2O", matter) + _of(product, "CO2", matter)
    return Conversions(
        product,
        oxygen,
        again,
        FuelGas(
            (1.0 + again) * carbon,
            (1.0 + again) * hydrogen,
            (1.0 + again) * passing,
            pressure,
            "CH4" in index,
        ),
        atoms + again * (atoms - oxygen),
        oxygen / (steam + dioxide + again * back),
    )


def _recirculated(wanted: float, feed: Array, product: Array, matter: Matter) -> float:
    """Product recirculated per product, so that feed and it together hold the hydrogen wanted."""
    lacking = wanted * float(feed.sum()) - _of(feed, "H2", matter)
    brings = _of(product, "H2", matter) - wanted * float(product.sum())
    return lacking / brings if lacking > 0.0 and brings > 0.0 else 0.0


def _of(flows: Array, name: str, matter: Matter) -> float:
    place = matter.index.get(name)
    return 0.0 if place is None else float(flows[place])


def _atoms(flows: Array, element: str, names: tuple[str, ...], matter: Matter) -> float:
    if element not in matter.elements:
        return 0.0
    row = matter.formula[matter.elements.index(element)]
    return sum(float(row[matter.index[name]] * flows[matter.index[name]]) for name in names)


def oxygen_pressure(share: float, ratio: float, pressure: float) -> Array:
    """Return the pressure of oxygen [Pa] at the nodes of its side.

    A sweep with an oxygen share enters at `ratio` mol per mol of O2 made; without one it is pure.
    """
    if ratio <= 0.0:
        return np.full(len(nodes()), pressure)
    made = nodes()
    return pressure * np.maximum((ratio * share + made) / (ratio + made), _LEAST_OXYGEN)


def along(
    cell: Ceramic,
    gas: FuelGas,
    oxygen: Array,
    oxygen_pressures: Array,
    temperature: float,
    sign: float,
) -> AlongCell:
    """Return the cell with its gas: atoms of oxygen in it and pressure of O2 at the nodes."""
    levels = cell.levels(temperature)
    reversible = local_voltage(gas.steam_ratio(oxygen, levels), oxygen_pressures, levels)
    return AlongCell.of(reversible, cell.resistances(levels), sign)


@dataclass(frozen=True, slots=True)
class SolidOxideCurve:
    """A solid-oxide cell in its state; hydrogen that leaves per hydrogen the current could make."""

    cell: AlongCell
    net: float
    limit: float = inf

    def losses(self, density: float) -> Losses:
        """The voltage by its parts; reversible is the mean along the cell."""
        ohmic = density * self.cell.mean_resistance
        uneven = self.cell.sign * (self.cell.voltage(density) - self.cell.mean) - ohmic
        return Losses(self.cell.mean, 0.0, ohmic, uneven)

    def voltage(self, density: float) -> float:
        """The voltage [V]."""
        return self.cell.voltage(density)

    def density_for(self, power: float) -> float:
        """The current density [A/m2] at which current times voltage is a power [W/m2]."""
        return self.cell.density_for(power)

    def share(self, density: float) -> Share:
        """Where the hydrogen goes: none is lost."""
        return Share(self.net, 0.0)

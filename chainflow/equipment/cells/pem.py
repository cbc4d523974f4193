"""The proton-exchange-membrane cell: voltage and crossover by current density.

SI throughout: current density [A/m2], voltage [V], temperature [K], pressure [Pa], length [m]. One
cell, uniform, isothermal. Reversible voltage from our own Gibbs energies with Nernst's pressures
(gases saturated with water, activity of liquid water one); activation of each electrode by asinh;
membrane by Springer; contact; limiting current; hydrogen crosses by diffusion only.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import exp
from typing import Annotated, Any, Literal

from pydantic import BaseModel, ConfigDict, Field, model_validator

from chainflow.basis.constants import FARADAY, GAS_CONSTANT
from chainflow.basis.quantities import Fraction, Pressure, measured
from chainflow.equipment.cells.losses import (
    Losses,
    Share,
    VoltageCurve,
    activation,
    concentration,
)
from chainflow.equipment.published import (
    bernt_2016,
    espinosa_lopez_2018,
    han_2015,
    kocha_2006,
    springer_1991,
)
from chainflow.thermo.electrochemistry import nernst_shift, reversible_voltage
from chainflow.thermo.water import saturation_pressure

COLDEST, HOTTEST = 273.15, 393.15  # [K], liquid-fed membranes; common practice, no source
SOURCES = (
    han_2015.SOURCE,
    bernt_2016.SOURCE,
    espinosa_lopez_2018.SOURCE,
    springer_1991.SOURCE,
    kocha_2006.SOURCE,
)
SETS: dict[str, dict[str, float]] = {
    "han-2015": han_2015.NUMBERS,
    "bernt-2016": bernt_2016.NUMBERS,
    "espinosa-lopez-2018": espinosa_lopez_2018.NUMBERS,
}
_STANDARD = 298.15  # [K], where exchange currents and conductivities are given

ExchangeCurrent = Annotated[float, measured("A/m2", gt=0)]
ActivationEnergy = Annotated[float, measured("J/mol", ge=0)]
Transfer = Annotated[float, measured("1", gt=0, le=4)]
Thickness = Annotated[float, measured("m", gt=0, le=1e-3)]
WaterContent = Annotated[float, measured("1", gt=1, le=30)]
AreaResistance = Annotated[float, measured("ohm*m2", ge=0)]
LimitingCurrent = Annotated[float, measured("A/m2", gt=0)]
Conductivity = Annotated[float, measured("S/m", gt=0)]
Permeability = Annotated[float, measured("mol/(m*s*Pa)", ge=0)]
Supersaturation = Annotated[float, measured("Pa*m2/A", ge=0, le=1e3)]
Recombination = Annotated[float, measured("1", ge=0, le=0.95)]

_DEFAULT = han_2015.NUMBERS


def completed(given: Any, sets: dict[str, dict[str, float]], default: str) -> Any:
    """Return settings with the numbers of the published set they name filled in."""
    if not isinstance(given, dict):
        return given
    name = given.get("set", default)
    return {**sets.get(name, {}), **given} if isinstance(name, str) else given


class Membrane(BaseModel):
    """What a cell with a proton-conducting membrane has, whichever way it is run.

    Defaults stand in the classes derived from it.
    """

    model_config = ConfigDict(frozen=True, extra="forbid")

    set: str = Field(description="published numbers that hold where none is given")
    thickness: Thickness = Field(description="membrane thickness")
    water_content: WaterContent = Field(description="water per acid group of the membrane")
    contact_resistance: AreaResistance = Field(description="contacts and plates, by cell area")
    limiting_current: LimitingCurrent = Field(
        description="current density at which transport gives out"
    )
    permeability: Permeability | None = Field(
        None, description="of the membrane for hydrogen, instead of the one by temperature"
    )

    def conductivity_at(self, temperature: float) -> float:
        """Return the conductivity of the membrane [S/m] by its water content."""
        return springer_1991.conductivity(self.water_content, temperature)

    def resistance(self, temperature: float) -> float:
        """Return membrane and contacts [ohm m2]."""
        return self.thickness / self.conductivity_at(temperature) + self.contact_resistance

    def leak(self, temperature: float) -> float:
        """Return what hydrogen crossing is worth per pressure of hydrogen [A/(m2 Pa)]."""
        permeability = self.permeability
        if permeability is None:
            permeability = kocha_2006.hydrogen_permeability(temperature)
        return 2.0 * FARADAY * permeability / self.thickness


class PemCell(Membrane):
    """Numbers of a PEM electrolyser; those of `set` unless given."""

    set: Literal["han-2015", "bernt-2016", "espinosa-lopez-2018"] = Field(
        "han-2015", description="published numbers that hold where none is given"
    )
    thickness: Thickness = Field(_DEFAULT["thickness"], description="membrane thickness")
    water_content: WaterContent = Field(
        _DEFAULT["water_content"], description="water per acid group of the membrane"
    )
    conductivity: Conductivity | None = Field(
        None, description="of the membrane at 25 degC, instead of the one by water content"
    )
    conductivity_activation_energy: ActivationEnergy = Field(
        10.54e3, description="how that conductivity rises with temperature"
    )
    contact_resistance: AreaResistance = Field(
        _DEFAULT["contact_resistance"], description="contacts and plates, by cell area"
    )
    limiting_current: LimitingCurrent = Field(
        _DEFAULT["limiting_current"], description="current density at which transport gives out"
    )
    anode_exchange_current: ExchangeCurrent = Field(
        _DEFAULT["anode_exchange_current"], description="by cell area at 25 degC"
    )
    anode_activation_energy: ActivationEnergy = Field(
        _DEFAULT["anode_activation_energy"], description="of the anode's exchange current"
    )
    anode_transfer: Transfer = Field(
        _DEFAULT["anode_transfer"], description="transfer coefficient times electrons"
    )
    cathode_exchange_current: ExchangeCurrent = Field(
        _DEFAULT["cathode_exchange_current"], description="by cell area at 25 degC"
    )
    cathode_activation_energy: ActivationEnergy = Field(
        _DEFAULT["cathode_activation_energy"], description="of the cathode's exchange current"
    )
    cathode_transfer: Transfer = Field(
        _DEFAULT["cathode_transfer"], description="transfer coefficient times electrons"
    )
    supersaturation: Supersaturation = Field(
        0.0, description="hydrogen pressure that a current adds at the membrane, 0 to 40 bar*cm2/A"
    )
    recombination: Recombination = Field(
        0.0, description="share of the hydrogen crossing that a catalyst in the membrane burns"
    )
    oxygen_crossover: Fraction = Field(
        0.0, description="hydrogen burnt by oxygen crossing, per hydrogen crossing (0.2 to 0.5)"
    )
    oxygen_pressure: Pressure | None = Field(
        None, description="pressure of the oxygen and water side if it is lower"
    )

    @model_validator(mode="before")
    @classmethod
    def _of_set(cls, given: Any) -> Any:
        return completed(given, SETS, "han-2015")

    def conductivity_at(self, temperature: float) -> float:
        if self.conductivity is None:
            return super().conductivity_at(temperature)
        return self.conductivity * _arrhenius(self.conductivity_activation_energy, temperature)

    def curve(self, temperature: float, pressure: float) -> PemCurve:
        """Return the cell at a temperature and the pressure of its hydrogen side."""
        vapour = saturation_pressure(temperature)
        hydrogen = pressure - vapour
        oxygen = (self.oxygen_pressure or pressure) - vapour
        reversible = reversible_voltage(temperature) + nernst_shift(temperature, hydrogen, oxygen)
        leak = self.leak(temperature)
        return PemCurve(
            self,
            temperature,
            reversible,
            self.anode_exchange_current * _arrhenius(self.anode_activation_energy, temperature),
            self.cathode_exchange_current * _arrhenius(self.cathode_activation_energy, temperature),
            self.resistance(temperature),
            leak * hydrogen,
            leak * self.supersaturation,
            self.limiting_current,
        )


@dataclass(frozen=True, slots=True)
class PemCurve(VoltageCurve):
    """A PEM electrolyser cell in its state."""

    cell: PemCell
    temperature: float
    reversible: float  # [V]
    anode_exchange: float  # [A/m2]
    cathode_exchange: float  # [A/m2]
    resistance: float  # [ohm m2]
    leak: float  # [A/m2] that hydrogen crossing is worth, at rest
    leak_slope: float  # its rise per current density [-]
    limit: float  # [A/m2]

    def losses(self, density: float) -> Losses:
        """The voltage by its parts."""
        cell, warmth = self.cell, self.temperature
        anode = activation(density, self.anode_exchange, cell.anode_transfer, warmth)
        cathode = activation(density, self.cathode_exchange, cell.cathode_transfer, warmth)
        return Losses(
            self.reversible,
            anode + cathode,
            density * self.resistance,
            concentration(density, self.limit, warmth),
            anode=anode,
            cathode=cathode,
        )

    def share(self, density: float) -> Share:
        """Where the hydrogen goes; at rest all that is made leaks away."""
        if density <= 0.0:
            return Share(0.0, 1.0 - self.cell.recombination)
        crossing = min((self.leak + self.leak_slope * density) / density, 1.0)
        burnt = crossing * self.cell.oxygen_crossover
        net = max(1.0 - crossing - burnt, 0.0)
        return Share(net, crossing * (1.0 - self.cell.recombination))


def _arrhenius(energy: float, temperature: float) -> float:
    return exp(-energy / GAS_CONSTANT * (1.0 / temperature - 1.0 / _STANDARD))

"""What is the heating value of a gas, per mol, per kilogram, per cubic metre as it is metered?

Follows the definitions of ISO 6976: the heat of combustion of the ideal gas at the combustion
temperature, the volume of the real gas at the metering temperature and pressure. Upper value:
water liquid; lower: vapour. All from the species table, real volumes by Redlich and Kwong.
Flows (components,) [mol/s] give the composition; any size will do.
"""

from dataclasses import dataclass
from math import sqrt

import numpy as np

from chainflow.basis.constants import ATMOSPHERE, GAS_CONSTANT, STANDARD_TEMPERATURE, T_REFERENCE
from chainflow.thermo.components import Array, Matter, oxygen_demand
from chainflow.thermo.species import polynomial, species_of
from chainflow.thermo.validity import StateError, require_amounts

# dry air by mole: ISO 6976:2016 (trace gases counted as argon), from memory
DRY_AIR = {"N2": 0.78102, "O2": 0.20946, "Ar": 0.00916, "CO2": 0.00036}


@dataclass(frozen=True, slots=True)
class HeatingValues:
    """Upper and lower heating value and what follows from them."""

    upper: float  # [J/mol]
    lower: float  # [J/mol]
    molar_mass: float  # [kg/mol]
    molar_volume: float  # [m3/mol], real gas at metering conditions
    relative_density: float  # real gas over real dry air [-]

    @property
    def upper_per_mass(self) -> float:
        """Upper heating value [J/kg]."""
        return self.upper / self.molar_mass

    @property
    def lower_per_mass(self) -> float:
        """Lower heating value [J/kg]."""
        return self.lower / self.molar_mass

    @property
    def upper_per_volume(self) -> float:
        """Upper heating value [J/m3]."""
        return self.upper / self.molar_volume

    @property
    def lower_per_volume(self) -> float:
        """Lower heating value [J/m3]."""
        return self.lower / self.molar_volume

    @property
    def upper_wobbe_index(self) -> float:
        """Upper Wobbe index [J/m3]."""
        return self.upper_per_volume / sqrt(self.relative_density)

    @property
    def lower_wobbe_index(self) -> float:
        """Lower Wobbe index [J/m3]."""
        return self.lower_per_volume / sqrt(self.relative_density)


def heating_values(
    matter: Matter,
    flows: Array,
    combustion_temperature: float = T_REFERENCE,
    metering_temperature: float = STANDARD_TEMPERATURE,
    metering_pressure: float = ATMOSPHERE,
    ideal: bool = False,
) -> HeatingValues:
    """Return the heating values of a gas; `ideal` takes the volume of the ideal gas.

    Raises `StateError` without flow.
    """
    total = require_amounts(flows, matter.components)
    if total == 0.0:
        raise StateError("no heating value without flow: give a composition")
    share = np.asarray(flows, dtype=float) / total
    lower, water = _combustion(matter, combustion_temperature)
    pair = [polynomial(name).enthalpy(combustion_temperature) for name in ("H2O", "H2O(L)")]
    mass = float(share @ matter.molar_mass)
    state = (metering_temperature, metering_pressure)
    volume = GAS_CONSTANT * metering_temperature / metering_pressure
    if not ideal:
        volume = matter.gas_volume(share, *state)
    return HeatingValues(
        float(share @ (lower + water * (pair[0] - pair[1]))),
        float(share @ lower),
        mass,
        volume,
        mass / volume / _air_density(*state, ideal),
    )


def _combustion(matter: Matter, temperature: float) -> tuple[Array, Array]:
    """Return the lower heating value [J/mol] and the water made [mol/mol] of each component."""
    oxygen, carbon_dioxide, steam, nitrogen = (
        polynomial(name).enthalpy(temperature) for name in ("O2", "CO2", "H2O", "N2")
    )
    own = matter.ideal_enthalpies(temperature)
    lower, water = np.zeros(len(own)), np.zeros(len(own))
    for place, name in enumerate(matter.components):
        atoms = species_of(name).composition
        demand = oxygen_demand(atoms)
        if demand <= 0.0:
            continue
        water[place] = atoms.get("H", 0.0) / 2
        products = atoms.get("C", 0.0) * carbon_dioxide + water[place] * steam
        products += atoms.get("N", 0.0) / 2 * nitrogen
        lower[place] = own[place] + demand * oxygen - products
    return lower, water


def _air_density(temperature: float, pressure: float, ideal: bool) -> float:
    air = Matter.of(tuple(DRY_AIR))
    share = air.vector(DRY_AIR)
    if ideal:
        mass = float(share @ air.molar_mass) / float(share.sum())
        return mass * pressure / (GAS_CONSTANT * temperature)
    return air.gas_density(share, temperature, pressure)

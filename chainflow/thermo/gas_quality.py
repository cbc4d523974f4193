"""Would a gas do for the gas grid? Its dry composition and what appliances feel of it.

Upper and lower heating value, relative density and Wobbe index of the dry gas, by the definitions
of ISO 6976 at the reference conditions of EN 437 unless others are given: combustion and metering
at 15 degC, 1.01325 bar, real gas.  Flows (components,) [mol/s] give the composition; any size
will do, and what phase it is in does not matter.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from chainflow.basis.constants import ATMOSPHERE, STANDARD_TEMPERATURE
from chainflow.thermo.components import Array, Matter
from chainflow.thermo.heating import HeatingValues, heating_values

RESULTS = (
    "dry_fraction_CH4",
    "dry_fraction_H2",
    "dry_fraction_CO",
    "dry_fraction_CO2",
    "upper_heating_value_J_m3",
    "lower_heating_value_J_m3",
    "upper_wobbe_index_J_m3",
    "lower_wobbe_index_J_m3",
    "relative_density",
)
_SHOWN = ("CH4", "H2", "CO", "CO2")


@dataclass(frozen=True, slots=True)
class GasQuality:
    """A gas without its water: mole fractions by name, and its heating values."""

    dry_fractions: dict[str, float]
    heating: HeatingValues

    def results(self) -> dict[str, float]:
        """Return the numbers named in `RESULTS`, as far as the gas has those components."""
        found = {
            f"dry_fraction_{name}": self.dry_fractions[name]
            for name in _SHOWN
            if name in self.dry_fractions
        }
        heating = self.heating
        return found | {
            "upper_heating_value_J_m3": heating.upper_per_volume,
            "lower_heating_value_J_m3": heating.lower_per_volume,
            "upper_wobbe_index_J_m3": heating.upper_wobbe_index,
            "lower_wobbe_index_J_m3": heating.lower_wobbe_index,
            "relative_density": heating.relative_density,
        }


def gas_quality(
    matter: Matter,
    flows: Array,
    combustion_temperature: float = STANDARD_TEMPERATURE,
    metering_temperature: float = STANDARD_TEMPERATURE,
    metering_pressure: float = ATMOSPHERE,
) -> GasQuality:
    """Return the quality of a gas once its water is out.

    Temperatures [K] and pressure [Pa] are those of the reference conditions.  Raises `StateError`
    if nothing but water flows, or if the dry gas is liquid where it is metered.
    """
    dry = np.array(flows, dtype=float)
    if matter.water is not None:
        dry[matter.water] = 0.0
    conditions = (combustion_temperature, metering_temperature, metering_pressure)
    heating = heating_values(matter, dry, *conditions)
    shares = (dry / dry.sum()).tolist()
    return GasQuality(dict(zip(matter.components, shares, strict=True)), heating)

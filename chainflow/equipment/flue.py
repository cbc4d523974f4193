"""Where does water condense from a flue gas, and how much NO could its flame make?

Temperature [K], pressure [Pa], flows [mol/s].  The dew point is that of water alone (an acid dew
point lies far above it where sulphur burns, which is out of scope).  The nitric oxide is that of
equilibrium at the adiabatic flame temperature with radicals: an upper indication, since a flame has
milliseconds and forming NO takes longer below about 1900 K; it is never an emission figure.
"""

from __future__ import annotations

from collections.abc import Mapping

from chainflow.thermo.saturation import (
    CRITICAL_PRESSURE,
    saturation_pressure,
    saturation_temperature,
)
from chainflow.thermo.species import LOWEST_TEMPERATURE
from chainflow.thermo.streams import Stream


def dew_point(flue: Stream) -> float | None:
    """Return the temperature [K] at which water begins to condense (Raoult), None if never."""
    partial = float(flue.fraction("H2O")) * float(flue.pressure)
    if not saturation_pressure(LOWEST_TEMPERATURE) <= partial <= CRITICAL_PRESSURE:
        return None
    return saturation_temperature(partial)


def flue_results(flue: Stream) -> dict[str, float]:
    """Return the dew point as a result, where there is one."""
    found = dew_point(flue)
    return {} if found is None else {"dew_point_K": found}


def nitric_oxide(flame: Mapping[str, float]) -> float:
    """Return the mole fraction of NO in a flame (wet), zero where nitrogen or oxygen is absent."""
    total = sum(flame.values())
    return flame.get("NO", 0.0) / total if total > 0.0 else 0.0

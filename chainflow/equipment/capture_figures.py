"""Which published figures of capture can be named in a file, and what do they say?

Heat and power per mass of CO2 [J/kg], temperature at which the heat is needed [K].
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from chainflow.equipment.published import (
    abu_zahra_2007,
    chemistry_world_2022,
    deutz_2021,
    fasihi_2019,
    first_plant_2021,
    ghgt11_2013,
    keith_2018,
)

Solvent = Literal[
    "mea", "mea-base", "mea-optimised", "mea-pilot", "amp-hmda-pilot", "new-solvent-pilot"
]
Sorbent = Literal["first-plant", "operating", "target", "forecast", "hydroxide"]

_KWH_PER_TONNE = 3.6e6 / 1e3  # [J/kg]
# 30 kWh/t for pumps and 70 kWh/t for the flue-gas fan (5 to 10 kPa); common practice, no source
ABSORBER_POWER = 100.0 * _KWH_PER_TONNE


@dataclass(frozen=True, slots=True)
class CaptureFigures:
    """What one set says; the heat may depend on the CO2 content of the gas."""

    contents: tuple[float, ...]  # mole fractions of CO2
    heats: tuple[float, ...]  # [J/kg], one for each content
    power: float  # [J/kg]
    temperature: float  # [K]

    def heat(self, content: float) -> float:
        """Return the heat [J/kg] at a CO2 content; linear between, constant outside."""
        if len(self.heats) == 1:
            return self.heats[0]
        low, high = self.contents
        share = min(max((content - low) / (high - low), 0.0), 1.0)
        return self.heats[0] + share * (self.heats[1] - self.heats[0])

    def heat_slope(self, content: float) -> float:
        """Return how the heat [J/kg] moves with the CO2 content; zero where it is constant."""
        if len(self.heats) == 1 or not self.contents[0] <= content < self.contents[1]:
            return 0.0
        return (self.heats[1] - self.heats[0]) / (self.contents[1] - self.contents[0])


def _fixed(heat: float, power: float, temperature: float) -> CaptureFigures:
    return CaptureFigures((0.1,), (heat,), power, temperature)


def _pilot(heats: tuple[float, float]) -> CaptureFigures:
    return CaptureFigures(ghgt11_2013.CONTENTS, heats, ABSORBER_POWER, ghgt11_2013.TEMPERATURE)


SOLVENTS: dict[Solvent, CaptureFigures] = {
    "mea": _fixed(chemistry_world_2022.HEAT, ABSORBER_POWER, chemistry_world_2022.TEMPERATURE),
    "mea-base": _fixed(abu_zahra_2007.HEAT_BASE, ABSORBER_POWER, abu_zahra_2007.TEMPERATURE),
    "mea-optimised": _fixed(
        abu_zahra_2007.HEAT_OPTIMISED, ABSORBER_POWER, abu_zahra_2007.TEMPERATURE
    ),
    "mea-pilot": _pilot(ghgt11_2013.MEA),
    "amp-hmda-pilot": _pilot(ghgt11_2013.AMP_HMDA),
    "new-solvent-pilot": _pilot(ghgt11_2013.NEW_SOLVENT),
}

SORBENTS: dict[Sorbent, CaptureFigures] = {
    "first-plant": _fixed(
        first_plant_2021.HEAT, first_plant_2021.POWER, first_plant_2021.TEMPERATURE
    ),
    "operating": _fixed(deutz_2021.HEAT_TODAY, deutz_2021.POWER_TODAY, deutz_2021.TEMPERATURE),
    "target": _fixed(deutz_2021.HEAT_TARGET, deutz_2021.POWER_TARGET, deutz_2021.TEMPERATURE),
    "forecast": _fixed(fasihi_2019.HEAT, fasihi_2019.POWER, fasihi_2019.TEMPERATURE),
    "hydroxide": _fixed(keith_2018.HEAT, keith_2018.POWER, keith_2018.TEMPERATURE),
}

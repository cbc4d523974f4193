"""The surroundings that exergy is counted against, as a file names them.

``environment: {temperature: 10 degC, pressure: 0.9 bar, carbon_dioxide: 430 ppm, humidity: 60 %}``
Without it: 25 degC, 1.01325 bar and the partial pressures of Szargut, Morris and Steward, Exergy
Analysis of Thermal, Chemical and Metallurgical Processes (1988).
"""

from __future__ import annotations

from typing import Annotated

from pydantic import BaseModel, ConfigDict, Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.constants import ATMOSPHERE, T_REFERENCE
from chainflow.basis.quantities import OpenFraction, Pressure, measured
from chainflow.thermo.exergy import Environment
from chainflow.thermo.saturation import CRITICAL_TEMPERATURE
from chainflow.thermo.species import LOWEST_TEMPERATURE


class Surroundings(BaseModel):
    """Temperature, pressure and air of the surroundings."""

    model_config = ConfigDict(frozen=True, extra="forbid")

    temperature: Annotated[float, measured("K", ge=LOWEST_TEMPERATURE, le=CRITICAL_TEMPERATURE)] = (
        Field(
            T_REFERENCE,
            description="temperature of the surroundings, where water has a vapour pressure",
        )
    )
    pressure: Pressure = Field(ATMOSPHERE, description="pressure of the air, absolute")
    carbon_dioxide: OpenFraction | None = Field(
        None, description="mole fraction of CO2 in the air (default: 33.5 Pa at 1.01325 bar)"
    )
    humidity: OpenFraction | None = Field(
        None, description="relative humidity of the air (default: 2.2 kPa at 25 degC, 69 %)"
    )

    @model_validator(mode="after")
    def _exists(self) -> Surroundings:
        """Refuse surroundings that no air can have."""
        try:
            self.environment()
        except ValueError as problem:
            raise PydanticCustomError("environment", "{text}", {"text": str(problem)}) from None
        return self

    def environment(self) -> Environment:
        """Return the environment in SI."""
        return Environment.at(self.temperature, self.pressure, self.carbon_dioxide, self.humidity)

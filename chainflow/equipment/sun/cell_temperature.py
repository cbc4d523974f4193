"""How warm do the cells get?

Irradiance [W/m2], air and cell temperature [K], wind [m/s]; any shape.
"""

from __future__ import annotations

from typing import Annotated, Any, Literal

import numpy as np
from pydantic import BaseModel, ConfigDict, Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.constants import ICE_POINT
from chainflow.basis.quantities import Fraction, Temperature, measured
from chainflow.equipment.setting_numbers import stated

HeatLoss = Annotated[float, measured("W/(m2*K)", gt=0)]
_OWN = {
    "faiman": ("still_air_loss", "wind_loss"),
    "loss-factor": ("loss_factor", "absorptance", "converted"),
    "noct": ("noct",),
    "as-air": (),
}
SOURCES = (
    "cell temperature: Faiman, Prog. Photovolt. 16 (2008) 307; defaults as in the library pvlib",
)


class CellTemperature(BaseModel):
    """How the temperature of the cells follows from light, air and wind.

    `faiman`: T = air + G / (still_air_loss + wind_loss * wind) (R in pvlib). `loss-factor`: T = air
    + G * absorptance * (1 - converted) / loss_factor; 29 W/m2K free-standing, 20 half free, 15
    insulated behind (R in pvlib). `noct`: T = air + (noct - 20 degC) * G / 800 W/m2; 43 to 48 degC
    (M).
    """

    model_config = ConfigDict(frozen=True, extra="forbid")

    model: Literal["faiman", "loss-factor", "noct", "as-air"] = Field(
        "faiman", description="how light, air and wind set it; as-air: the cells are as cold as it"
    )
    still_air_loss: HeatLoss = Field(25.0, description="heat lost without wind (model: faiman)")
    wind_loss: Annotated[float, measured("J/(m3*K)", ge=0)] = Field(
        6.84, description="heat lost per speed of the wind (model: faiman)"
    )
    loss_factor: HeatLoss = Field(29.0, description="heat lost (model: loss-factor)")
    absorptance: Fraction = Field(0.9, description="light taken in (model: loss-factor)")
    converted: Fraction = Field(0.1, description="of it turned into power (model: loss-factor)")
    noct: Temperature = Field(
        ICE_POINT + 45.0, description="of the cell at 800 W/m2, 20 degC, 1 m/s (model: noct)"
    )

    @model_validator(mode="after")
    def _of_one_model(self) -> CellTemperature:
        strange = sorted(stated(self) - {*_OWN[self.model], "model"})
        if strange:
            text = f"'{strange[0]}' is of another model than {self.model}: remove it"
            raise PydanticCustomError("cell-temperature", "{text}", {"text": text})
        if self.model == "noct" and self.noct <= ICE_POINT + 20.0:
            text = "'noct' is not above the 20 degC of the air it is told for, wanted about 45 degC"
            raise PydanticCustomError("cell-temperature", "{text}", {"text": text})
        return self

    def of(self, irradiance: Any, air: Any, wind: Any) -> Any:
        """Return the temperature of the cells [K]."""
        if self.model == "faiman":
            return air + irradiance / (self.still_air_loss + self.wind_loss * np.asarray(wind))
        if self.model == "loss-factor":
            taken = self.absorptance * (1.0 - self.converted)
            return air + irradiance * taken / self.loss_factor
        if self.model == "noct":
            return air + (self.noct - ICE_POINT - 20.0) * irradiance / 800.0
        return air + 0.0 * np.asarray(irradiance)

    def slopes(self, irradiance: float, wind: float) -> tuple[float, float, float]:
        """Return its derivatives by irradiance [K m2/W], air [K/K] and wind [K s/m]."""
        if self.model == "faiman":
            loss = self.still_air_loss + self.wind_loss * wind
            return 1.0 / loss, 1.0, -irradiance * self.wind_loss / loss**2
        if self.model == "loss-factor":
            return self.absorptance * (1.0 - self.converted) / self.loss_factor, 1.0, 0.0
        if self.model == "noct":
            return (self.noct - ICE_POINT - 20.0) / 800.0, 1.0, 0.0
        return 0.0, 1.0, 0.0

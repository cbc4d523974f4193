"""How warm do the cells get?

Irradiance [W/m2], air and cell temperature [K], wind [m/s]; any shape.
"""

from __future__ import annotations

from typing import Annotated, Any, Literal, NamedTuple

import numpy as np
from pydantic import BaseModel, ConfigDict, Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.constants import ICE_POINT
from chainflow.basis.quantities import Fraction, Temperature, measured
from chainflow.equipment.setting_numbers import stated

HeatLoss = Annotated[float, measured("W/(m2*K)", gt=0)]
_OWN = {
    "faiman": ("still_air_loss", "wind_loss"),
    "back-of-module": ("mounting", "exponent", "wind_exponent", "front_over_back"),
    "loss-factor": ("loss_factor", "absorptance", "converted"),
    "noct": ("noct",),
    "as-air": (),
}
SOURCES = (
    "cell temperature: Faiman, Prog. Photovolt. 16 (2008) 307; defaults as in the library pvlib",
    "back of the module: King, Boyson and Kratochvil, SAND2004-3535 (2004)",
)


class Mounting(NamedTuple):
    """What heats and cools the back of a module."""

    exponent: float  # a [-]
    wind_exponent: float  # b [s/m]
    front_over_back: float  # dT, cells above the back at 1000 W/m2 [K]


# King, Boyson and Kratochvil (2004; R in pvlib); the roof and the glass rack have glass
# behind the cells, the others a polymer sheet
MOUNTINGS = {
    "open-rack": Mounting(-3.56, -0.075, 3.0),
    "open-rack-glass": Mounting(-3.47, -0.0594, 3.0),
    "roof": Mounting(-2.98, -0.0471, 1.0),
    "insulated": Mounting(-2.81, -0.0455, 0.0),
}


class CellTemperature(BaseModel):
    """How the temperature of the cells follows from light, air and wind.

    `faiman`: T = air + G / (still_air_loss + wind_loss * wind) (R in pvlib). `back-of-module`:
    T = air + G * exp(exponent + wind_exponent * wind) + G / 1000 W/m2 * front_over_back, with the
    wind 10 m above the ground; the three numbers are those of the `mounting` unless they are given
    (R in pvlib). `loss-factor`: T = air + G * absorptance * (1 - converted) / loss_factor; 29 W/m2K
    free-standing, 20 half free, 15 insulated behind (R in pvlib). `noct`: T = air + (noct - 20
    degC) * G / 800 W/m2; 43 to 48 degC (M).
    """

    model_config = ConfigDict(frozen=True, extra="forbid")

    model: Literal["faiman", "back-of-module", "loss-factor", "noct", "as-air"] = Field(
        "faiman", description="how light, air and wind set it; as-air: the cells are as cold as it"
    )
    still_air_loss: HeatLoss = Field(25.0, description="heat lost without wind (model: faiman)")
    wind_loss: Annotated[float, measured("J/(m3*K)", ge=0)] = Field(
        6.84, description="heat lost per speed of the wind (model: faiman)"
    )
    mounting: Literal["open-rack", "open-rack-glass", "roof", "insulated"] = Field(
        "open-rack",
        description="how the modules stand: free with a sheet or with glass behind, close to a "
        "roof, or without air behind (model: back-of-module)",
    )
    exponent: Annotated[float, measured("1", ge=-6, le=0)] | None = Field(
        None,
        description="of the heating of the back without wind; by mounting (model: back-of-module)",
    )
    wind_exponent: Annotated[float, measured("s/m", ge=-1, le=0)] | None = Field(
        None, description="how wind cools the back; by mounting (model: back-of-module)"
    )
    front_over_back: Annotated[float, measured("K", ge=0, le=20, difference=True)] | None = Field(
        None,
        description="cells above the back at 1000 W/m2; by mounting (model: back-of-module)",
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

    @property
    def heating(self) -> Mounting:
        """The three numbers of the back: as given, else those of the mounting."""
        usual = MOUNTINGS[self.mounting]
        given = (getattr(self, name) for name in Mounting._fields)
        pairs = zip(given, usual, strict=True)
        return Mounting(*(number if own is None else own for own, number in pairs))

    def of(self, irradiance: Any, air: Any, wind: Any) -> Any:
        """Return the temperature of the cells [K]."""
        if self.model == "faiman":
            return air + irradiance / (self.still_air_loss + self.wind_loss * np.asarray(wind))
        if self.model == "back-of-module":
            a, b, over = self.heating
            return air + irradiance * (np.exp(a + b * np.asarray(wind)) + over / 1000.0)
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
        if self.model == "back-of-module":
            a, b, over = self.heating
            back = float(np.exp(a + b * wind))
            return back + over / 1000.0, 1.0, irradiance * b * back
        if self.model == "loss-factor":
            return self.absorptance * (1.0 - self.converted) / self.loss_factor, 1.0, 0.0
        if self.model == "noct":
            return (self.noct - ICE_POINT - 20.0) / 800.0, 1.0, 0.0
        return 0.0, 1.0, 0.0

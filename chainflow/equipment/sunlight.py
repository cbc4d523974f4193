"""Sunlight in the plane of the field, and photovoltaic conversion at a stated efficiency.

SI throughout: light and power [W], irradiance [W/m2], area [m2].
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Annotated, Any, ClassVar

import numpy as np
from pydantic import Field

from chainflow.basis.quantities import Area, Fraction, Irradiance, Temperature, measured
from chainflow.equipment.base import Array, Duty, Equipment, Outcome, Port, Role, Site, rate
from chainflow.equipment.ports import Feeds, Light


class Sunlight(Equipment):
    """Light that falls on an aperture: irradiance in its plane times its area."""

    kind: ClassVar[str] = "sunlight"
    family: ClassVar[str] = "sunlight"
    ports: ClassVar[tuple[Port, ...]] = (
        Port("light", "light", Role.OFFERS, main=True, means="light on the aperture"),
    )
    formulas: ClassVar[tuple[str, ...]] = ("light = irradiance * aperture",)

    irradiance: Irradiance = Field(description="irradiance in the plane of the aperture")
    aperture: Area = Field(description="area that the light falls on")
    direct: Fraction = Field(
        0.9,  # ASTM G173-03: direct and circumsolar 900.1 of global 1000.4 W/m2
        description="share of the irradiance that comes straight from the sun",
    )
    air: Temperature = Field(298.15, description="temperature of the air around")
    wind: Annotated[float, measured("m/s", ge=0)] = Field(1.0, description="speed of the wind")

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        rate = self.irradiance * self.aperture
        return Outcome({"light": Light(rate, self.irradiance, self.direct, self.air, self.wind)})


class PvField(Equipment):
    """Photovoltaic field: light to direct-current power at a constant efficiency."""

    kind: ClassVar[str] = "pv-field"
    family: ClassVar[str] = "sunlight"
    ports: ClassVar[tuple[Port, ...]] = (
        Port("light", "light", Role.TAKES, main=True, means="light on the field"),
        Port("power", "power", Role.OFFERS, main=True, means="direct-current power"),
    )
    formulas: ClassVar[tuple[str, ...]] = ("power = efficiency * light",)

    efficiency: Fraction = Field(description="power per light on the field, module to terminal")

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        light = rate(feeds, "light")
        power = self.efficiency * light
        lost = Duty(
            "light not converted",
            power - light,
            site.ambient,
            site.ambient,
            site.ambient,
            "ambient",
        )
        return Outcome({"power": power}, duties=(lost,), power=-power)

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        return {"light": {"power": np.array([[self.efficiency, 0.0, 0.0, 0.0, 0.0]])}}

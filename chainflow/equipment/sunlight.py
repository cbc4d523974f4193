"""Sunlight in the plane of the field, and photovoltaic conversion at a stated efficiency.

SI throughout: light and power [W], irradiance [W/m2], area [m2].
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, ClassVar

import numpy as np
from pydantic import Field

from chainflow.basis.quantities import Area, Fraction, Irradiance
from chainflow.equipment.base import Array, Duty, Equipment, Outcome, Port, Role, Site, rate
from chainflow.equipment.ports import Feeds


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

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        return Outcome({"light": self.irradiance * self.aperture})


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
        return {"light": {"power": np.array([[self.efficiency]])}}

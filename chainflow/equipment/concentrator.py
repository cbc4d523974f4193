"""How much heat does a receiver give off in concentrated sunlight?

SI throughout: light and heat [W], irradiance [W/m2], temperature [K], area [m2].
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Annotated, Any, ClassVar, NamedTuple

import numpy as np
from pydantic import Field

from chainflow.basis.constants import STEFAN_BOLTZMANN
from chainflow.basis.quantities import Fraction, OpenFraction, Temperature, measured
from chainflow.equipment.base import (
    Array,
    Caution,
    Duty,
    Equipment,
    Heat,
    Light,
    Outcome,
    Port,
    Role,
    Site,
    light,
)
from chainflow.equipment.ports import Feeds


class _Parts(NamedTuple):
    """Where the light goes [W]; all but `heat` is lost."""

    diffuse: float
    optics: float
    reflected: float
    radiated: float
    convected: float
    heat: float


class Concentrator(Equipment):
    """Mirrors that throw the direct sunlight onto a receiver, which gives heat at its temperature.

    Only what comes straight from the sun counts, on mirrors that face it: `sunlight` with a plane
    of `mount: two-axis`, or its `irradiance` with `direct: 100 %`. The receiver loses what it does
    not absorb, what it radiates to surroundings as warm as the air, and what the air takes from it.
    One whose losses exceed what it absorbs is shut: it gives nothing and takes no heat back.
    """

    kind: ClassVar[str] = "concentrator"
    family: ClassVar[str] = "sunlight"
    gives: ClassVar[tuple[str, ...]] = (
        "efficiency",
        "receiver_efficiency",
        "receiver_area_m2",
        "flux_on_receiver_W_m2",
        "diffuse_W",
        "optical_loss_W",
        "reflected_W",
        "radiated_W",
        "convected_W",
    )
    ports: ClassVar[tuple[Port, ...]] = (
        Port("light", "light", Role.TAKES, main=True, means="light on the mirrors"),
        Port("heat", "heat", Role.OFFERS, main=True, means="heat at the receiver's temperature"),
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "heat = absorptance * optical_efficiency * direct * light - receiver area * loss",
        "loss = emittance * sigma * (T^4 - air^4) + convection * (T - air)",
        "receiver area = light / irradiance / concentration",
    )
    sources: ClassVar[tuple[str, ...]] = (
        "balance of a grey receiver; its defaults are common practice, from memory",
    )

    temperature: Temperature = Field(description="of the receiver; its heat is given off at it")
    concentration: Annotated[float, measured("1", ge=1, le=46000)] = Field(
        1000.0, description="area of the mirrors per area of the receiver's opening"
    )
    optical_efficiency: OpenFraction = Field(
        0.65,  # heliostat field, design 60-70 %, M
        description="direct light that reaches the receiver; mirror field 60-70 %, dish 80-88 %",
    )
    absorptance: OpenFraction = Field(0.95, description="of the receiver (cavity: effective)")
    emittance: Fraction = Field(0.85, description="of the receiver (cavity: effective)")
    convection: Annotated[float, measured("W/(m2*K)", ge=0)] = Field(
        0.0, description="heat that the air takes from the receiver"
    )

    def _loss_flux(self, air: float) -> tuple[float, float]:
        """What the receiver radiates and what the air takes from it [W/m2]."""
        radiated = self.emittance * STEFAN_BOLTZMANN * (self.temperature**4 - air**4)
        return radiated, self.convection * (self.temperature - air)

    def _parts(self, sun: Light) -> _Parts:
        direct = sun.rate * sun.direct
        reaching = self.optical_efficiency * direct
        absorbed = self.absorptance * reaching
        opening = sun.area / self.concentration
        radiated, convected = (opening * flux for flux in self._loss_flux(sun.air))
        if absorbed <= radiated + convected:  # shut, so that what it absorbs is all it loses
            lost = radiated + convected
            share = absorbed / lost if lost > 0.0 else 0.0
            radiated, convected, heat = share * radiated, share * convected, 0.0
        else:
            heat = absorbed - radiated - convected
        return _Parts(
            sun.rate - direct,
            direct - reaching,
            reaching - absorbed,
            radiated,
            convected,
            heat,
        )

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        sun = light(feeds)
        parts, level, around = self._parts(sun), self.temperature, site.ambient
        losses = {
            "diffuse light": parts.diffuse,
            "optics": parts.optics,
            "reflected": parts.reflected,
            "radiated": parts.radiated,
            "convected": parts.convected,
        }
        # what is absorbed and lost again leaves the receiver at its own temperature
        hot = ("radiated", "convected")
        duties = [
            Duty.between(
                name,
                -loss,
                *((level, level) if name in hot else (around, around)),
                met_by="ambient",
            )
            for name, loss in losses.items()
        ]
        given = Duty.between("heat given", -parts.heat, level, level, met_by="heat")
        return Outcome(
            {"heat": Heat.between(parts.heat, level, level)},
            duties=(given, *duties),
            results=self._results(sun, parts),
            cautions=self._cautions(sun, parts),
        )

    def _results(self, sun: Light, parts: _Parts) -> dict[str, float]:
        reaching = sun.rate - parts.diffuse - parts.optics
        opening = sun.area / self.concentration
        return {
            "efficiency": parts.heat / sun.rate if sun.rate > 0.0 else 0.0,
            "receiver_efficiency": parts.heat / reaching if reaching > 0.0 else 0.0,
            "receiver_area_m2": opening,
            "flux_on_receiver_W_m2": reaching / opening if opening > 0.0 else 0.0,
            "diffuse_W": parts.diffuse,
            "optical_loss_W": parts.optics,
            "reflected_W": parts.reflected,
            "radiated_W": parts.radiated,
            "convected_W": parts.convected,
        }

    def _cautions(self, sun: Light, parts: _Parts) -> tuple[Caution, ...]:
        if parts.heat > 0.0 or sun.rate <= 0.0:
            return ()
        text = (
            f"at {self.temperature - 273.15:.4g} degC the receiver would lose more than it absorbs "
            f"of {sun.irradiance * sun.direct:.4g} W/m2 direct light: it gives no heat; raise the "
            "concentration or lower the temperature"
        )
        return (Caution("receiver-shut", text),)

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        sun, heat = light(feeds), outcome.outlets["heat"]
        assert isinstance(heat, Heat)
        block = np.zeros((4, 5))
        if heat.rate > 0.0:
            taken = self.absorptance * self.optical_efficiency
            flux = sum(self._loss_flux(sun.air))
            opening = sun.area / self.concentration
            by_air = 4.0 * self.emittance * STEFAN_BOLTZMANN * sun.air**3 + self.convection
            block[0] = (
                heat.rate / sun.rate,
                opening * flux / sun.irradiance,
                taken * sun.rate,
                opening * by_air,
                0.0,
            )
        return {"light": {"heat": block}}

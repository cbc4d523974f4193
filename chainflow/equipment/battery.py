"""Electric power kept in a battery and given back later.  Power [W], energy [J], time [s].

In a steady state the battery takes and gives its mean power over whole cycles of charge and
discharge; what it has to hold follows from how long it must be able to deliver.
"""

from __future__ import annotations

from collections.abc import Mapping
from math import exp
from typing import Annotated, Any, ClassVar

import numpy as np
from pydantic import Field

from chainflow.basis.quantities import OpenFraction, measured
from chainflow.equipment.base import Array, Duty, Equipment, Outcome, Port, Role, Site, rate
from chainflow.equipment.ports import Feeds
from chainflow.equipment.published import lithium_ion_ranges


class Battery(Equipment):
    """Battery: takes power, keeps it, and offers what its round trip and its leakage leave.

    Its size is what delivers the mean power for `duration` out of the `usable` part of the
    capacity. Masses and volumes are of bare lithium-ion cells unless given; with packs, racks and
    housing they are larger by `mass_share` and `volume_share`.
    """

    kind: ClassVar[str] = "battery"
    family: ClassVar[str] = "power"
    gives: ClassVar[tuple[str, ...]] = (
        "capacity_J",
        "mass_kg",
        "volume_m3",
        "energy_J_kg",
        "energy_J_m3",
        "energy_with_housing_J_kg",
        "energy_with_housing_J_m3",
        "lost_W",
    )
    ports: ClassVar[tuple[Port, ...]] = (
        Port("charge", "power", Role.TAKES, many=True, main=True, means="power to keep"),
        Port("discharge", "power", Role.OFFERS, main=True, means="power given back"),
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "discharge = efficiency * exp(-self_discharge * kept_for) * charge",
        "capacity = discharge * duration / usable; mass and volume are per capacity",
        "energy per mass and volume: usable / mass, usable / volume",
        "with housing: times mass share, volume share",
    )
    sources: ClassVar[tuple[str, ...]] = (
        "lithium-ion cells 100 to 265 Wh/kg, 250 to 700 Wh/L: web comparison (read); cells only",
    )

    efficiency: OpenFraction = Field(
        description="round trip: power given back per power taken, before self-discharge"
    )
    duration: Annotated[float, measured("s", gt=0)] = Field(
        description="time for which a full battery delivers its power"
    )
    self_discharge: Annotated[float, measured("1/s", ge=0)] = Field(
        0.0, description="share of what is kept that leaks away in a time, as '2 %/d'"
    )
    kept_for: Annotated[float, measured("s", ge=0)] | None = Field(
        None, description="mean time between charge and discharge (default: `duration`)"
    )
    usable: OpenFraction = Field(1.0, description="usable part of the capacity")
    mass: Annotated[float, measured("kg/J", gt=0)] = Field(
        lithium_ion_ranges.MASS, description="mass per capacity, as '8 kg/kWh'"
    )
    volume: Annotated[float, measured("m3/J", gt=0)] = Field(
        lithium_ion_ranges.VOLUME, description="volume per capacity, as '4 L/kWh'"
    )

    mass_share: OpenFraction | None = Field(
        None, description="cells per cells and housing, by mass (default: no housing is counted)"
    )
    volume_share: OpenFraction | None = Field(
        None, description="cells per cells and housing, by volume (default: none is counted)"
    )

    @property
    def given_back(self) -> float:
        """Power given back per power taken, self-discharge included [-]."""
        kept_for = self.duration if self.kept_for is None else self.kept_for
        return self.efficiency * exp(-self.self_discharge * kept_for)

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        charge = rate(feeds, "charge")
        discharge = self.given_back * charge
        capacity = discharge * self.duration / self.usable
        lost = Duty(
            "round trip and self-discharge",
            discharge - charge,
            site.ambient,
            site.ambient,
            site.ambient,
            "ambient",
        )
        results = {
            "capacity_J": capacity,
            "mass_kg": capacity * self.mass,
            "volume_m3": capacity * self.volume,
            "energy_J_kg": self.usable / self.mass,
            "energy_J_m3": self.usable / self.volume,
            "energy_with_housing_J_kg": (self.mass_share or 1.0) * self.usable / self.mass,
            "energy_with_housing_J_m3": (self.volume_share or 1.0) * self.usable / self.volume,
            "lost_W": charge - discharge,
        }
        return Outcome(
            {"discharge": discharge}, duties=(lost,), results=results, power=charge - discharge
        )

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        return {"charge": {"discharge": np.array([[self.given_back]])}}

"""Making process water: how much is left of raw water, and what does it take?

SI throughout: flows [mol/s], temperature [K], pressure [Pa], power [W].  Salts are not followed:
raw water, product and reject are the same components, and only the amounts differ.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from typing import Annotated, Any, ClassVar

import numpy as np
from pydantic import Field

from chainflow.basis.quantities import OpenFraction, Pressure, measured
from chainflow.equipment.base import (
    Array,
    Caution,
    Equipment,
    Outcome,
    Port,
    Role,
    Site,
    material,
)
from chainflow.equipment.ports import Feeds
from chainflow.thermo.components import WATER_MOLAR_VOLUME, Matter
from chainflow.thermo.streams import Stream


class WaterTreatment(Equipment):
    """Turns raw water into process water; the rest is rejected.

    A call passes through: a store's `make_up` asks for treated water and this asks for raw water.
    All power ends as heat in both outlets.
    """

    kind: ClassVar[str] = "water-treatment"
    family: ClassVar[str] = "separation"
    through: ClassVar[bool] = True
    gives: ClassVar[tuple[str, ...]] = ("water_m3_s", "power_use_J_m3")
    ports: ClassVar[tuple[Port, ...]] = (
        Port("inlet", "material", Role.TAKES, main=True, means="raw water"),
        Port("power", "power", Role.CALLS, optional=True, means="power of the pumps"),
        Port("water", "material", Role.OFFERS, main=True, means="process water"),
        Port("reject", "material", Role.OFFERS, optional=True, means="what is rejected"),
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "water = recovery * inlet; power = power_use * volume of water at 25 degC",
    )
    sources: ClassVar[tuple[str, ...]] = (
        (
            "defaults: common practice, no source (reverse osmosis of tap or river water 0.5 to 2 "
            "kWh/m3, recovery 70 to 85 %; of sea water 3 to 4 kWh/m3, recovery 35 to 50 %)"
        ),
    )

    recovery: OpenFraction = Field(0.75, description="process water per raw water")
    power_use: Annotated[float, measured("J/m3", ge=0)] = Field(
        1.0 * 3.6e6, description="electric power per volume of process water, 1 kWh/m3"
    )
    pressure: Pressure | None = Field(
        None, description="pressure of both outlets (default: the inlet's)"
    )

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        if matter.water is None:
            yield ("kind",), "water treatment needs H2O among the components"

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        return [(o, species) for o in outlets if o == "water" or self.recovery < 1.0]

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        inlet = material(feeds, "inlet")
        volume = self.recovery * float(inlet.flow("H2O")) * WATER_MOLAR_VOLUME
        power = self.power_use * volume
        pressure = float(inlet.pressure) if self.pressure is None else self.pressure
        both = Stream.from_enthalpy(
            site.matter,
            inlet.flows,
            float(inlet.enthalpy) + power,
            pressure,
            float(inlet.temperature),
        )
        return Outcome(
            {"water": both.scaled(self.recovery), "reject": both.scaled(1.0 - self.recovery)},
            {"power": power},
            power=power,
            results={"water_m3_s": volume, "power_use_J_m3": self.power_use},
            cautions=self._cautions(inlet),
        )

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        both = np.eye(len(site.matter.components) + 1)
        power = np.zeros(len(both))
        power[site.matter.water] = self.power_use * self.recovery * WATER_MOLAR_VOLUME
        both[-1] += power
        rejected = (1.0 - self.recovery) * both
        blocks = {"water": self.recovery * both, "reject": rejected, "drawn:power": power[None, :]}
        return {"inlet": blocks}

    def _cautions(self, inlet: Stream) -> tuple[Caution, ...]:
        if float(inlet.gas.sum()) <= 1e-3 * float(inlet.total):
            return ()
        return (Caution("gas-in-water", "gas arrives with the raw water: put a condenser before"),)

"""The engine: power from fuel at a stated efficiency.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], heat and power [W].
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, ClassVar

import numpy as np
from pydantic import Field

from chainflow.basis.quantities import HeatingValueShare, Temperature
from chainflow.equipment.base import (
    HEAT_PORTS,
    Caution,
    Duty,
    Flow,
    Outcome,
    Port,
    Role,
    Site,
)
from chainflow.equipment.burning import Combustion, Oxygen, burnt, oxidiser_needed
from chainflow.equipment.ports import Feeds
from chainflow.thermo.streams import Stream


class Engine(Combustion):
    """Burns fuel completely and gives power at a stated efficiency.

    The flue leaves at `temperature`; what is neither power nor in the flue is given off at
    `jacket`.
    """

    kind: ClassVar[str] = "engine"
    gives: ClassVar[tuple[str, ...]] = ("fuel_W",)
    ports: ClassVar[tuple[Port, ...]] = (
        Port("fuel", "material", Role.TAKES, main=True, many=True, means="what burns"),
        Port("oxidiser", "material", Role.CALLS, means="air or oxygen"),
        Port(
            "moderator",
            "material",
            Role.TAKES,
            many=True,
            optional=True,
            means="what keeps the flame cooler",
        ),
        HEAT_PORTS[2],
        Port("flue", "material", Role.OFFERS, optional=True, means="the flue gas"),
        Port("power", "power", Role.OFFERS, main=True, means="electric power"),
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "power = efficiency * heating value of all that burns (LHV unless the efficiency says HHV)",
        "heat given off = enthalpy in - power - enthalpy of the flue",
    )

    efficiency: HeatingValueShare = Field(description="electric power per heating value, 42 % LHV")
    temperature: Temperature = Field(description="flue temperature")
    jacket: Temperature = Field(
        363.15, description="temperature at which the waste heat is given off"
    )

    def material_outlets(self) -> tuple[str, ...]:
        return ("flue",)

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        inlets, matter = self._inlets(feeds), site.matter
        given = [*inlets["fuel"], *inlets["moderator"]]
        (oxidiser,) = inlets["oxidiser"]
        amount, unmet = oxidiser_needed(Oxygen.at(self.excess, matter), given, oxidiser)
        entering = [*given, oxidiser.scaled(amount)]
        flows = np.sum([s.flows for s in entering], axis=0)
        value = matter.hhv if self.efficiency.basis == "HHV" else matter.lhv
        power = self.efficiency.value * float(value @ flows)
        pressure = min(float(s.pressure) for s in entering)
        flue = Stream.at(matter, np.maximum(burnt(matter) @ flows, 0.0), self.temperature, pressure)
        heat = float(flue.enthalpy) + power - float(sum(s.enthalpy for s in entering))
        needs = [Duty("jacket and exhaust cooling", heat, self.jacket, self.jacket, self.jacket)]
        duties, _, drawn, given_off = self.settle(needs, site)
        outlets: dict[str, Flow] = {"flue": flue, "power": power, **given_off}
        cautions = (
            Caution(
                "engine-too-good",
                "power and flue carry more than the fuel brings: "
                "lower the efficiency or the flue temperature",
            ),
        )
        return Outcome(
            outlets,
            drawn | {"oxidiser": amount},
            duties,
            power=-power,
            results={"fuel_W": float(value @ flows)},
            cautions=cautions if heat > 1e-9 * abs(power) and power > 0.0 else (),
            unmet=unmet,
        )

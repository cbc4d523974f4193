"""The engine: power from fuel at a stated efficiency.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], heat and power [W].
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, ClassVar

import numpy as np
from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.quantities import HeatingValueShare, OpenFraction, Temperature
from chainflow.equipment.base import (
    HEAT_PORTS,
    Array,
    Caution,
    Duty,
    Flow,
    Outcome,
    Port,
    Role,
    Site,
    material,
)
from chainflow.equipment.burning import Combustion, Oxygen, burnt, oxidiser_needed
from chainflow.equipment.cooling import cooling_duties
from chainflow.equipment.cooling_slopes import carried_at_levels
from chainflow.equipment.flue import flue_results
from chainflow.equipment.ports import Feeds, arriving
from chainflow.thermo.heating_slopes import heating_value_slopes
from chainflow.thermo.stream_slopes import enthalpy_slopes
from chainflow.thermo.streams import Stream


class Engine(Combustion):
    """Burns fuel completely, gives power at a stated efficiency; the flue leaves at `temperature`.

    What is neither power nor in the flue is heat given off.  Alone, it all goes at `jacket`.  With
    `exhaust`, the temperature at which the flue leaves the cylinders, the heat of cooling it to
    `temperature` is a duty of its own and the rest goes at `jacket`.  With `jacket_share`, the part
    of the heating value that the jacket takes, the exhaust temperature follows; with both, what is
    left (generator, radiation, oil) is lost to the surroundings.  Typical of lean-burn gas engines
    (from memory, certainty M): exhaust 380 to 480 degC, jacket 80 to 95 degC and 15 to 20 %.
    """

    kind: ClassVar[str] = "engine"
    gives: ClassVar[tuple[str, ...]] = ("fuel_W", "exhaust_K", "jacket_heat_W", "dew_point_K")
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
        "exhaust cooling = H_flue(exhaust) - H_flue(temperature)",
        "jacket = jacket_share * heating value, or what is left",
    )
    sources: ClassVar[tuple[str, ...]] = (
        "exhaust and jacket of gas engines: ranges from memory (M), no default rests on them",
    )

    efficiency: HeatingValueShare = Field(description="electric power per heating value, 42 % LHV")
    temperature: Temperature = Field(description="flue temperature")
    jacket: Temperature = Field(
        363.15, description="temperature at which the waste heat is given off"
    )
    exhaust: Temperature | None = Field(
        None, description="temperature at which the flue leaves the cylinders, cooled from there"
    )
    jacket_share: OpenFraction | None = Field(
        None, description="heat that the jacket takes, per heating value of all that burns"
    )

    @model_validator(mode="after")
    def _exhaust_is_cooled(self) -> Engine:
        if self.exhaust is not None and self.exhaust <= self.temperature:
            raise PydanticCustomError(
                "engine",
                "'exhaust' is {exhaust} degC, wanted above the flue 'temperature' of {flue} degC "
                "to which it is cooled",
                {
                    "exhaust": f"{self.exhaust - 273.15:.4g}",
                    "flue": f"{self.temperature - 273.15:.4g}",
                },
            )
        return self

    def material_outlets(self) -> tuple[str, ...]:
        return ("flue",)

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        inlets, matter = self._inlets(feeds), site.matter
        given = [*inlets["fuel"], *inlets["moderator"]]
        (oxidiser,) = inlets["oxidiser"]
        amount, unmet = oxidiser_needed(Oxygen.at(self.excess, matter), given, oxidiser)
        entering = [*given, oxidiser.scaled(amount)]
        flows = np.sum([s.flows for s in entering], axis=0)
        upper = self.efficiency.basis == "HHV"
        fuel = float(sum(s.hhv if upper else s.lhv for s in entering))
        power = self.efficiency.value * fuel
        pressure = min(float(s.pressure) for s in entering)
        flue = Stream.at(matter, np.maximum(burnt(matter) @ flows, 0.0), self.temperature, pressure)
        heat = float(flue.enthalpy) + power - float(sum(s.enthalpy for s in entering))
        needs, results, missing = self._heat(flue, heat, fuel, site)
        duties, _, drawn, given_off = self.settle(needs, site)
        outlets: dict[str, Flow] = {"flue": flue, "power": power, **given_off}
        return Outcome(
            outlets,
            drawn | {"oxidiser": amount},
            duties,
            power=-power,
            results={"fuel_W": fuel} | results,
            cautions=_too_good(heat, missing, power),
            unmet=unmet,
        )

    def _heat(
        self, flue: Stream, heat: float, fuel: float, site: Site
    ) -> tuple[list[Duty], dict[str, float], float]:
        """Duties, results, and the greatest heat that is missing for one of them [W]."""
        level = self.jacket
        results = flue_results(flue) if site.detail and float(flue.total) > 0.0 else {}
        if self.exhaust is None and self.jacket_share is None:
            return [Duty("jacket and exhaust cooling", heat, level, level, level)], results, 0.0
        taken = -(self.jacket_share or 0.0) * fuel
        hot = self._exhaust(flue, heat - taken)
        cooling = cooling_duties("exhaust cooling", hot, flue, site)
        cooled = sum(duty.heat for duty in cooling)
        both = self.exhaust is not None and self.jacket_share is not None
        jacket = taken if both else heat - cooled
        needs = [*cooling, Duty("jacket", jacket, level, level, level)]
        results |= {"exhaust_K": float(hot.temperature), "jacket_heat_W": -jacket}
        if both:
            ambient, lost = site.ambient, heat - cooled - jacket
            needs.append(Duty("generator and radiation", lost, ambient, ambient, ambient))
            return needs, results, max(cooled, jacket, lost)
        return needs, results, max(cooled, jacket)

    def _exhaust(self, flue: Stream, cooling: float) -> Stream:
        """The flue as it leaves the cylinders: at a temperature, or with heat to lose."""
        pressure = float(flue.pressure)
        if self.exhaust is not None:
            return Stream.at(flue.matter, flue.flows, self.exhaust, pressure)
        enthalpy = float(flue.enthalpy) - cooling
        return Stream.from_enthalpy(flue.matter, flue.flows, enthalpy, pressure, self.temperature)

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        amount, flue = outcome.drawn["oxidiser"], outcome.outlets["flue"]
        assert isinstance(flue, Stream) and isinstance(amount, float)
        plain = self.exhaust is None and self.jacket_share is None
        partial, capacity = enthalpy_slopes(flue)
        if outcome.unmet or amount <= 0.0 or not np.isfinite(capacity):
            return {}
        if "heat" in site.outlets and not plain:
            return {}
        matter, oxidiser = site.matter, material(feeds, "oxidiser")
        upper = self.efficiency.basis == "HHV"
        weights = np.append(Oxygen.at(self.excess, matter).weights, 0.0)
        air = np.append(oxidiser.flows, oxidiser.enthalpy)
        called = weights / -float(weights @ air)  # oxidiser by what enters beside it
        entering = np.eye(len(air)) + np.outer(air, called)
        flue_block = np.zeros((len(air), len(air)))
        flue_block[:-1, :-1] = burnt(matter)
        flue_block[-1, :-1] = partial @ burnt(matter)
        made = flue_block @ entering
        brought = self.efficiency.value * float(oxidiser.hhv if upper else oxidiser.lhv) * called
        found: dict[str, dict[str, Array]] = {}
        for port, factor in (("fuel", 1.0), ("moderator", 1.0), ("oxidiser", amount)):
            for number, stream in enumerate(arriving(feeds, port), start=1):
                assert isinstance(stream, Stream)
                power = brought + self.efficiency.value * heating_value_slopes(stream, upper=upper)
                rates = {"jacket and exhaust cooling": made[-1] + power - entering[-1]}
                none = np.zeros(len(power))
                carried = carried_at_levels(rates, none, site, outcome) if plain else {}
                if carried is None or not np.isfinite(power).all():
                    return {}
                blocks = {"flue": made, "power": power[None, :], "drawn:oxidiser": called[None, :]}
                if "heat" in carried:
                    blocks["heat"] = carried["heat"]
                label = port if number == 1 else f"{port}#{number}"
                found[label] = {name: factor * block for name, block in blocks.items()}
        return found


def _too_good(heat: float, missing: float, power: float) -> tuple[Caution, ...]:
    """A caution if more leaves than the fuel brings."""
    if power <= 0.0 or max(heat, missing) <= 1e-9 * power:
        return ()
    what, lower = "power and flue", "the efficiency or the flue temperature"
    if heat <= 1e-9 * power:
        what, lower = "power, jacket and exhaust", "'efficiency', 'jacket_share' or 'exhaust'"
    text = f"{what} carry more than the fuel brings: lower {lower}"
    return (Caution("engine-too-good", text),)

"""Heaters, coolers and engines that run on heat.

SI throughout: heat and power [W], temperature [K], pressure [Pa].
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, ClassVar

import numpy as np
from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.quantities import OpenFraction, Power, PressureDrop, Temperature
from chainflow.equipment.base import (
    HEAT_PORTS,
    Array,
    Caution,
    Duty,
    Equipment,
    Heat,
    Outcome,
    Port,
    Role,
    Site,
    material,
)
from chainflow.equipment.cooling import cooling_duties, wrong_way
from chainflow.equipment.cooling_slopes import add_heat_slopes
from chainflow.equipment.ports import Feeds, arriving
from chainflow.thermo.stream_slopes import enthalpy_slopes
from chainflow.thermo.streams import Stream


class _Exchanger(Equipment):
    """Brings a stream to a temperature, or gives it a duty; phases are found again."""

    family: ClassVar[str] = "heat"
    through: ClassVar[bool] = True
    cools: ClassVar[bool]
    gives: ClassVar[tuple[str, ...]] = ("duty_W",)
    ports: ClassVar[tuple[Port, ...]] = (
        Port("inlet", "material", Role.TAKES, main=True, means="the stream"),
        *HEAT_PORTS,
        Port(
            "outlet", "material", Role.OFFERS, main=True, means="the stream at its new temperature"
        ),
    )

    temperature: Temperature | None = Field(
        None, description="temperature at the outlet (or give `duty`)"
    )
    duty: Power | None = Field(
        None, description="heat into the stream, negative for cooling (or give `temperature`)"
    )
    pressure_drop: PressureDrop = Field(0.0, description="pressure lost on the way")

    @model_validator(mode="after")
    def _one_aim(self) -> _Exchanger:
        if (self.temperature is None) == (self.duty is None):
            raise PydanticCustomError("exchanger", "give one of 'temperature' and 'duty'", {})
        return self

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        inlet = material(feeds, "inlet")
        pressure = float(inlet.pressure) - self.pressure_drop
        if self.temperature is not None:
            outlet = Stream.at(site.matter, inlet.flows, self.temperature, pressure)
            heat = float(outlet.enthalpy) - float(inlet.enthalpy)
        else:
            heat = (self.duty or 0.0) if float(inlet.total) > 0.0 else 0.0
            outlet = Stream.from_enthalpy(
                site.matter,
                inlet.flows,
                float(inlet.enthalpy) + heat,
                pressure,
                float(inlet.temperature),
            )
        needs = cooling_duties("cooling" if self.cools else "heating", inlet, outlet, site)
        duties, electric, drawn, given = self.settle(needs, site)
        caution = wrong_way(self.kind, heat, float(inlet.total), cools=self.cools)
        return Outcome(
            {"outlet": outlet, **given},
            drawn,
            duties,
            power=electric,
            results={"duty_W": heat},
            cautions=caution,
        )

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        inlet, outlet = material(feeds, "inlet"), outcome.outlets["outlet"]
        assert isinstance(outlet, Stream)
        if self.temperature is None:
            linked = {"heat", "power"} & (site.inlets | site.outlets)
            free = not linked and float(inlet.total) > 0.0
            return {"inlet": {"outlet": np.eye(len(inlet.flows) + 1)}} if free else {}
        partial, _ = enthalpy_slopes(outlet)
        size = len(partial)
        block = np.zeros((size + 1, size + 1))
        block[:size, :size] = np.eye(size)
        block[size, :size] = partial
        at = (self.temperature, float(outlet.pressure))
        return add_heat_slopes({"outlet": block}, inlet, block[size], site, outcome, at)


class Heater(_Exchanger):
    """Heats a stream to a temperature or by a duty.

    The need is met by `power`, by `heat`, or bought.
    """

    kind: ClassVar[str] = "heater"
    cools: ClassVar[bool] = False


class Cooler(_Exchanger):
    """Cools a stream to a temperature or by a duty.

    The heat is given to `heat` or to the ambient.
    """

    kind: ClassVar[str] = "cooler"
    cools: ClassVar[bool] = True


class HeatEngine(Equipment):
    """Power from heat at a share of Carnot's limit, for the heat's entropy-mean temperature."""

    kind: ClassVar[str] = "heat-engine"
    family: ClassVar[str] = "heat"
    gives: ClassVar[tuple[str, ...]] = ("mean_temperature_K", "efficiency")
    ports: ClassVar[tuple[Port, ...]] = (
        Port("heat", "heat", Role.TAKES, many=True, main=True, means="heat that arrives"),
        Port("power", "power", Role.OFFERS, main=True, means="power at the shaft or terminal"),
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "power = share_of_carnot * (1 - sink / T_mean) * heat",
        "T_mean = sum(heat) / sum(heat / T_mean of each line)",
    )
    sources: ClassVar[tuple[str, ...]] = ("Carnot 1824; the share of it is the user's",)

    share_of_carnot: OpenFraction = Field(description="power per power of a reversible engine")
    sink: Temperature | None = Field(
        None, description="temperature of the heat sink (default: ambient)"
    )

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        heat = Heat.total([h for h in arriving(feeds, "heat") if isinstance(h, Heat)])
        sink = self.sink if self.sink is not None else site.ambient
        carnot = 1.0 - sink / heat.mean
        rejected = min(sink, heat.mean)  # heat colder than the sink goes elsewhere, not uphill
        power = max(self.share_of_carnot * carnot * heat.rate, 0.0)
        duties = (
            Duty("heat taken in", heat.rate, heat.start, heat.end, heat.mean, "heat"),
            Duty("heat rejected", power - heat.rate, rejected, rejected, rejected, "ambient"),
        )
        results = {
            "mean_temperature_K": heat.mean,
            "efficiency": power / heat.rate if heat.rate > 0.0 else 0.0,
        }
        return Outcome(
            {"power": power},
            {},
            duties,
            power=-power,
            results=results,
            cautions=_too_cold(carnot, heat, sink),
        )


def _too_cold(carnot: float, heat: Heat, sink: float) -> tuple[Caution, ...]:
    if carnot > 0.0 or heat.rate <= 0.0:
        return ()
    text = (
        f"heat at {heat.mean - 273.15:.4g} degC is not above the sink "
        f"at {sink - 273.15:.4g} degC: it gives no power"
    )
    return (Caution("heat-too-cold", text),)

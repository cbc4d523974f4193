"""Compression of real gases in intercooled stages.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], power and heat [W].  Each stage is
isentropic with an efficiency, on Redlich-Kwong properties; stages have equal pressure ratios;
water that condenses in the coolers is knocked out before the next stage.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from typing import Any, ClassVar, Literal

import numpy as np
from pydantic import Field, PositiveInt

from chainflow.basis.quantities import OpenFraction, Pressure, Temperature
from chainflow.equipment.base import (
    HEAT_PORTS,
    Array,
    Caution,
    Duty,
    Equipment,
    Outcome,
    Port,
    Role,
    Site,
    material,
)
from chainflow.equipment.cooling import cooling_duties
from chainflow.equipment.ports import Feeds
from chainflow.equipment.pressures import higher_feed
from chainflow.thermo.components import Matter
from chainflow.thermo.compression import isentropic_temperature
from chainflow.thermo.streams import Stream, temperature_slopes
from chainflow.thermo.water import water_split, water_split_slopes

_MOST_STAGES = 12
_ROUND_OFF = 1e-12  # of what arrives: less condensate is no state to find a temperature of
_WET = ("H2O", "CO2")  # what can be in a condensate


@dataclass(frozen=True, slots=True)
class Stage:
    """One stage: the gas at suction and discharge, its work, and what its cooler knocks out."""

    gas: Array  # [mol/s]
    suction: float  # [K]
    low: float  # [Pa]
    high: float  # [Pa]
    ideal: float  # isentropic discharge temperature [K]
    discharge: float  # [K]
    work: float  # [W], to the gas
    cooled_to: float | None  # [K]
    cooling: float  # [W], negative
    condensate: Array  # [mol/s], water phase


class Compressor(Equipment):
    """Raises the pressure of a gas; the shaft power and the drive's loss are asked at `power`."""

    kind: ClassVar[str] = "compressor"
    family: ClassVar[str] = "compression"
    through: ClassVar[bool] = True
    gives: ClassVar[tuple[str, ...]] = ("stages", "work_W", "discharge_K", "specific_work_J_kg")
    ports: ClassVar[tuple[Port, ...]] = (
        Port("inlet", "material", Role.TAKES, main=True, means="the gas"),
        Port("power", "power", Role.CALLS, optional=True, means="electric power of the drive"),
        HEAT_PORTS[2],
        Port("outlet", "material", Role.OFFERS, main=True, means="the gas at its new pressure"),
        Port(
            "condensate",
            "material",
            Role.OFFERS,
            optional=True,
            means="water knocked out, at suction pressure",
        ),
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "stage ratio = (p_out / p_in)^(1 / stages)",
        "work = (h(s_in, p_out) - h_in) / efficiency, real gas",
        "power = work / drive_efficiency",
    )
    sources: ClassVar[tuple[str, ...]] = (
        "equation of state: Redlich and Kwong, Chem. Rev. 44 (1949) 233",
        "default efficiencies and discharge limit: common practice, no source",
    )

    pressure: Pressure = Field(description="pressure at the outlet, absolute")
    stages: PositiveInt | Literal["auto"] = Field(
        "auto", description="number of stages; auto keeps each discharge below `discharge_limit`"
    )
    intercool: Temperature = Field(
        308.15, description="suction temperature of the second and later stages"
    )
    aftercool: Temperature | None = Field(
        None, description="temperature at the outlet (default: not cooled)"
    )
    efficiency: OpenFraction = Field(0.75, description="isentropic efficiency of each stage")
    drive_efficiency: OpenFraction = Field(0.95, description="shaft power per electric power")
    discharge_limit: Temperature = Field(423.15, description="highest discharge temperature wanted")

    def material_outlets(self) -> tuple[str, ...]:
        return ("outlet", "condensate")

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        return [(o, species) for o in outlets if o == "outlet" or species in ("H2O", "CO2")]

    def outlet_pressures(self, inlets: Mapping[str, tuple[float, ...]]) -> dict[str, float]:
        return {"outlet": self.pressure, "condensate": min(inlets.get("inlet", (self.pressure,)))}

    def pressure_faults(self, inlets: Mapping[str, tuple[float, ...]]) -> Iterator[tuple[str, str]]:
        return higher_feed(inlets, self.pressure, "use a valve or an expander")

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        inlet, matter = material(feeds, "inlet"), site.matter
        stages = self._stages(inlet, matter)
        work = sum(stage.work for stage in stages)
        power = work / self.drive_efficiency
        last = stages[-1]
        gas = last.gas - last.condensate
        level = last.discharge if last.cooled_to is None else last.cooled_to
        outlet = Stream.gaseous(matter, gas, level, self.pressure)
        condensate = self._condensate(inlet, stages, matter)
        needs = self._cooling(stages, matter, site)
        loss = Duty("drive loss", work - power, site.ambient, site.ambient, site.ambient, "ambient")
        needs = needs or [Duty("intercooling", 0.0, level, level, level)]
        duties, _, drawn, given = self.settle([*needs, loss], site)
        hottest = max(stage.discharge for stage in stages)
        return Outcome(
            {"outlet": outlet, "condensate": condensate, **given},
            {"power": power} | drawn,
            duties,
            power=power,
            results=self._results(stages, inlet, work, hottest),
            cautions=self._cautions(inlet, hottest),
            inner=stages,
        )

    def _cooling(self, stages: list[Stage], matter: Matter, site: Site) -> list[Duty]:
        """The heat that the coolers take out, stage by stage."""
        needs: list[Duty] = []
        for stage in stages:
            if stage.cooled_to is None or stage.cooling == 0.0:
                continue
            purpose = "aftercooling" if stage is stages[-1] else "intercooling"
            ends = stage.discharge, stage.cooled_to
            if site.detail or "heat" in site.outlets:
                hot = Stream.gaseous(matter, stage.gas, stage.discharge, stage.high)
                cold = Stream.at(matter, stage.gas, ends[1], stage.high)
                needs += cooling_duties(purpose, hot, cold, site)
            else:
                needs.append(Duty.between(purpose, stage.cooling, *ends))
        return needs

    def _results(
        self, stages: list[Stage], inlet: Stream, work: float, hottest: float
    ) -> dict[str, float]:
        mass = float(inlet.mass_flow)
        return {
            "stages": float(len(stages)),
            "work_W": work,
            "discharge_K": hottest,
            "specific_work_J_kg": work / mass if mass > 0.0 else 0.0,
        }

    def _cautions(self, inlet: Stream, hottest: float) -> tuple[Caution, ...]:
        cautions = []
        if float(inlet.water.sum()) > 1e-9 * float(inlet.total):
            text = (
                f"{float(inlet.water.sum()):.4g} mol/s of liquid water arrive at the inlet: "
                "put a condenser before it; it is knocked out here"
            )
            cautions.append(Caution("liquid-at-compressor", text))
        if hottest > self.discharge_limit + 0.01:
            text = (
                f"a stage discharges at {hottest - 273.15:.4g} degC, "
                f"above the limit of {self.discharge_limit - 273.15:.4g} degC: use more stages"
            )
            cautions.append(Caution("discharge-above-limit", text))
        return tuple(cautions)

    def _condensate(self, inlet: Stream, stages: list[Stage], matter: Matter) -> Stream:
        low = float(inlet.pressure)
        flows = inlet.water + inlet.liquid
        enthalpy = matter.water_enthalpy(inlet.water, float(inlet.temperature), low)
        for stage in stages:
            if stage.cooled_to is not None and stage.condensate.any():
                flows = flows + stage.condensate
                enthalpy += matter.water_enthalpy(stage.condensate, stage.cooled_to, stage.high)
        if float(flows.sum()) <= _ROUND_OFF * float(inlet.total):  # a gas just at its dew point
            return Stream.at(matter, flows, self.intercool, low)
        return Stream.from_enthalpy(matter, flows, float(enthalpy), low, self.intercool)

    def _stages(self, inlet: Stream, matter: Matter) -> list[Stage]:
        if self.stages != "auto":
            return self._train(inlet, matter, self.stages)
        train: list[Stage] = []
        for count in range(1, _MOST_STAGES + 1):
            train = self._train(inlet, matter, count)
            if max(stage.discharge for stage in train) <= self.discharge_limit:
                break
        return train

    def _train(self, inlet: Stream, matter: Matter, count: int) -> list[Stage]:
        low, gas, suction = float(inlet.pressure), inlet.gas, float(inlet.temperature)
        ratio = (self.pressure / low) ** (1.0 / count)
        train = []
        for number in range(count):
            high = self.pressure if number == count - 1 else low * ratio
            cool = self.aftercool if number == count - 1 else self.intercool
            stage = self._stage(matter, gas, suction, low, high, cool)
            train.append(stage)
            gas, low = gas - stage.condensate, high
            suction = stage.discharge if stage.cooled_to is None else stage.cooled_to
        return train

    def _stage(
        self,
        matter: Matter,
        gas: Array,
        suction: float,
        low: float,
        high: float,
        cool: float | None,
    ) -> Stage:
        nothing = np.zeros_like(gas)
        if not gas.any():
            return Stage(gas, suction, low, high, suction, suction, 0.0, cool, 0.0, nothing)
        ideal = isentropic_temperature(matter, gas, suction, low, high)
        before = matter.gas_enthalpy(gas, suction, low)
        work = (matter.gas_enthalpy(gas, ideal, high) - before) / self.efficiency
        discharge = _gas_temperature(matter, gas, before + work, high, ideal)
        if cool is None or cool >= discharge:
            return Stage(gas, suction, low, high, ideal, discharge, work, None, 0.0, nothing)
        dry, wet = (
            water_split(matter, gas, cool, high, ("CO2",))
            if matter.water is not None
            else (gas, nothing)
        )
        after = matter.gas_enthalpy(dry, cool, high) + (
            matter.water_enthalpy(wet, cool, high) if wet.any() else 0.0
        )
        return Stage(
            gas, suction, low, high, ideal, discharge, work, cool, after - before - work, wet
        )

    def settled(self, outcome: Outcome) -> Equipment:
        if self.stages != "auto":
            return self
        return self.model_copy(update={"stages": int(outcome.results["stages"])})

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        inlet = material(feeds, "inlet")
        if inlet.water.any() or float(inlet.total) == 0.0 or "heat" in site.outlets:
            return {}
        return {"inlet": self._train_slopes(inlet, site.matter, outcome.inner)}

    def _train_slopes(self, inlet: Stream, matter: Matter, train: list[Stage]) -> dict[str, Array]:
        """Chain rule along the stages; a column for each inlet flow, the last for enthalpy."""
        size = len(inlet.gas)
        by_flow, by_enthalpy = temperature_slopes(inlet)
        level = np.append(by_flow, by_enthalpy)  # d suction temperature
        gas = np.hstack([np.eye(size), np.zeros((size, 1))])  # d gas
        work, out_enthalpy = np.zeros(size + 1), np.zeros(size + 1)
        condensate = np.zeros((size + 1, size + 1))
        for stage in train:
            h1, s1, cp1 = matter.gas_partial(stage.gas, stage.suction, stage.low)
            h2, s2, _ = matter.gas_partial(stage.gas, stage.ideal, stage.high)
            enthalpy = h1 @ gas + cp1 * level
            entropy = s1 @ gas + cp1 / stage.suction * level
            ideal = h2 @ gas + stage.ideal * (entropy - s2 @ gas)
            stage_work = (ideal - enthalpy) / self.efficiency
            work = work + stage_work
            if stage.cooled_to is None:
                out_enthalpy = enthalpy + stage_work
                h_out, _, cp = matter.gas_partial(stage.gas, stage.discharge, stage.high)
                level = (out_enthalpy - h_out @ gas) / cp
                continue
            if stage.condensate.any():
                wet = _condensing(matter, stage, stage.cooled_to) @ gas
                partial = matter.water_partial(stage.cooled_to, stage.high, _WET).enthalpy
                condensate += np.vstack([wet, partial @ wet])
                gas = gas - wet
            level = np.zeros(size + 1)
            dry = stage.gas - stage.condensate
            out_enthalpy = matter.gas_partial(dry, stage.cooled_to, stage.high)[0] @ gas
        return {
            "outlet": np.vstack([gas, out_enthalpy]),
            "condensate": condensate,
            "drawn:power": (work / self.drive_efficiency)[None, :],
        }


def _condensing(matter: Matter, stage: Stage, level: float) -> Array:
    """Slopes of the condensate of a stage by its gas, at the temperature it is cooled to."""
    dry = stage.gas - stage.condensate
    return water_split_slopes(matter, stage.gas, dry, stage.condensate, level, stage.high, ("CO2",))


def _gas_temperature(
    matter: Matter, gas: Array, enthalpy: float, pressure: float, guess: float
) -> float:
    """Temperature [K] of a gas that has an enthalpy [W]; Newton, near-linear in a compressor."""
    level = guess
    for _ in range(30):
        state = matter.gas_state(gas, level, pressure)
        step = (enthalpy - state.enthalpy) / state.heat_capacity
        level += step
        if abs(step) < 1e-12 * level:
            break
    return level

"""Compression of real gases in intercooled stages.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], power and heat [W].  Each stage is
isentropic with an efficiency, or polytropic with one, on Redlich-Kwong properties; stages have
equal pressure ratios, or those that take the least work; water that condenses in the coolers is
knocked out before the next stage.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from math import inf
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
from chainflow.equipment.pressure_split import least_work_pressures
from chainflow.equipment.pressures import higher_feed
from chainflow.equipment.separation import phase_blocks
from chainflow.thermo.components import Matter
from chainflow.thermo.compression import isentropic
from chainflow.thermo.phases import split_at
from chainflow.thermo.polytropic import polytropic_temperature
from chainflow.thermo.stream_slopes import temperature_slopes
from chainflow.thermo.streams import Stream
from chainflow.thermo.three_phases import Split

_MOST_STAGES = 12
_LAST_STEP = 1e-7  # relative: the error after it is its square
_ROUND_OFF = 1e-12  # of what arrives: less condensate is no state to find a temperature of
_WET = ("H2O", "CO2")  # what can be in a condensate beside hydrocarbons
_DISSOLVED = ("CO2",)


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
    water: Array  # [mol/s], knocked out with what is dissolved in it
    oil: Array  # [mol/s], hydrocarbons knocked out

    @property
    def condensate(self) -> Array:
        """All that is knocked out [mol/s]."""
        return self.water + self.oil


class Compressor(Equipment):
    """Raises the pressure of a gas; the shaft power and the drive's loss are asked at `power`."""

    kind: ClassVar[str] = "compressor"
    family: ClassVar[str] = "compression"
    through: ClassVar[bool] = True
    gives: ClassVar[tuple[str, ...]] = (
        "stages",
        "work_W",
        "discharge_K",
        "specific_work_J_kg",
        "cooling_W",
        "knocked_out_mol_s",
    )
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
        "stage ratio = (p_out / p_in)^(1 / stages), or those of least work",
        "work = (h(s_in, p_out) - h_in) / efficiency, real gas",
        "polytropic: dh = v dp / polytropic_efficiency along the path, real gas",
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
    polytropic_efficiency: OpenFraction | None = Field(
        None, description="polytropic efficiency of each stage, instead of `efficiency`"
    )
    split: Literal["equal-ratio", "least-work"] = Field(
        "equal-ratio", description="how the pressure rise is split between the stages"
    )
    drive_efficiency: OpenFraction = Field(0.95, description="shaft power per electric power")
    discharge_limit: Temperature = Field(423.15, description="highest discharge temperature wanted")

    def material_outlets(self) -> tuple[str, ...]:
        return ("outlet", "condensate")

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        wet = species in _WET or (matter.oil is not None and species in matter.oil.names)
        return [(o, species) for o in outlets if o == "outlet" or wet]

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
            "cooling_W": sum(stage.cooling for stage in stages),
            "knocked_out_mol_s": sum(float(stage.condensate.sum()) for stage in stages),
        }

    def _cautions(self, inlet: Stream, hottest: float) -> tuple[Caution, ...]:
        cautions = []
        liquid = float(inlet.water.sum()) + float(inlet.liquid.sum())
        if liquid > 1e-9 * float(inlet.total):
            what = "water" if float(inlet.water.sum()) == liquid else "water and oil"
            text = (
                f"{liquid:.4g} mol/s of liquid {what} arrive at the inlet: put a condenser before "
                "it; it is knocked out here"
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
        enthalpy += matter.oil_enthalpy(inlet.liquid, float(inlet.temperature), low)
        for stage in stages:
            if stage.cooled_to is not None and stage.condensate.any():
                flows = flows + stage.condensate
                enthalpy += matter.water_enthalpy(stage.water, stage.cooled_to, stage.high)
                enthalpy += matter.oil_enthalpy(stage.oil, stage.cooled_to, stage.high)
        if float(flows.sum()) <= _ROUND_OFF * float(inlet.total):  # a gas just at its dew point
            return Stream.at(matter, flows, self.intercool, low)
        return Stream.from_enthalpy(matter, flows, float(enthalpy), low, self.intercool)

    def _stages(self, inlet: Stream, matter: Matter) -> list[Stage]:
        if self.stages != "auto":
            return self._train(inlet, matter, self.stages)
        for count in range(1, _MOST_STAGES):
            train = self._train(inlet, matter, count, self.discharge_limit)
            if train[-1].discharge <= self.discharge_limit:
                return train
        return self._train(inlet, matter, _MOST_STAGES)

    def _train(self, inlet: Stream, matter: Matter, count: int, limit: float = inf) -> list[Stage]:
        """That many stages; none more behind one that discharges above a limit [K]."""
        gas, suction = inlet.gas, float(inlet.temperature)
        low, *rises = self._pressures(inlet, matter, count)
        train = []
        for number, high in enumerate(rises):
            cool = self.aftercool if number == count - 1 else self.intercool
            stage = self._stage(matter, gas, suction, low, high, cool)
            train.append(stage)
            if stage.discharge > limit:
                break
            gas, low = gas - stage.condensate, high
            suction = stage.discharge if stage.cooled_to is None else stage.cooled_to
        return train

    def _pressures(self, inlet: Stream, matter: Matter, count: int) -> list[float]:
        """All pressures from the inlet to the outlet."""
        low = float(inlet.pressure)
        if self.split == "least-work":
            suctions = [float(inlet.temperature), *[self.intercool] * (count - 1)]
            return least_work_pressures(matter, inlet.gas, suctions, low, self.pressure)
        ratio = (self.pressure / low) ** (1.0 / count)
        levels = [low]
        for _ in range(count - 1):
            levels.append(levels[-1] * ratio)
        return [*levels, self.pressure]

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
            return Stage(
                gas, suction, low, high, suction, suction, 0.0, cool, 0.0, nothing, nothing
            )
        ideal, _, before = isentropic(matter, gas, suction, low, high)
        lossless = matter.gas_enthalpy(gas, ideal, high) - before
        if self.polytropic_efficiency is None:
            work = lossless / self.efficiency
            capacity = matter.gas_heat_capacity(gas, ideal, high)
            guess = ideal + (work - lossless) / capacity
            discharge = _gas_temperature(matter, gas, before + work, high, guess)
        else:
            discharge = polytropic_temperature(
                matter, gas, suction, low, high, self.polytropic_efficiency
            )
            work = matter.gas_enthalpy(gas, discharge, high) - before
        if cool is None or cool >= discharge:
            none = (None, 0.0, nothing, nothing)
            return Stage(gas, suction, low, high, ideal, discharge, work, *none)
        found = split_at(matter, gas, cool, high, _DISSOLVED)
        dry, water, oil = found or (gas, nothing, nothing)
        after = matter.gas_enthalpy(dry, cool, high)
        after += matter.water_enthalpy(water, cool, high) if water.any() else 0.0
        after += matter.oil_enthalpy(oil, cool, high)
        heat = after - before - work
        return Stage(gas, suction, low, high, ideal, discharge, work, cool, heat, water, oil)

    def settled(self, outcome: Outcome) -> Equipment:
        if self.stages != "auto":
            return self
        return self.model_copy(update={"stages": int(outcome.results["stages"])})

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        inlet = material(feeds, "inlet")
        if inlet.water.any() or inlet.liquid.any():
            return {}
        if float(inlet.total) == 0.0 or "heat" in site.outlets:
            return {}
        if self.polytropic_efficiency is not None or self.split != "equal-ratio":
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
                parts = Split(stage.gas - stage.condensate, stage.water, stage.oil)
                blocks = phase_blocks(matter, parts, stage.cooled_to, stage.high, _DISSOLVED)
                knocked_out = (blocks["water"] + blocks["oil"])[:, :size] @ gas
                condensate += knocked_out
                gas = gas - knocked_out[:size]
            level = np.zeros(size + 1)
            dry = stage.gas - stage.condensate
            out_enthalpy = matter.gas_partial(dry, stage.cooled_to, stage.high)[0] @ gas
        return {
            "outlet": np.vstack([gas, out_enthalpy]),
            "condensate": condensate,
            "drawn:power": (work / self.drive_efficiency)[None, :],
        }


def _gas_temperature(
    matter: Matter, gas: Array, enthalpy: float, pressure: float, guess: float
) -> float:
    """Temperature [K] of a gas that has an enthalpy [W]; Newton, near-linear in a compressor."""
    level = guess
    for _ in range(30):
        state = matter.gas_state(gas, level, pressure)
        step = (enthalpy - state.enthalpy) / state.heat_capacity
        level += step
        if abs(step) < _LAST_STEP * level:
            break
    return level

"""Changing pressure without a compressor: valve, expander, pump.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], power [W].
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import replace
from typing import Any, ClassVar

import numpy as np
from pydantic import Field

from chainflow.basis.constants import GAS_CONSTANT
from chainflow.basis.quantities import OpenFraction, Pressure
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
from chainflow.equipment.pressures import higher_feed, lower_feed
from chainflow.thermo.components import WATER_MOLAR_VOLUME, Matter
from chainflow.thermo.compression import isentropic_temperature
from chainflow.thermo.stream_slopes import enthalpy_slopes, entropy_slopes, temperature_slopes
from chainflow.thermo.streams import Stream
from chainflow.thermo.validity import StateError

_ENTROPY_ROUND_OFF = 1e-12
_FREEZING = 273.15  # [K]
_MOST_STEPS = 40
_GAS_IN_PUMP = 1e-3  # mole share of gas from which a pump deserves a caution


class Valve(Equipment):
    """Lets a stream down to a pressure at constant enthalpy."""

    kind: ClassVar[str] = "valve"
    family: ClassVar[str] = "compression"
    through: ClassVar[bool] = True
    ports: ClassVar[tuple[Port, ...]] = (
        Port("inlet", "material", Role.TAKES, main=True, means="the stream"),
        Port("outlet", "material", Role.OFFERS, main=True, means="the stream at its new pressure"),
    )
    formulas: ClassVar[tuple[str, ...]] = ("h(T_out, p_out) = h(T_in, p_in)",)

    pressure: Pressure = Field(description="pressure at the outlet, absolute")

    def pressure_faults(self, inlets: Mapping[str, tuple[float, ...]]) -> Iterator[tuple[str, str]]:
        return lower_feed(
            inlets, self.pressure, "a valve only lets down, put a pump or compressor instead"
        )

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        inlet = material(feeds, "inlet")
        try:
            return Outcome({"outlet": inlet.at_pressure(self.pressure)})
        except StateError:
            if not site.detail:  # on the way to a solution the coldest state will do
                return Outcome({"outlet": self._coldest(inlet)})
            raise StateError(self._too_cold(inlet)) from None

    def _coldest(self, inlet: Stream) -> Stream:
        """The outlet at the coldest temperature of the data, its enthalpy kept."""
        lowest = inlet.matter.temperature_range[0]
        cold = Stream.gaseous(inlet.matter, inlet.flows, lowest, self.pressure)
        return replace(cold, enthalpy=inlet.enthalpy)

    def _too_cold(self, inlet: Stream) -> str:
        levels = f"{float(inlet.pressure) / 1e5:.4g} bar to {self.pressure / 1e5:.4g} bar"
        return (
            f"letting this stream down from {levels} cools it below "
            f"{inlet.matter.temperature_range[0]:g} K, where parts of it freeze: heat it before, "
            "or let it down in steps with heating between"
        )

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        return {"inlet": {"outlet": np.eye(len(site.matter.components) + 1)}}


class Expander(Equipment):
    """Takes power out of a stream that is let down; phases stay in equilibrium on the way."""

    kind: ClassVar[str] = "expander"
    family: ClassVar[str] = "compression"
    gives: ClassVar[tuple[str, ...]] = ("work_W",)
    ports: ClassVar[tuple[Port, ...]] = (
        Port("inlet", "material", Role.TAKES, main=True, means="the stream"),
        Port("outlet", "material", Role.OFFERS, main=True, means="the stream at its new pressure"),
        Port("power", "power", Role.OFFERS, optional=True, means="power at the shaft"),
    )
    formulas: ClassVar[tuple[str, ...]] = ("power = efficiency * (h_in - h(s_in, p_out))",)

    pressure: Pressure = Field(description="pressure at the outlet, absolute")
    efficiency: OpenFraction = Field(0.80, description="isentropic efficiency")

    def pressure_faults(self, inlets: Mapping[str, tuple[float, ...]]) -> Iterator[tuple[str, str]]:
        return lower_feed(
            inlets, self.pressure, "an expander only lets down, put a compressor instead"
        )

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        inlet = material(feeds, "inlet")
        ideal = isentropic(inlet, self.pressure)
        work = self.efficiency * (float(inlet.enthalpy) - float(ideal.enthalpy))
        outlet = Stream.from_enthalpy(
            site.matter,
            inlet.flows,
            float(inlet.enthalpy) - work,
            self.pressure,
            float(ideal.temperature),
        )
        return Outcome(
            {"outlet": outlet, "power": work}, power=-work, results={"work_W": work}, inner=ideal
        )

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        inlet = material(feeds, "inlet")
        ideal = isentropic_slopes(inlet, outcome.inner)
        if ideal is None:
            return {}
        block = np.eye(len(ideal))
        work = self.efficiency * (block[-1] - ideal)
        block[-1] -= work
        return {"inlet": {"outlet": block, "power": work[None, :]}}


class Pump(Equipment):
    """Raises the pressure of a liquid; all losses stay in the liquid as heat."""

    kind: ClassVar[str] = "pump"
    family: ClassVar[str] = "compression"
    through: ClassVar[bool] = True
    gives: ClassVar[tuple[str, ...]] = ("work_W",)
    ports: ClassVar[tuple[Port, ...]] = (
        Port("inlet", "material", Role.TAKES, main=True, means="the liquid"),
        Port("power", "power", Role.CALLS, optional=True, means="electric power"),
        Port("outlet", "material", Role.OFFERS, main=True, means="the liquid at its new pressure"),
    )
    formulas: ClassVar[tuple[str, ...]] = ("power = (h(s_in, p_out) - h_in) / efficiency",)
    sources: ClassVar[tuple[str, ...]] = ("default efficiency: common practice, no source",)

    pressure: Pressure = Field(description="pressure at the outlet, absolute")
    efficiency: OpenFraction = Field(0.70, description="hydraulic power per electric power")

    def pressure_faults(self, inlets: Mapping[str, tuple[float, ...]]) -> Iterator[tuple[str, str]]:
        return higher_feed(inlets, self.pressure, "use a valve")

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        inlet = material(feeds, "inlet")
        ideal = None if _keeps_volume(inlet) else isentropic(inlet, self.pressure)
        if ideal is None:
            volume = float(_liquid_volumes(inlet.matter) @ inlet.flows)
            power = self._volume_work(inlet, volume) / self.efficiency
        else:
            power = (float(ideal.enthalpy) - float(inlet.enthalpy)) / self.efficiency
        outlet = Stream.from_enthalpy(
            site.matter,
            inlet.flows,
            float(inlet.enthalpy) + power,
            self.pressure,
            float(inlet.temperature),
        )
        return Outcome(
            {"outlet": outlet},
            {"power": power},
            power=power,
            results={"work_W": power},
            cautions=_gas_in_pump(inlet),
            inner=ideal,
        )

    def _volume_work(self, inlet: Stream, volume: float) -> float:
        """Volume of liquid [m3/s] times the rise of pressure [W]."""
        return volume * (self.pressure - float(inlet.pressure))

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        inlet = material(feeds, "inlet")
        block = np.eye(len(site.matter.components) + 1)
        if outcome.inner is None:
            rise = self._volume_work(inlet, 1.0) / self.efficiency
            power = np.append(_liquid_volumes(site.matter) * rise, 0.0)
        else:
            ideal = isentropic_slopes(inlet, outcome.inner)
            if ideal is None:
                return {}
            power = (ideal - block[-1]) / self.efficiency
        block[-1] += power
        return {"inlet": {"outlet": block, "drawn:power": power[None, :]}}


def _keeps_volume(inlet: Stream) -> bool:
    """Whether all of it is liquid water or oil, whose volume does not change."""
    oil = inlet.matter.oil
    some_oil = oil is not None and inlet.liquid[oil.places].any()
    return not inlet.gas.any() and bool(inlet.water.any() or some_oil)


def _liquid_volumes(matter: Matter) -> Array:
    """Volumes in a liquid [m3/mol]; what is dissolved in water takes no room."""
    volumes = np.zeros(len(matter.components))
    if matter.water is not None:
        volumes[matter.water] = WATER_MOLAR_VOLUME
    if matter.oil is not None:
        volumes[matter.oil.places] = matter.oil.volume
    return volumes


def _gas_in_pump(inlet: Stream) -> tuple[Caution, ...]:
    share = float(inlet.gas.sum()) / float(inlet.total) if float(inlet.total) > 0.0 else 0.0
    if share <= _GAS_IN_PUMP:
        return ()
    text = (
        f"{100 * share:.3g} % of what arrives is gas: a pump wants liquid, "
        "put a condenser before it or use a compressor"
    )
    return (Caution("gas-in-pump", text),)


def _start(inlet: Stream, pressure: float) -> float:
    """Where a gas would end that stays one; where it cannot, the freezing point of its water.

    From a colder state the steps of `isentropic` never overshoot.
    """
    level, matter = float(inlet.temperature), inlet.matter
    if inlet.water.any() or inlet.liquid.any():
        return level
    try:
        return isentropic_temperature(matter, inlet.gas, level, float(inlet.pressure), pressure)
    except StateError:
        if matter.water is None or inlet.gas[matter.water] == 0.0:
            raise
        return _FREEZING


def isentropic(inlet: Stream, pressure: float) -> Stream:
    """The stream at another pressure with its entropy unchanged, phases in equilibrium.

    Newton on the enthalpy, since ``(dS/dH)_p = 1/T`` holds through phase changes; it starts where
    a gas would end that stays one.
    """
    matter, flows = inlet.matter, inlet.flows
    if float(inlet.total) == 0.0:
        return inlet.at_pressure(pressure)
    level = _start(inlet, pressure)
    entropy = float(inlet.entropy)
    allowed = _ENTROPY_ROUND_OFF * (abs(entropy) + GAS_CONSTANT * float(inlet.total))
    stream = Stream.at(matter, flows, level, pressure)
    for _ in range(_MOST_STEPS):
        missing = entropy - float(stream.entropy)
        if abs(missing) <= allowed:
            break
        level = float(stream.temperature)
        enthalpy = float(stream.enthalpy) + missing * level
        stream = Stream.from_enthalpy(matter, flows, enthalpy, pressure, level)
    return stream


def isentropic_slopes(inlet: Stream, ideal: Stream) -> Array | None:
    """Slopes of the isentropic outlet's enthalpy by ``[n_1..n_C, H]`` of the inlet.

    None where pure water boils, since there temperature and flows do not fix the state.
    """
    by_flow, by_level = enthalpy_slopes(ideal)
    entropy, entropy_level = entropy_slopes(ideal)
    before, before_level = entropy_slopes(inlet)
    to_flow, to_enthalpy = temperature_slopes(inlet)
    if not np.isfinite([by_level, entropy_level, before_level]).all() or entropy_level == 0.0:
        return None
    given = np.append(before + before_level * to_flow, before_level * to_enthalpy)
    missing = given - np.append(entropy, 0.0)
    return np.append(by_flow, 0.0) + by_level / entropy_level * missing

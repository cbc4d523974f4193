"""What is a pure liquefied gas, and a pure gas colder than the gas data?

Enthalpy, entropy and density of one pure component from Cantera's reference fluids (see
`chainflow.thermo.densities`), put on the reference state of the species table by a fixed offset at
1 bar and 200 K (carbon dioxide: 298.15 K), where both are gases.  They hold below 200 K, the
lowest temperature of the gas data, and for liquids.  At 200 K the two descriptions differ by some
J/mol; at saturation they differ by the error of Redlich-Kwong (3 % of the latent
heat of carbon dioxide at 20 bar).  Cantera's
hydrogen is para hydrogen; below 200 K hydrogen is equilibrium hydrogen (`chainflow.thermo.spin`).
Mixtures are refused.  One case: flows [mol/s], [K], [Pa], [W].
"""

from __future__ import annotations

from collections.abc import Callable
from functools import cache, lru_cache
from typing import Any, NamedTuple

import cantera as ct
import numpy as np

from chainflow.basis.constants import P_REFERENCE, T_REFERENCE
from chainflow.thermo import spin
from chainflow.thermo.components import Array, Matter
from chainflow.thermo.densities import PURE_FLUIDS, reset
from chainflow.thermo.species import LOWEST_TEMPERATURE
from chainflow.thermo.validity import StateError

LIQUEFIABLE = tuple(name for name in PURE_FLUIDS if name != "H2O")
_FAR = 2000.0  # [J/mol] below 25 degC: with less, no gas is as cold as 200 K
_SAME = 1e-9  # relative, of a saturation pressure
_TOO_NEAR = 5e-8  # relative: so near to saturation the reference fluids name no phase
_AT_SATURATION = 1e-7  # of the heat of evaporation: closer to it no single phase is found
_BESIDE = 1e-5  # relative, of a temperature: where a slope is looked for


class ColdState(NamedTuple):
    """One mol of a pure component: [K], [J/mol], [J/(mol K)], [kg/m3] and the share of vapour."""

    temperature: float
    enthalpy: float
    entropy: float
    density: float
    vapour: float


class _Fluid:
    """A reference fluid on the reference state of the species table."""

    def __init__(self, name: str) -> None:
        self.name, self.fluid = name, getattr(ct, PURE_FLUIDS[name])()
        self.matter = Matter.of((name,))
        self.mass = float(self.matter.molar_mass[0])
        self.critical_temperature = float(self.fluid.critical_temperature)
        self.critical_pressure = float(self.fluid.critical_pressure)
        self.lowest = float(self.fluid.min_temp)
        self.offset = (0.0, 0.0)
        anchor = T_REFERENCE if name == "CO2" else LOWEST_TEMPERATURE
        gas = self.matter.gas_state(np.ones(1), anchor, P_REFERENCE)
        self.fluid.TP = anchor, P_REFERENCE
        spins = spin.normal(anchor) if name == "H2" else spin.Spin(0.0, 0.0, 0.0)
        self.offset = (
            gas.enthalpy - self.fluid.enthalpy_mass * self.mass - spins.enthalpy,
            gas.entropy - self.fluid.entropy_mass * self.mass - spins.entropy,
        )

    def state(self, spins: spin.Spin | None = None) -> ColdState:
        """What the fluid is set to, hydrogen in equilibrium unless its spins are given."""
        fluid = self.fluid
        level = float(fluid.T)
        if spins is None:
            spins = spin.equilibrium(level) if self.name == "H2" else spin.Spin(0.0, 0.0, 0.0)
        vapour = float(fluid.Q)
        dense = fluid.density > fluid.critical_density
        if self.critical_pressure <= fluid.P or self.critical_temperature <= level:
            vapour = 0.0 if dense else 1.0
        return ColdState(
            level,
            float(fluid.enthalpy_mass) * self.mass + self.offset[0] + spins.enthalpy,
            float(fluid.entropy_mass) * self.mass + self.offset[1] + spins.entropy,
            float(fluid.density),
            vapour,
        )


@cache
def _fluid(name: str) -> Any:
    return _Fluid(name)


def _guarded(name: str, set_state: Callable[[], None], words: str) -> None:
    try:
        reset(_fluid(name).fluid)
        set_state()
    except ct.CanteraError as problem:
        raise StateError(f"{name} {words}: its equation of state has no answer there") from problem


def critical_point(name: str) -> tuple[float, float]:
    """Return critical temperature [K] and pressure [Pa] of a liquefiable component."""
    found = _fluid(name)
    return found.critical_temperature, found.critical_pressure


def saturation(name: str, pressure: float) -> float:
    """Return the temperature [K] at which a liquefiable component boils at a pressure [Pa]."""
    found = _fluid(name)

    def at() -> None:
        found.fluid.PQ = pressure, 0.0

    _guarded(name, at, f"boiling at {pressure:g} Pa")
    return float(found.fluid.T)


def cold_at(name: str, temperature: float, pressure: float) -> ColdState:
    """Return one mol at a temperature and pressure; exactly at saturation it is liquid.

    Next to saturation, where the reference fluid itself leaves it open, the side decides: below
    the saturation pressure it is vapour.
    """
    found = _fluid(name)
    if temperature < found.lowest:
        raise StateError(
            f"{name} at {temperature:g} K is solid: wanted {found.lowest:g} K and more"
        )

    def at() -> None:
        fluid = found.fluid
        if temperature < found.critical_temperature:
            fluid.TQ = temperature, 0.0
            above = pressure / float(fluid.P) - 1.0
            if abs(above) <= _TOO_NEAR:
                fluid.TQ = temperature, 1.0 if above < -_SAME else 0.0
                return
        fluid.TP = temperature, pressure

    _guarded(name, at, f"at {temperature:g} K and {pressure:g} Pa")
    return found.state()


def _beside(name: str, temperature: float, vapour: float) -> float:
    """Return a temperature [K] next to that of a gas or liquid at which it is in the same phase.

    A gas is warmed and a liquid cooled: the other way may lead over saturation, where the slope
    would be that of evaporation.
    """
    found = _fluid(name)
    colder = temperature * (1.0 - _BESIDE)
    if vapour > 0.0 or temperature >= found.critical_temperature or colder < found.lowest:
        return temperature * (1.0 + _BESIDE)
    return colder


def saturated(name: str, pressure: float, vapour: float, *, converted: bool = True) -> ColdState:
    """Return one mol at saturation; hydrogen in equilibrium, or normal if it is not converted."""
    found = _fluid(name)

    def at() -> None:
        found.fluid.PQ = pressure, vapour

    _guarded(name, at, f"boiling at {pressure:g} Pa")
    spins = None if converted or name != "H2" else spin.normal(float(found.fluid.T))
    return found.state(spins)


def cold_of_enthalpy(name: str, enthalpy: float, pressure: float) -> ColdState:
    """Return one mol that has an enthalpy [J/mol] at a pressure, phases found."""
    found = _fluid(name)
    start = None
    if pressure < found.critical_pressure:
        liquid, vapour = (saturated(name, pressure, share) for share in (0.0, 1.0))
        share = (enthalpy - liquid.enthalpy) / (vapour.enthalpy - liquid.enthalpy)
        if -_AT_SATURATION <= share <= 1.0 + _AT_SATURATION:
            share = min(max(share, 0.0), 1.0)
            return saturated(name, pressure, share)._replace(vapour=share, enthalpy=enthalpy)
        start = liquid if enthalpy < liquid.enthalpy else vapour
    if name == "H2":
        return _hydrogen(enthalpy, pressure, start)
    wanted = (enthalpy - found.offset[0]) / found.mass

    def at() -> None:
        found.fluid.HP = wanted, pressure

    _guarded(name, at, f"with {enthalpy:g} J/mol at {pressure:g} Pa")
    return found.state()._replace(enthalpy=enthalpy)


def _hydrogen(enthalpy: float, pressure: float, start: ColdState | None) -> ColdState:
    """Equilibrium hydrogen of one phase: the spins follow the temperature."""
    low, high = _fluid("H2").lowest, 2.0 * LOWEST_TEMPERATURE
    if start is not None:
        colder = enthalpy < start.enthalpy
        low, high = (low, start.temperature) if colder else (start.temperature, high)
    level, step = 0.5 * (low + high), 0.0
    for _ in range(100):
        state = cold_at("H2", level, pressure)
        near = cold_at("H2", _beside("H2", level, state.vapour), pressure)
        low, high = (low, level) if state.enthalpy > enthalpy else (level, high)
        slope = (near.enthalpy - state.enthalpy) / (near.temperature - level)
        step = (enthalpy - state.enthalpy) / slope if slope > 0.0 else 0.0
        better = level + step
        if not low < better < high:
            better = 0.5 * (low + high)
        if abs(better - level) <= 1e-9 * level:
            break
        level = better
    return state._replace(enthalpy=enthalpy)


def only_component(matter: Matter, flows: Array) -> str | None:
    """Return the name of the one component that flows if it is liquefiable, else None."""
    places = np.flatnonzero(flows)
    if len(places) != 1:
        return None
    name = matter.components[int(places[0])]
    return name if name in LIQUEFIABLE else None


@lru_cache(maxsize=256)
def _warmest(name: str, pressure: float) -> float:
    """Return the enthalpy [J/mol] below which a pure flow is cold or liquefied.

    That of the gas at 200 K; where the liquid is warmer (carbon dioxide), half-way between boiling
    liquid and vapour, so that a gas just below saturation is still the one that `Stream.at` makes.
    """
    found = _fluid(name)
    if pressure < found.critical_pressure and saturation(name, pressure) > LOWEST_TEMPERATURE:
        return 0.5 * sum(saturated(name, pressure, share).enthalpy for share in (0.0, 1.0))
    return float(found.matter.gas_enthalpy(np.ones(1), LOWEST_TEMPERATURE, pressure))


def cold_by_enthalpy(
    matter: Matter, flows: Array, enthalpy: float, pressure: float
) -> ColdState | None:
    """Return one mol of a pure flow that is colder than any gas of the data, else None."""
    if np.count_nonzero(flows) != 1:
        return None
    name = only_component(matter, flows)
    if name is None:
        return None
    place, total = matter.index[name], float(flows.sum())
    each = enthalpy / total
    if each > matter.ideal_enthalpies(T_REFERENCE)[place] - _FAR:
        return None
    if each >= _warmest(name, pressure):
        return None
    return cold_of_enthalpy(name, each, pressure)


def cold_flows(
    matter: Matter, flows: Array, state: ColdState
) -> tuple[Array, Array, Array, float, float]:
    """Return gas, water, liquid [mol/s], temperature and enthalpy [W] of a pure flow."""
    gas = flows * state.vapour
    total = float(flows.sum())
    return gas, matter.nothing, flows - gas, state.temperature, total * state.enthalpy


def cold_entropy(matter: Matter, flows: Array, enthalpy: float, pressure: float) -> float:
    """Return the entropy [W/K] of a pure flow that is cold or liquefied; zero without flow."""
    name, total = only_component(matter, flows), float(flows.sum())
    if name is None:
        return 0.0
    return total * cold_of_enthalpy(name, enthalpy / total, pressure).entropy


class ColdSlopes(NamedTuple):
    """dH/dn [J/mol], dH/dT [W/K], dS/dn [J/(mol K)], dS/dT [W/K2]; infinite where it boils."""

    enthalpy_by_flows: Array
    enthalpy_by_temperature: float
    entropy_by_flows: Array
    entropy_by_temperature: float


def cold_slopes(matter: Matter, flows: Array, enthalpy: float, pressure: float) -> ColdSlopes:
    """Return the slopes of a pure flow that is cold or liquefied; zero without flow."""
    name, total = only_component(matter, flows), float(flows.sum())
    by_flow, entropies = matter.ideal_enthalpies(LOWEST_TEMPERATURE), np.zeros(len(flows))
    if name is None:
        return ColdSlopes(by_flow, 0.0, entropies, 0.0)
    state = cold_of_enthalpy(name, enthalpy / total, pressure)
    by_flow[matter.index[name]] = state.enthalpy
    entropies[matter.index[name]] = state.entropy
    if 0.0 < state.vapour < 1.0:
        return ColdSlopes(by_flow, np.inf, entropies, np.inf)
    near = cold_at(name, _beside(name, state.temperature, state.vapour), pressure)
    capacity = (state.enthalpy - near.enthalpy) / (state.temperature - near.temperature)
    return ColdSlopes(by_flow, total * capacity, entropies, total * capacity / state.temperature)

"""Which phases does a flow form, and at which temperature does it have a given enthalpy?

One case at a time: flows (components,) [mol/s], temperature [K], pressure [Pa], enthalpy [W].
The enthalpy of gas, water and oil in equilibrium rises steadily with temperature, so a search
inside a bracket always ends; where it jumps (one component boils alone), the split is set by the
enthalpy. Oil is looked for only if there are long hydrocarbons among the components.
"""

from math import isfinite
from typing import NamedTuple

import numpy as np

from chainflow.basis.constants import GAS_CONSTANT
from chainflow.thermo.components import Array, Matter, liquefaction
from chainflow.thermo.search import NARROWEST, Bracket
from chainflow.thermo.species import HIGHEST_TEMPERATURE, LOWEST_TEMPERATURE
from chainflow.thermo.three_phases import (
    Split,
    liquid_slopes,
    liquids_by_temperature,
    oil_forms,
    three_phase_split,
)
from chainflow.thermo.validity import StateError, require_amounts, require_state, some
from chainflow.thermo.water import (
    CRITICAL_PRESSURE,
    CRITICAL_TEMPERATURE,
    condenses,
    saturation_pressure,
    saturation_temperature,
    split,
    split_by_temperature,
    split_slopes,
)

_SAME_TEMPERATURE = 1e-6  # [K]
ROUND_OFF = 3e-14  # of an enthalpy with oil in it
LAST_STEP = 2e-6  # [K]: after a Newton step below this the next error is below round-off


class Phases(NamedTuple):
    """Flows of gas, liquid water and oil [mol/s], their temperature [K] and enthalpy [W]."""

    gas: Array
    water: Array
    oil: Array
    temperature: float
    enthalpy: float


class EnthalpySlopes(NamedTuple):
    """Slopes of the enthalpy by flows [J/mol] (components,) and by temperature [W/K]."""

    by_flows: Array
    by_temperature: float


def phases_at(
    matter: Matter,
    flows: Array,
    temperature: float,
    pressure: float,
    dissolved: tuple[str, ...],
) -> Phases:
    """Return what flows form at a temperature and pressure."""
    require_state(temperature, pressure)
    found = split_at(matter, flows, temperature, pressure, dissolved)
    if found is None:
        enthalpy = matter.gas_enthalpy(flows, temperature, pressure)
        return Phases(flows, matter.nothing, matter.nothing, temperature, enthalpy)
    gas, water, oil = found
    enthalpy = matter.gas_enthalpy(gas, temperature, pressure)
    enthalpy += matter.water_enthalpy(water, temperature, pressure)
    enthalpy += matter.oil_enthalpy(oil, temperature, pressure)
    return Phases(gas, water, oil, temperature, enthalpy)


def split_at(
    matter: Matter,
    flows: Array,
    temperature: float,
    pressure: float,
    dissolved: tuple[str, ...],
) -> Split | None:
    """Return gas, water and oil of checked flows, or None if all is gas."""
    if matter.oil is not None:
        return three_phase_split(matter, flows, temperature, pressure, dissolved)
    found = split(matter, flows, temperature, pressure, dissolved)
    return None if found is None else Split(*found, matter.nothing)


def any_liquid(
    matter: Matter,
    flows: Array,
    temperature: float,
    pressure: float,
    dissolved: tuple[str, ...] = ("CO2",),
) -> bool:
    """Return whether any water or oil condenses from flows at a temperature and pressure."""
    if condenses(matter, flows, temperature, pressure, dissolved):
        return True
    return oil_forms(matter, flows, temperature, pressure)


def find_phases(
    matter: Matter,
    flows: Array,
    enthalpy: float,
    pressure: float,
    guess: float,
    dissolved: tuple[str, ...],
) -> Phases:
    """Return the phases whose enthalpy is given; raises `StateError` outside the data."""
    guess = min(max(guess, LOWEST_TEMPERATURE), HIGHEST_TEMPERATURE)
    require_state(guess, pressure)
    total = require_amounts(flows, matter.components)
    if total == 0.0:
        return Phases(flows, matter.nothing, matter.nothing, guess, 0.0)
    if not isfinite(enthalpy):
        raise StateError(f"enthalpy is {enthalpy} W, wanted a finite number")
    if matter.water is not None and flows[matter.water] == total:
        boiling = _boiling_water(matter, flows, enthalpy, pressure)
        if boiling is not None:
            return boiling
    return _search(matter, flows, enthalpy, pressure, guess, dissolved)


def _boiling_water(matter: Matter, flows: Array, enthalpy: float, pressure: float) -> Phases | None:
    """Return pure water split by its enthalpy, or None if it does not boil."""
    lowest = saturation_pressure(LOWEST_TEMPERATURE)
    if not lowest < pressure < CRITICAL_PRESSURE:
        return None
    temperature = saturation_temperature(pressure)
    steam = matter.gas_enthalpy(flows, temperature, pressure)
    liquid = matter.water_enthalpy(flows, temperature, pressure)
    if not liquid <= enthalpy <= steam:
        return None
    share = (enthalpy - liquid) / (steam - liquid)
    return Phases(flows * share, flows * (1.0 - share), matter.nothing, temperature, enthalpy)


def _search(
    matter: Matter,
    flows: Array,
    enthalpy: float,
    pressure: float,
    guess: float,
    dissolved: tuple[str, ...],
) -> Phases:
    bracket, temperature = Bracket(), guess
    ends: dict[bool, Phases] = {}  # the nearest trials below and above the answer
    for _ in range(200):
        trial, capacity = _trial(matter, flows, temperature, pressure, dissolved)
        excess = trial.enthalpy - enthalpy
        if excess == 0.0 or (some(trial.oil) and _met(trial, flows, enthalpy)):
            return trial._replace(enthalpy=enthalpy)
        if bracket.outside(temperature, excess):
            raise _no_such_enthalpy(flows, enthalpy, pressure)
        ends[excess > 0.0] = trial
        step = -excess / capacity
        small = abs(step) < LAST_STEP
        if small and (better := _last_step(matter, trial, step, pressure, enthalpy, dissolved)):
            return better
        if bracket.empty or (small and abs(step) < NARROWEST):
            break
        temperature = bracket.next_trial(temperature, excess, step)
    if some(trial.oil) or any(some(end.oil) for end in ends.values()):
        return _between(ends, trial, flows, enthalpy, pressure)
    return _close_by_boiling(matter, trial, pressure, enthalpy)


def _met(trial: Phases, flows: Array, enthalpy: float) -> bool:
    """Return whether a trial has the enthalpy to round-off."""
    scale = abs(enthalpy) + GAS_CONSTANT * trial.temperature * float(flows.sum())
    return abs(trial.enthalpy - enthalpy) <= ROUND_OFF * scale


def _trial(
    matter: Matter,
    flows: Array,
    temperature: float,
    pressure: float,
    dissolved: tuple[str, ...],
) -> tuple[Phases, float]:
    """Return the phases at a temperature and the slope of their enthalpy [W/K]."""
    found = split_at(matter, flows, temperature, pressure, dissolved)
    nothing = matter.nothing
    if found is None:
        found_gas = matter.gas_enthalpy_and_slope(flows, temperature, pressure)
        return Phases(flows, nothing, nothing, temperature, found_gas[0]), found_gas[1]
    gas, water, oil = found
    if some(oil):
        return _trial_with_oil(matter, found, temperature, pressure, dissolved)
    vapour = matter.gas_partial(gas, temperature, pressure)
    names = matter.solubles(dissolved).names
    liquid = matter.water_partial(temperature, pressure, names).enthalpy
    enthalpy = float(gas @ vapour.enthalpy + water @ liquid)
    capacity = vapour.heat_capacity + matter.water_heat_capacity(water, temperature, pressure)
    moved = split_by_temperature(matter, flows, water, temperature, pressure, dissolved)
    capacity += float((liquid - vapour.enthalpy) @ moved)
    return Phases(gas, water, nothing, temperature, enthalpy), capacity


class _Enthalpies(NamedTuple):
    """Partial molar enthalpies [J/mol] of three phases, and their heat capacity together [W/K]."""

    gas: Array
    water: Array
    oil: Array
    heat_capacity: float


def _enthalpies(
    matter: Matter, found: Split, temperature: float, pressure: float, dissolved: tuple[str, ...]
) -> _Enthalpies:
    assert matter.oil is not None
    vapour = matter.gas_partial(found.gas, temperature, pressure)
    oil = matter.oil.enthalpies(temperature, pressure)
    own = vapour.heat_capacity + float(found.oil @ matter.oil.heat_capacities(temperature))
    water = matter.nothing
    if some(found.water):
        names = matter.solubles(dissolved).names
        water = matter.water_partial(temperature, pressure, names).enthalpy
        own += matter.water_heat_capacity(found.water, temperature, pressure)
    return _Enthalpies(vapour.enthalpy, water, oil, own)


def _trial_with_oil(
    matter: Matter, found: Split, temperature: float, pressure: float, dissolved: tuple[str, ...]
) -> tuple[Phases, float]:
    h = _enthalpies(matter, found, temperature, pressure, dissolved)
    enthalpy = float(found.gas @ h.gas + found.water @ h.water + found.oil @ h.oil)
    water, oil = liquids_by_temperature(matter, found, temperature, pressure, dissolved)
    moved = float((h.water - h.gas) @ water + (h.oil - h.gas) @ oil)
    return Phases(*found, temperature, enthalpy), h.heat_capacity + moved


def _slopes_with_oil(
    matter: Matter, found: Split, temperature: float, pressure: float, dissolved: tuple[str, ...]
) -> EnthalpySlopes:
    """Return the slopes of the enthalpy of gas, oil and perhaps water in equilibrium."""
    h = _enthalpies(matter, found, temperature, pressure, dissolved)
    moved = liquid_slopes(matter, found, temperature, pressure, dissolved)
    by_flows = h.gas + (h.oil - h.gas) @ moved.oil_by_flows
    by_temperature = float((h.oil - h.gas) @ moved.oil_by_temperature)
    if some(found.water):
        by_flows += (h.water - h.gas) @ moved.water_by_flows
        by_temperature += float((h.water - h.gas) @ moved.water_by_temperature)
    return EnthalpySlopes(by_flows, h.heat_capacity + by_temperature)


def _last_step(
    matter: Matter,
    trial: Phases,
    step: float,
    pressure: float,
    enthalpy: float,
    dissolved: tuple[str, ...],
) -> Phases | None:
    """Return a gas moved by the last small step, or None if it is wet before or after it."""
    temperature = trial.temperature + step
    if some(trial.water) or some(trial.oil):
        return None
    if not LOWEST_TEMPERATURE <= temperature <= HIGHEST_TEMPERATURE:
        return None
    if any_liquid(matter, trial.gas, temperature, pressure, dissolved):
        return None
    return Phases(trial.gas, trial.water, trial.oil, temperature, enthalpy)


def _between(
    ends: dict[bool, Phases], trial: Phases, flows: Array, enthalpy: float, pressure: float
) -> Phases:
    """Meet the enthalpy between two trials at one temperature, to round-off or a boiling.

    All states at one temperature and pressure are in equilibrium with each other, so anything in
    between is one too.
    """
    nearest = list(ends.values())
    apart = abs(nearest[0].temperature - nearest[-1].temperature)
    if len(nearest) < 2 or apart > _SAME_TEMPERATURE:
        scale = abs(enthalpy) + GAS_CONSTANT * trial.temperature * float(flows.sum())
        if abs(trial.enthalpy - enthalpy) > 1e-10 * scale:
            raise StateError(liquefaction(trial.temperature, pressure))
        return trial._replace(enthalpy=enthalpy)
    below, above = ends[False], ends[True]
    share = (enthalpy - below.enthalpy) / (above.enthalpy - below.enthalpy)
    water = below.water + share * (above.water - below.water)
    oil = below.oil + share * (above.oil - below.oil)
    gas = (flows - water - oil).clip(0.0)
    return Phases(gas, water, oil, below.temperature, enthalpy)


def _close_by_boiling(matter: Matter, trial: Phases, pressure: float, enthalpy: float) -> Phases:
    """Meet the enthalpy by moving water between the phases at constant temperature.

    For a temperature found to round-off this moves a trace; where the enthalpy jumps because
    water boils it is the boiling itself. Any other jump is a gas that would liquefy.
    """
    gas, water, oil, temperature, found = trial
    missing, place = enthalpy - found, matter.water
    wet = temperature <= CRITICAL_TEMPERATURE + 1e-6
    if place is not None and wet and float(gas[place] + water[place]) > 0.0:
        temperature = min(temperature, CRITICAL_TEMPERATURE)
        vapour = matter.gas_partial(gas, temperature, pressure).enthalpy
        liquid = matter.water_partial(temperature, pressure, ("H2O",)).enthalpy
        latent = float(vapour[place] - liquid[place])
        moved = min(max(missing / latent, -float(gas[place])), float(water[place]))
        change = np.zeros(len(gas))
        change[place] = moved
        gas, water, missing = gas + change, water - change, missing - moved * latent
    scale = abs(enthalpy) + GAS_CONSTANT * temperature * float((gas + water).sum())
    if abs(missing) > 1e-10 * scale:
        raise StateError(liquefaction(temperature, pressure))
    return Phases(gas, water, oil, temperature, enthalpy)


def _no_such_enthalpy(flows: Array, enthalpy: float, pressure: float) -> StateError:
    per_mol = enthalpy / float(flows.sum())
    side = "below" if per_mol < 0.0 else "outside"
    return StateError(
        f"no temperature from {LOWEST_TEMPERATURE:g} to {HIGHEST_TEMPERATURE:g} K gives an "
        f"enthalpy of {per_mol:.6g} J/mol at {pressure:g} Pa: the heat added or taken away is "
        f"{side} what the data describe"
    )


def phase_slopes(
    matter: Matter,
    found: Split,
    temperature: float,
    pressure: float,
    dissolved: tuple[str, ...],
) -> EnthalpySlopes:
    """Return the slopes of the enthalpy of phases that stay in equilibrium."""
    gas, water, oil = found
    if some(oil):
        return _slopes_with_oil(matter, found, temperature, pressure, dissolved)
    vapour = matter.gas_partial(gas, temperature, pressure)
    if not some(water):
        return EnthalpySlopes(vapour.enthalpy, vapour.heat_capacity)
    names = matter.solubles(dissolved).names
    liquid = matter.water_partial(temperature, pressure, names).enthalpy
    moved = split_slopes(matter, gas + water, gas, water, temperature, pressure, dissolved)
    condensation = liquid - vapour.enthalpy  # where nothing moves, the split has no slope
    own = vapour.heat_capacity + matter.water_heat_capacity(water, temperature, pressure)
    by_temperature = own + float(condensation @ moved.by_temperature)
    return EnthalpySlopes(vapour.enthalpy + condensation @ moved.by_flows, by_temperature)


__all__ = [
    "Split",
    "any_liquid",
    "split_at",
    "EnthalpySlopes",
    "Phases",
    "find_phases",
    "phase_slopes",
    "phases_at",
]

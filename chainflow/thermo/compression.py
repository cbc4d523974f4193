"""How hot does a real gas get, and how much work does it take, when its pressure changes?

Isentropic changes of one case, flows (components,) [mol/s], [K], [Pa], [W]; work is positive into
the gas. The gas stays a gas; the real-gas entropy is that of `Matter`.
"""

from math import exp, isfinite
from typing import NamedTuple

from chainflow.basis.constants import GAS_CONSTANT
from chainflow.thermo.components import Array, Matter
from chainflow.thermo.search import Bracket
from chainflow.thermo.validity import StateError, require_state

LAST_STEP = 1e-6  # relative: the next error is below round-off


class Isentropic(NamedTuple):
    """End of an isentropic change: temperature [K], work [W], and the enthalpy at its start [W]."""

    temperature: float
    work: float
    start: float


class IsentropicSlopes(NamedTuple):
    """Slopes of the end temperature [K] and the work [W] by what goes in."""

    temperature_by_flows: Array
    temperature_by_start: float
    work_by_flows: Array
    work_by_start: float


def isentropic_temperature(
    matter: Matter, flows: Array, temperature: float, pressure: float, end_pressure: float
) -> float:
    """Return the temperature [K] of a gas after an isentropic change of pressure.

    Without flow it is the temperature at the start. Raises `StateError` if it leaves the data.
    """
    return isentropic(matter, flows, temperature, pressure, end_pressure).temperature


def isentropic_work(
    matter: Matter, flows: Array, temperature: float, pressure: float, end_pressure: float
) -> float:
    """Return the work of an isentropic change of pressure [W]; negative for an expansion."""
    return isentropic(matter, flows, temperature, pressure, end_pressure).work


def isentropic(
    matter: Matter, flows: Array, temperature: float, pressure: float, end_pressure: float
) -> Isentropic:
    """Return the end temperature [K] and the work [W] of an isentropic change of pressure."""
    require_state(temperature, end_pressure)
    start = matter.gas_state(flows, temperature, pressure)
    if start.heat_capacity == 0.0:
        return Isentropic(temperature, 0.0, start.enthalpy)
    bracket = Bracket()
    exponent = GAS_CONSTANT * float(flows.sum()) / start.heat_capacity
    trial = bracket.clip(temperature * (end_pressure / pressure) ** exponent)
    for _ in range(200):
        found = matter.gas_state(flows, trial, end_pressure)
        excess = found.entropy - start.entropy
        ratio = exp(min(max(-excess / found.heat_capacity, -1.0), 1.0))
        if abs(ratio - 1.0) < LAST_STEP or bracket.empty:
            return _end(trial, ratio, found.enthalpy, found.heat_capacity, start.enthalpy)
        if bracket.outside(trial, excess) or not isfinite(ratio):
            break
        trial = bracket.next_trial(trial, excess, trial * (ratio - 1.0))
    raise StateError(
        f"isentropic change from {temperature:g} K, {pressure:g} Pa to {end_pressure:g} Pa ends "
        f"outside {bracket.lowest:g} to {bracket.highest:g} K: "
        "take more stages, or change the temperature it starts from"
    )


def _end(trial: float, ratio: float, enthalpy: float, capacity: float, start: float) -> Isentropic:
    """Take the last step; the enthalpy follows it to second order."""
    end = trial * ratio
    return Isentropic(end, enthalpy + capacity * (end - trial) - start, start)


def isentropic_slopes(
    matter: Matter,
    flows: Array,
    temperature: float,
    pressure: float,
    end_pressure: float,
    end_temperature: float,
) -> IsentropicSlopes:
    """Return how the end of an isentropic change answers to flows and to the temperature at start.

    From ``S(n, T2, p2) = S(n, T1, p1)`` and ``W = H2 - H1``, by partial molar properties.
    """
    first = matter.gas_partial(flows, temperature, pressure)
    last = matter.gas_partial(flows, end_temperature, end_pressure)
    if last.heat_capacity == 0.0:
        return IsentropicSlopes(last.entropy * 0.0, 1.0, last.enthalpy - first.enthalpy, 0.0)
    by_flows = (first.entropy - last.entropy) * (end_temperature / last.heat_capacity)
    by_start = first.heat_capacity / temperature * end_temperature / last.heat_capacity
    return IsentropicSlopes(
        by_flows,
        by_start,
        last.enthalpy - first.enthalpy + last.heat_capacity * by_flows,
        last.heat_capacity * by_start - first.heat_capacity,
    )

"""How far a Newton step may go: no negative flow, no nonsense temperature.

A flow that would go below zero is set to 0.05 of its old value and takes its enthalpy along; then
the temperature moves at most 400 K and stays inside the species data.  No flow grows in one step
far beyond all that flows in the plant: where an inventory has almost no way out until it condenses
the slopes of the dry side ask for that.
"""

from __future__ import annotations

import numpy as np

from chainflow.equipment.ports import Flow
from chainflow.flowsheet.network import Hold
from chainflow.solver.variables import Variable
from chainflow.thermo.components import Matter
from chainflow.thermo.streams import Stream
from chainflow.thermo.validity import StateError

_KEPT = 0.05
_ROUND_OFF = 1e-9  # of a flow's old value
_LARGEST_CHANGE = 400.0  # [K]
_SETTING_STEP = 0.3  # of its range


def damped(
    variable: Variable,
    old: Flow,
    change: np.ndarray,
    matter: Matter,
    hold: Hold | None,
    most: float,
) -> Flow:
    """The value after a step, held back where it would leave what is possible.

    `most` [mol/s] is what a flow may grow to.
    """
    if variable.form == "matter":
        assert isinstance(old, Stream)
        return _damped_stream(variable, old, change, matter, most)
    numbers = variable.pack(old)
    wanted = numbers + change
    if hold is not None:
        span = hold.high - hold.low
        step = max(-_SETTING_STEP * span, min(_SETTING_STEP * span, float(change[0])))
        return float(min(max(numbers[0] + step, hold.low), hold.high))
    if wanted[0] < 0.0:
        wanted[0] = _KEPT * max(numbers[0], 0.0)
    elif variable.content == "material":  # an amount that is asked
        wanted[0] = min(wanted[0], max(numbers[0], most))
    return variable.unpack(wanted, matter)


def _damped_stream(
    variable: Variable, old: Stream, change: np.ndarray, matter: Matter, most: float
) -> Stream:
    assert variable.places is not None
    flows_before = old.flows[variable.places]
    wanted = flows_before + change[:-1]
    wanted[np.abs(wanted) <= _ROUND_OFF * flows_before] = 0.0  # a flow that goes to nothing
    below, beyond = wanted < 0.0, wanted > np.maximum(flows_before, most)
    flows_after = np.where(below, _KEPT * flows_before, wanted)
    flows_after[beyond] = np.maximum(flows_before, most)[beyond]
    enthalpy = float(old.enthalpy) + float(change[-1])
    level = float(old.temperature)
    if below.any() or beyond.any():
        added = np.zeros(len(matter.components))
        added[variable.places] = flows_after - wanted
        enthalpy += float(matter.ideal_enthalpies(level) @ added)
    flows = np.zeros(len(matter.components))
    flows[variable.places] = flows_after
    return _within_reach(flows, enthalpy, variable.pressure, level, matter)


def _within_reach(
    flows: np.ndarray, enthalpy: float, pressure: float, level: float, matter: Matter
) -> Stream:
    """The stream of that enthalpy, or at the nearest temperature that may be reached."""
    if not flows.any():
        return Stream.empty(matter, level, pressure)
    low, high = matter.temperature_range
    cold, hot = max(level - _LARGEST_CHANGE, low), min(level + _LARGEST_CHANGE, high)
    try:
        stream = Stream.from_enthalpy(matter, flows, enthalpy, pressure, level)
        if cold <= float(stream.temperature) <= hot:
            return stream
        return Stream.at(matter, flows, hot if float(stream.temperature) > hot else cold, pressure)
    except StateError:
        middle = Stream.at(matter, flows, min(max(level, cold), hot), pressure)
        return Stream.at(
            matter, flows, hot if enthalpy > float(middle.enthalpy) else cold, pressure
        )

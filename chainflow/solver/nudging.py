"""By how much is a number of a solved flowsheet nudged, and what is the nudged state?

Central differences with these steps have an error of the square of the step, and of round-off over
it.  SI throughout.
"""

from __future__ import annotations

import numpy as np

from chainflow.flowsheet.movable import Lever
from chainflow.solver.variables import ENTHALPY_SCALE, Variable
from chainflow.thermo.stream_slopes import enthalpy_slopes
from chainflow.thermo.streams import Stream

_STEP = 1e-5  # relative step of differences; central, so the error is its square
_TRACE_STEP = 3e-3  # of a trace
_REST_STEP = 1e-3  # of what a share leaves
_CHORDS = 3  # steps to the temperature of a nudged gas; each gains five digits
_BENT = 1e-2  # relative difference of two slopes that is no curvature
_NOISE = 1e-12  # of an outcome


def condenses(before: Stream, after: Stream) -> bool:
    """Whether a gas at its dew point lets something fall when it is nudged."""
    liquid = float(after.water.sum() + after.liquid.sum())
    return liquid > 0.0 and not before.water.any() and not before.liquid.any()


def still_gas(before: Stream, after: Stream) -> Stream:
    """The nudged stream without what falls, at its own flows, enthalpy and pressure.

    A gas that leaves a condenser stands on the kink between two branches.  Both describe how it
    moves along its dew line; all its derivatives have to be of the same one.
    """
    matter, flows, pressure = after.matter, after.flows, float(after.pressure)
    level, capacity = float(before.temperature), enthalpy_slopes(before)[1]
    for _ in range(_CHORDS):
        missing = float(after.enthalpy) - matter.gas_enthalpy(flows, level, pressure)
        level += missing / capacity
    return Stream.gaseous(matter, flows, level, pressure)


def step_of(variable: Variable, base: np.ndarray, column: int) -> float:
    """A small step of one number; a trace moves by a part of itself."""
    if variable.form == "matter":
        total = float(base[:-1].sum())
        if column == variable.size - 1:
            return _STEP * total * ENTHALPY_SCALE
        trace = _TRACE_STEP * float(base[column])
        return min(_STEP * total, trace) if trace > 0.0 else _STEP * total
    return _STEP * (abs(float(base[column])) or 1.0)


def is_bent(low: np.ndarray, still: np.ndarray, high: np.ndarray) -> bool:
    """Whether an outcome has one slope before a place and another behind it."""
    before, behind = still - low, high - still
    uneven = np.abs(behind - before)
    larger = np.maximum(np.abs(before), np.abs(behind))
    return bool(((uneven > _BENT * larger) & (uneven > _NOISE * np.abs(still))).any())


def lever_step(lever: Lever) -> float:
    """A small step of a setting; a share close to one moves by a part of what it leaves."""
    step = _STEP * (abs(lever.value) or size_of(lever.unit))
    if lever.unit == "1" and 0.5 < lever.value < 1.0:
        return min(step, _REST_STEP * (1.0 - lever.value))
    return step


def size_of(unit: str) -> float:
    """What counts as a usual size of a setting that stands at zero, in its SI unit."""
    return {"Pa": 1e5, "J/mol": 1e4, "J/kg": 1e6, "W": 1e3}.get(unit, 1.0)

"""How much heat can pass from hot to cold streams that flow against each other?

With Q the heat that passes, and a hot side that must stay `approach` above the cold side at every
place, the heat that the hot side gives above a temperature T and the heat that the cold side takes
below T - approach add up to at least Q: ``Q <= G(T)`` for every T, and the largest heat is the
least G.  It lies at an end of the exchanger, where a phase change begins (dew of the hot side,
boiling of the cold side), or where the heat capacities cross; the last is found by a golden-section
search between the neighbours of the best point of a grid.

The least ratio of the same kind of function gives the amount of steam a hot side can raise.

Enthalpies [W], temperatures [K].
"""

from __future__ import annotations

from collections.abc import Callable, Iterable

import numpy as np

from chainflow.thermo.dew import dew_temperature
from chainflow.thermo.streams import Stream
from chainflow.thermo.water import CRITICAL_PRESSURE, saturation_temperature

GRID = 6  # even points besides the kinks
_GOLDEN = 0.6180339887498949
_JUST = 1e-10  # relative distance below a boiling point

Curve = Callable[[float], float]  # enthalpy [W] of a side at a temperature [K]


def stream_curve(stream: Stream, pressure: float) -> Curve:
    """Return the enthalpy of a stream's flows at any temperature, phases found."""
    matter, flows = stream.matter, stream.flows
    return lambda temperature: float(Stream.at(matter, flows, temperature, pressure).enthalpy)


def hot_kinks(stream: Stream, pressure: float) -> list[float]:
    """Return where a stream that cools begins to condense."""
    if _pure_water(stream) and pressure < CRITICAL_PRESSURE:
        return [saturation_temperature(pressure)]
    dew = dew_temperature(stream.matter, stream.flows, pressure)
    return [] if dew is None else [dew]


def cold_kinks(stream: Stream, pressure: float) -> list[float]:
    """Return where a stream that warms begins to boil, just before it does."""
    if _pure_water(stream) and pressure < CRITICAL_PRESSURE:
        return [saturation_temperature(pressure) * (1.0 - _JUST)]
    dew = dew_temperature(stream.matter, stream.flows, pressure)
    return [] if dew is None else [dew]


def _pure_water(stream: Stream) -> bool:
    place = stream.matter.water
    return place is not None and float(stream.flows[place]) == float(stream.total) > 0.0


def least_on(
    function: Callable[[float], float], low: float, high: float, kinks: Iterable[float]
) -> tuple[float, float]:
    """Return where a function of temperature is least between two ends, and its value there."""
    fixed = sorted({low, high, *(t for t in kinks if low < t < high)})
    grid = np.linspace(low, high, GRID + 2)[1:-1]
    points = sorted({*fixed, *(float(t) for t in grid)})
    values = [function(t) for t in points]
    best = int(np.argmin(values))
    if points[best] in fixed:
        return points[best], values[best]
    return _golden(function, points[best - 1], points[best + 1], (points[best], values[best]))


def _golden(
    function: Callable[[float], float], low: float, high: float, known: tuple[float, float]
) -> tuple[float, float]:
    best, value = known
    a, b = low, high
    c, d = b - _GOLDEN * (b - a), a + _GOLDEN * (b - a)
    at_c, at_d = function(c), function(d)
    while b - a > 1e-7 * high:
        if at_c < at_d:
            b, d, at_d = d, c, at_c
            c = b - _GOLDEN * (b - a)
            at_c = function(c)
        else:
            a, c, at_c = c, d, at_d
            d = a + _GOLDEN * (b - a)
            at_d = function(d)
    for point, at in ((c, at_c), (d, at_d)):
        if at < value:
            best, value = point, at
    return best, value

"""At which temperature does a flow begin to condense water or oil, or liquid water begin to boil?

One case: flows (components,) [mol/s], temperature [K], pressure [Pa]; the same ideal laws as in
`chainflow.thermo.water` and `chainflow.thermo.three_phases`, solved to round-off so that what
hangs on it is smooth.
"""

from __future__ import annotations

from collections.abc import Callable
from math import log

import numpy as np

from chainflow.thermo.components import Array, Matter
from chainflow.thermo.species import HIGHEST_TEMPERATURE, LOWEST_TEMPERATURE
from chainflow.thermo.water import (
    CRITICAL_TEMPERATURE,
    distribution,
    log_henry_constant,
    log_saturation_pressure,
)

_MOST_STEPS = 100


def dew_temperature(
    matter: Matter,
    flows: Array,
    pressure: float,
    dissolved: tuple[str, ...] = ("CO2",),
) -> float | None:
    """Return the temperature [K] below which liquid water forms, None if there is none.

    ``sum(z_i / K_i) = 1`` over water and the dissolved gases.  None without water, for a gas
    that is dry down to the lowest temperature of the data, and for one that is wet up to the
    critical temperature.
    """
    if matter.water is None or float(flows[matter.water]) <= 0.0:
        return None
    places, names = matter.solubles(dissolved)
    total = float(flows.sum())
    shares = [float(flows[i]) / total for i in places]

    def excess(temperature: float) -> tuple[float, float]:
        parts = [
            z / k for z, k in zip(shares, distribution(names, temperature, pressure), strict=True)
        ]
        slopes = [log_saturation_pressure(temperature).first]
        slopes += [log_henry_constant(name, temperature).first for name in names[1:]]
        whole = sum(parts)
        return log(whole), -sum(p * s for p, s in zip(parts, slopes, strict=True)) / whole

    return _root(excess, LOWEST_TEMPERATURE, CRITICAL_TEMPERATURE - 1e-6, 350.0)


def oil_dew_temperature(matter: Matter, flows: Array, pressure: float) -> float | None:
    """Return the temperature [K] below which oil forms from a gas, None if there is none.

    ``sum(z_i / K_i) = 1`` over the hydrocarbons.  None without any, and for a gas from which none
    or always some condenses within the range of the data.
    """
    oil = matter.oil
    if oil is None or not flows[oil.places].any():
        return None
    shares = flows[oil.places] / float(flows.sum())

    def excess(temperature: float) -> tuple[float, float]:
        pressures = oil.find_log_pressures(temperature)
        parts = shares * pressures.inverse
        whole = float(parts.sum())
        return log(whole * pressure), -float(parts @ pressures.slope) / whole

    return _root(excess, LOWEST_TEMPERATURE, HIGHEST_TEMPERATURE, 450.0)


def _root(
    excess: Callable[[float], tuple[float, float]], low: float, high: float, start: float
) -> float | None:
    """Return where a falling function of temperature is zero, None if that is not between."""
    if excess(low)[0] <= 0.0 or excess(high)[0] >= 0.0:
        return None
    level = start
    for _ in range(_MOST_STEPS):
        value, slope = excess(level)
        low, high = (level, high) if value > 0.0 else (low, level)
        better = level - value / slope if slope < 0.0 else 0.5 * (low + high)
        if not low < better < high:
            better = 0.5 * (low + high)
        if abs(better - level) <= 1e-13 * level:
            return better
        level = better
    return level


def dew_slopes(
    matter: Matter,
    flows: Array,
    dew: float,
    pressure: float,
    dissolved: tuple[str, ...] = ("CO2",),
) -> Array:
    """Return the slopes of the dew temperature by the flows [K s/mol], shape (components,)."""
    places, names = matter.solubles(dissolved)
    ratios = distribution(names, dew, pressure)
    total = float(flows.sum())
    heated = [log_saturation_pressure(dew).first]
    heated += [log_henry_constant(name, dew).first for name in names[1:]]
    by_level = 0.0
    by_flows = np.full(len(flows), -1.0 / total)
    for place, ratio, slope in zip(places, ratios, heated, strict=True):
        by_flows[place] += 1.0 / (ratio * total)
        by_level += float(flows[place]) / (ratio * total) * slope
    return by_flows / by_level


def oil_dew_slopes(matter: Matter, flows: Array, dew: float, pressure: float) -> Array:
    """Return the slopes of the oil's dew temperature by the flows [K s/mol], (components,)."""
    oil = matter.oil
    assert oil is not None
    total = float(flows.sum())
    pressures = oil.find_log_pressures(dew)
    parts = pressures.inverse * (pressure / total)
    by_flows = np.full(len(flows), -1.0 / total)
    by_flows[oil.places] += parts
    return by_flows / float((flows[oil.places] * parts) @ pressures.slope)

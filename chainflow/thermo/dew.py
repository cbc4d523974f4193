"""At which temperature does a flow begin to condense water, or liquid water begin to boil?

One case: flows (components,) [mol/s], temperature [K], pressure [Pa]; the same ideal laws as in
`chainflow.thermo.water`, solved to round-off so that what hangs on it is smooth.
"""

from __future__ import annotations

from math import log

import numpy as np

from chainflow.thermo.components import Array, Matter
from chainflow.thermo.species import LOWEST_TEMPERATURE
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

    low, high = LOWEST_TEMPERATURE, CRITICAL_TEMPERATURE - 1e-6
    if excess(low)[0] <= 0.0 or excess(high)[0] >= 0.0:
        return None
    level = 350.0
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

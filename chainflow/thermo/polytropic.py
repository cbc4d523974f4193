"""How hot does a real gas get in a compression of constant polytropic efficiency?

Along the path ``dh = v dp / efficiency``, so ``dT / d ln p = p v (1 / efficiency - 1 + T a) / cp``
with the thermal expansion a = (dv/dT)_p / v.  Integrated with the classical Runge-Kutta steps in
ln p; with the number of steps below the temperature rise of a stage of ratio 4 is good to 1e-6.
One case, flows (components,) [mol/s], [K], [Pa].
"""

from __future__ import annotations

from math import ceil, exp, log

from chainflow.thermo.components import Array, Matter

_STEP = 0.35  # largest step in ln p


def polytropic_temperature(
    matter: Matter,
    flows: Array,
    temperature: float,
    pressure: float,
    end_pressure: float,
    efficiency: float,
) -> float:
    """Return the temperature [K] after a compression of constant polytropic efficiency.

    Without flow it is the temperature at the start.
    """
    if not flows.any():
        return temperature
    whole = log(end_pressure / pressure)
    count = max(1, ceil(abs(whole) / _STEP))
    step, level, place = whole / count, temperature, log(pressure)

    def slope(at: float, logarithm: float) -> float:
        volume, expansion, capacity = matter.gas_expansion(flows, at, exp(logarithm))
        work = exp(logarithm) * volume * (1.0 / efficiency - 1.0 + at * expansion)
        return work / capacity

    for _ in range(count):
        first = slope(level, place)
        second = slope(level + 0.5 * step * first, place + 0.5 * step)
        third = slope(level + 0.5 * step * second, place + 0.5 * step)
        fourth = slope(level + step * third, place + step)
        level += step * (first + 2.0 * second + 2.0 * third + fourth) / 6.0
        place += step
    return level

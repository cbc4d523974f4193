"""Which pressures between the stages of a compressor take the least work?

The work of isentropic stages whose suction temperatures are given is least where for every pressure
between two stages ``dW_k/dp + dW_(k+1)/dp = 0``, that is (real gas, per mol)
``v(T_discharge, p) = v + (T_discharge' - T) (dv/dT)_p`` with the right side at the suction of the
next stage and T' its own isentropic discharge.  With an ideal gas and one suction temperature that
gives equal ratios.  What condenses between stages is left out of the search: it moves the best
pressures a little and the work to second order.  Pressures [Pa], temperatures [K].
"""

from __future__ import annotations

from math import exp, log

import numpy as np

from chainflow.basis.constants import GAS_CONSTANT
from chainflow.thermo.components import Array, Matter
from chainflow.thermo.compression import isentropic_temperature

_MOST_STEPS = 40
_SETTLED = 1e-11  # of ln p


def least_work_pressures(
    matter: Matter, gas: Array, suctions: list[float], low: float, high: float
) -> list[float]:
    """Return all pressures from the inlet to the outlet, one more than there are stages."""
    count = len(suctions)
    logs = np.linspace(log(low), log(high), count + 1)
    if count == 1 or not gas.any() or high <= low:
        return [float(np.exp(x)) for x in logs]
    one = gas / float(gas.sum())
    gradient, hessian = _gradient(matter, one, suctions, logs)
    for _ in range(_MOST_STEPS):
        wanted = np.linalg.solve(hessian, -gradient)
        step = np.clip(wanted, -0.5, 0.5)
        logs[1:-1] += step
        if np.abs(wanted).max() < _SETTLED:
            break
        before = gradient
        gradient, _ = _gradient(matter, one, suctions, logs)
        # the ideal gas's slopes are nearly right; each step corrects them along itself (Broyden)
        hessian = hessian + np.outer(gradient - before - hessian @ step, step) / (step @ step)
    return [low, *(exp(float(x)) for x in logs[1:-1]), high]


def _gradient(
    matter: Matter, gas: Array, suctions: list[float], logs: Array
) -> tuple[Array, Array]:
    """Slopes of the work per mol by ln p between the stages, and the ideal gas's second slopes."""
    pressures = [exp(float(x)) for x in logs]
    count = len(suctions)
    ends = [
        isentropic_temperature(matter, gas, suctions[k], pressures[k], pressures[k + 1])
        for k in range(count)
    ]
    gradient = np.zeros(count - 1)
    hessian = np.zeros((count - 1, count - 1))
    for k in range(count - 1):
        level = pressures[k + 1]
        out = matter.gas_expansion(gas, ends[k], level)[0]
        volume, expansion, capacity = matter.gas_expansion(gas, suctions[k + 1], level)
        rise = 1.0 + (ends[k + 1] - suctions[k + 1]) * expansion
        gradient[k] = level * (out - volume * rise)
        exponent = GAS_CONSTANT / capacity
        hessian[k, k] = exponent * GAS_CONSTANT * (ends[k] + ends[k + 1])
        if k + 1 < count - 1:
            hessian[k, k + 1] = hessian[k + 1, k] = -exponent * GAS_CONSTANT * ends[k + 1]
    return gradient, hessian

"""What grows with an amount, and what does not: flows and heat do, temperatures do not."""

from __future__ import annotations

import numpy as np

from chainflow.equipment.ports import Flow, Heat, Light, rate_of
from chainflow.solver.variables import HEAT_NUMBERS, Variable, heat_numbers
from chainflow.thermo.streams import Stream


def scaling(value: Flow, variable: Variable | None = None) -> np.ndarray:
    """What grows with the amount, over all components: flows and enthalpy, heat, no temperature."""
    if isinstance(value, Stream):
        return variable.pack(value) if variable else np.append(value.flows, value.enthalpy)
    if isinstance(value, Heat):
        numbers = heat_numbers(value)
        return np.where(np.arange(len(numbers)) % HEAT_NUMBERS == 0, numbers, 0.0)
    states = 4 if isinstance(value, Light) else 0
    return np.array([rate_of(value), *[0.0] * states])


def scaled_rows(value: Flow, factor: float) -> np.ndarray:
    """What the slopes of each number of a flow of one mol count: temperatures do not grow."""
    if isinstance(value, Light):
        return np.array([[factor], *[[1.0]] * 4])
    if not isinstance(value, Heat):
        return np.array([[factor]])
    rows = np.ones((HEAT_NUMBERS * len(value.pieces), 1))
    rows[::HEAT_NUMBERS] = factor
    return rows


def added(amounts: list[Flow]) -> Heat | float:
    """All amounts asked at one outlet."""
    heats = [a for a in amounts if isinstance(a, Heat)]
    return Heat.total(heats) if heats else sum(rate_of(a) for a in amounts)

"""The heat cascade: how much of the needs can be met by heat that is hot enough.

A plain function of heat flows [W] between temperatures [K], the problem table of Linnhoff and
Flower, AIChE J. 24 (1978) 633: heat falls from interval to interval; where more has been needed
than given so far, heat from outside is missing.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from chainflow.equipment.ports import Heat, mean_temperature


@dataclass(frozen=True, slots=True)
class Cascade:
    """Result of a heat cascade; temperatures are shifted by half the approach."""

    hot_utility: float  # least heat from outside [W]
    cold_utility: float  # heat left over [W]
    pinch: float | None  # shifted temperature where the cascade is empty [K]
    levels: np.ndarray  # shifted temperatures, falling, shape (n,) [K]
    flow: np.ndarray  # heat that falls past each level with the hot utility, shape (n,) [W]
    rest: Heat | None  # what is left over, as one flow


def cascade(given: Sequence[Heat], needed: Sequence[Heat], approach: float = 0.0) -> Cascade:
    """Let the heat of `given` fall onto `needed`; rates positive [W], approach [K]."""
    shift = 0.5 * approach
    sources = [(max(h.start, h.end) - shift, min(h.start, h.end) - shift, h.rate) for h in given]
    sinks = [(max(h.start, h.end) + shift, min(h.start, h.end) + shift, h.rate) for h in needed]
    levels = np.array(
        sorted({t for hot, cold, _ in (*sources, *sinks) for t in (hot, cold)}, reverse=True)
    )
    if levels.size == 0:
        return Cascade(0.0, 0.0, None, levels, levels, None)
    supply = _by_interval(sources, levels)
    demand = _by_interval(sinks, levels)
    flow = np.cumsum(supply - demand)
    least = max(0.0, -float(flow.min()))
    at_level = np.maximum(least + flow, 0.0)[::2]  # just past each level's own (isothermal) heat
    between = least + np.concatenate([[0.0], flow[1::2]])
    falling = np.minimum(at_level, between)
    pinch = float(levels[int(np.argmin(falling))]) if falling.size else None
    rest = _left_over(supply, demand, levels)
    return Cascade(least, least + float(flow[-1]), pinch, levels, falling, rest)


def _by_interval(parts: Sequence[tuple[float, float, float]], levels: np.ndarray) -> np.ndarray:
    """Heat at each level (even index) and in the interval below it (odd index); shape (2n - 1,)."""
    heat = np.zeros(2 * len(levels) - 1)
    for hot, cold, rate in parts:
        if hot == cold:
            heat[2 * int(np.flatnonzero(levels == hot)[0])] += rate
            continue
        inside = (levels[:-1] <= hot) & (levels[1:] >= cold)
        heat[1::2] += np.where(inside, rate * (levels[:-1] - levels[1:]) / (hot - cold), 0.0)
    return heat


def _left_over(supply: np.ndarray, demand: np.ndarray, levels: np.ndarray) -> Heat | None:
    """What remains when each need, hottest first, takes the coldest heat that is hot enough."""
    left = supply.copy()
    for i, need in enumerate(demand):
        for j in range(i, -1, -1):
            used = min(need, left[j])
            left[j] -= used
            need -= used
    parts = []
    for k in np.flatnonzero(left > 0.0):
        start = levels[k // 2]
        end = levels[k // 2 + (k % 2)]
        parts.append(
            Heat(
                float(left[k]), float(start), float(end), mean_temperature(float(start), float(end))
            )
        )
    return Heat.total(parts) if parts else None

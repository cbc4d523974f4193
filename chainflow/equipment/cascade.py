"""The heat cascade: how much of the needs can be met by heat that is hot enough.

A plain function of heat flows [W] between temperatures [K], the problem table of Linnhoff and
Flower, AIChE J. 24 (1978) 633: heat given off is shifted down and heat needed is shifted up by half
the approach, then heat falls from interval to interval; where more has been needed than given so
far, heat from outside is missing.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from chainflow.equipment.heat_matching import SAME_LEVEL
from chainflow.equipment.ports import Heat

_NOTHING = 1e-12  # relative to all heat: round-off of the sums


@dataclass(frozen=True, slots=True)
class Cascade:
    """Result of a heat cascade; its levels are shifted by half the approach."""

    approach: float  # [K]
    hot_utility: float  # least heat from outside [W]
    cold_utility: float  # heat left over [W]
    pinch: float | None  # shifted temperature that no heat passes [K]; None if heat is enough
    levels: np.ndarray  # shifted temperatures, falling, shape (n,) [K]
    arriving: np.ndarray  # heat that reaches each level from above, hot utility included, (n,) [W]
    passing: np.ndarray  # heat that leaves it downwards, after heat of that very level, (n,) [W]

    @property
    def flow(self) -> np.ndarray:
        """The smaller of what reaches and what leaves each level, shape (n,) [W]."""
        return np.minimum(self.arriving, self.passing)

    @property
    def pinch_given(self) -> float | None:
        """Temperature of the heat given off at the pinch [K]."""
        return None if self.pinch is None else self.pinch + 0.5 * self.approach

    @property
    def pinch_needed(self) -> float | None:
        """Temperature of the heat needed at the pinch [K]."""
        return None if self.pinch is None else self.pinch - 0.5 * self.approach

    @property
    def grand_composite(self) -> list[tuple[float, float]]:
        """Points (heat [W], shifted temperature [K]) from the hottest level down."""
        points: list[tuple[float, float]] = []
        for level, above, below in zip(self.levels, self.arriving, self.passing, strict=True):
            points.append((float(above), float(level)))
            if below != above:
                points.append((float(below), float(level)))
        return points


def cascade(given: Sequence[Heat], needed: Sequence[Heat], approach: float = 0.0) -> Cascade:
    """Let the heat of `given` fall onto `needed`; rates positive [W], approach [K]."""
    half = 0.5 * approach
    sources = [(p.hottest - half, p.coldest - half, p.rate) for h in given for p in h.pieces]
    sinks = [(p.hottest + half, p.coldest + half, p.rate) for h in needed for p in h.pieces]
    levels = _levels([*sources, *sinks])
    if levels.size == 0:
        return Cascade(approach, 0.0, 0.0, None, levels, levels, levels)
    net = _by_interval(sources, levels) - _by_interval(sinks, levels)
    flow = np.cumsum(net)
    size = _NOTHING * sum(rate for _, _, rate in (*sources, *sinks))
    least = max(0.0, -float(flow.min()))
    least = least if least > size else 0.0
    arriving = np.maximum(least + np.concatenate([[0.0], flow[1::2]]), 0.0)
    passing = np.maximum(least + flow[::2], 0.0)
    smaller = np.minimum(arriving, passing)
    pinched = least > 0.0 and sources
    pinch = float(levels[int(np.argmin(smaller))]) if pinched else None
    return Cascade(approach, least, float(passing[-1]), pinch, levels, arriving, passing)


def composite(heats: Sequence[Heat]) -> list[tuple[float, float]]:
    """The composite curve: points (heat [W], temperature [K]), heat summed up from the coldest."""
    parts = [(p.hottest, p.coldest, p.rate) for h in heats for p in h.pieces if p.rate > 0.0]
    levels = _levels(parts)
    if levels.size == 0:
        return []
    heat = _by_interval(parts, levels)[::-1]  # from the coldest up: at a level, above it, ...
    total, points = 0.0, [(0.0, float(levels[-1]))]
    for place, amount in enumerate(heat):
        total += float(amount)
        between = place % 2 == 1
        if between or amount > 0.0:
            points.append((total, float(levels[::-1][(place + 1) // 2])))
    return points


def _levels(parts: Sequence[tuple[float, float, float]]) -> np.ndarray:
    """All temperatures, falling; those that are the same but for round-off once."""
    found: list[float] = []
    for level in sorted({t for hot, cold, _ in parts for t in (hot, cold)}, reverse=True):
        if not found or found[-1] - level > SAME_LEVEL:
            found.append(level)
    return np.array(found)


def _by_interval(parts: Sequence[tuple[float, float, float]], levels: np.ndarray) -> np.ndarray:
    """Heat at each level (even index) and in the interval below it (odd index); shape (2n - 1,)."""
    heat = np.zeros(2 * len(levels) - 1)
    for hot, cold, rate in parts:
        first, last = (int(np.abs(levels - end).argmin()) for end in (hot, cold))
        if first == last:
            heat[2 * first] += rate
            continue
        inside = levels[first : last + 1]
        heat[2 * first + 1 : 2 * last : 2] += (
            rate * (inside[:-1] - inside[1:]) / (inside[0] - inside[-1])
        )
    return heat

"""Holds inside a Newton step: the held settings move so that all held results are met at once.

A setting that changes nothing at its result, or that stands at an end of its range and wants
beyond, is set aside for this step.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from chainflow.equipment.ports import Flow, as_number
from chainflow.flowsheet.network import Hold
from chainflow.solver.linear import Linear

_NO_EFFECT = 1e-9  # relative change of a result over the whole range of its setting
_SMALLEST_SIZE = 1e-3  # of a result that is wanted and found at zero, in its SI unit


class Holding:
    """The holds that are solved for, each with the variables of its setting and its result."""

    def __init__(
        self, holds: Sequence[tuple[Hold, str, str]], places: Mapping[str, slice], size: int
    ) -> None:
        self.holds, self.places, self.size = list(holds), places, size
        self._largest: dict[str, float] = {}  # of each result that is held at zero, so far

    @property
    def results(self) -> list[str]:
        """The variables that are held."""
        return [result for _, _, result in self.holds]

    def step(
        self,
        linear: Linear,
        torn: Mapping[str, Flow],
        values: Mapping[str, Flow],
        change: np.ndarray,
        seen: np.ndarray,
    ) -> tuple[np.ndarray, dict[str, str]]:
        """The change with the settings moved along, and the settings set aside with why.

        Parameters
        ----------
        torn, values : torn variables before the pass, all variables after it.
        change, seen : the change of the torn numbers and of the results with the settings kept.
        """
        if not self.holds:
            return change, {}
        responses, effects = self._responses(linear)
        reached = [as_number(values[result]) for result in self.results]
        missing = np.array([hold.at for hold, _, _ in self.holds]) - reached - seen
        spans = np.array([hold.high - hold.low for hold, _, _ in self.holds])
        sizes = np.array([self._size(hold, result, values) for hold, _, result in self.holds])
        unable = np.abs(effects * spans).max(axis=1) < _NO_EFFECT * sizes
        steps, bound = self._steps(
            effects * spans / sizes[:, None], missing / sizes, spans, np.flatnonzero(~unable), torn
        )
        for step, response in zip(steps, responses, strict=True):
            change = change + step * response
        aside = {self.holds[i][1]: "unable" for i in np.flatnonzero(unable)}
        return change, aside | {self.holds[i][1]: "bound" for i in bound}

    def _responses(self, linear: Linear) -> tuple[list[np.ndarray], np.ndarray]:
        """What each setting moves: all torn numbers, and d result i / d setting j."""
        responses, effects = [], []
        for _, setting, _ in self.holds:
            unit = np.zeros(self.size)
            unit[self.places[setting]] = 1.0
            response, effect = linear.solve(unit)
            responses.append(response)
            effects.append(effect)
        return responses, np.array(effects).T

    def _steps(
        self,
        effects: np.ndarray,
        missing: np.ndarray,
        spans: np.ndarray,
        able: np.ndarray,
        torn: Mapping[str, Flow],
    ) -> tuple[np.ndarray, list[int]]:
        """Steps of the settings, and the holds whose setting is stopped by its range."""
        steps = np.zeros(len(self.holds))
        active, bound = [int(i) for i in able], list[int]()
        while active:
            found, *_ = np.linalg.lstsq(
                effects[np.ix_(active, active)], missing[active], rcond=1e-12
            )
            steps[:] = 0.0
            steps[active] = found * spans[active]
            out = [i for i in active if self._at_bound(i, steps[i], torn)]
            if not out:
                break
            bound += out
            active = [i for i in active if i not in out]
            steps[out] = 0.0
        return steps, bound

    def _at_bound(self, i: int, step: float, torn: Mapping[str, Flow]) -> bool:
        hold, setting, _ = self.holds[i]
        value = as_number(torn[setting])
        return (value <= hold.low and step < 0.0) or (value >= hold.high and step > 0.0)

    def shown(
        self, residual: np.ndarray, values: Mapping[str, Flow], aside: Mapping[str, str]
    ) -> np.ndarray:
        """Residual of the loops, with the misses of active holds in place of their settings."""
        shown = residual.copy()
        for hold, setting, result in self.holds:
            if setting not in aside:
                miss = self._miss(hold, result, values)
                shown[self.places[setting]] = miss * (hold.high - hold.low)
        return shown

    def misses(self, values: Mapping[str, Flow]) -> dict[str, float]:
        """How far each held result is from what is wanted, relative to its size."""
        return {result: self._miss(hold, result, values) for hold, _, result in self.holds}

    def _miss(self, hold: Hold, result: str, values: Mapping[str, Flow]) -> float:
        return (hold.at - as_number(values[result])) / self._size(hold, result, values)

    def _size(self, hold: Hold, result: str, values: Mapping[str, Flow]) -> float:
        """What counts as large for a held result: of one held at zero, the most it has been."""
        if hold.at != 0.0:
            return abs(hold.at)
        reached = abs(as_number(values[result]))
        largest = self._largest[result] = max(self._largest.get(result, 0.0), reached)
        return largest or (1.0 if hold.unit == "1" else _SMALLEST_SIZE)

"""How does the current of an illuminated electrode follow its potential?

SI throughout: potential [V] against the reversible hydrogen electrode, current density [A/m2] of
the electrode's own area, positive in the direction of splitting. A *driving* potential is the
potential of a photoanode, and its negative for a photocathode, so that every curve rises. Light
scales the current and leaves the potentials where they are.

The shape is our own: a logistic step from the onset to a plateau, with
``x = 1/(1 + exp(-(V - V_half)/s))`` it is ``J = J_sat (x - x_onset)/(1 - x_onset)`` and zero below
the onset; monotone and smooth. Measured points are joined by straight lines. Below the first of
them no current flows, beyond the last one it stays.
"""

from __future__ import annotations

from bisect import bisect_right
from dataclasses import dataclass
from math import exp, log
from typing import Protocol

_NEAR = 1e-9  # [V]


class ElectrodeCurve(Protocol):
    """An electrode in the light it gets."""

    @property
    def limit(self) -> float:
        """The current density that is not exceeded whatever the potential [A/m2]."""

    def drive(self, density: float) -> float:
        """The driving potential [V] at a current density below the limit."""

    def steepness(self, density: float) -> float:
        """Change of the driving potential by the current density [V m2/A]."""

    def stray(self, drive: float) -> str:
        """Say how a driving potential lies outside what was measured; empty if it does not."""


@dataclass(frozen=True, slots=True)
class ShapedElectrode:
    """A logistic step; onset and half-wave as driving potentials [V], rising."""

    onset: float
    half: float
    width: float
    limit: float  # plateau [A/m2]

    @property
    def _at_onset(self) -> float:
        return 1.0 / (1.0 + exp((self.half - self.onset) / self.width))

    def drive(self, density: float) -> float:
        """The driving potential [V]."""
        share = density / self.limit
        risen = self._at_onset + (1.0 - self._at_onset) * share
        left = (1.0 - self._at_onset) * (1.0 - share)
        return self.half + self.width * log(risen / left)

    def steepness(self, density: float) -> float:
        """Change of the driving potential by the current density [V m2/A]."""
        share = density / self.limit
        risen = self._at_onset + (1.0 - self._at_onset) * share
        left = (1.0 - self._at_onset) * (1.0 - share)
        return self.width * (1.0 - self._at_onset) / (self.limit * risen * left)

    def stray(self, drive: float) -> str:
        """The shape holds everywhere."""
        return ""


@dataclass(frozen=True, slots=True)
class MeasuredElectrode:
    """Points: driving potentials [V] rise, current densities [A/m2] do not fall."""

    drives: tuple[float, ...]
    densities: tuple[float, ...]  # as measured
    scale: float  # light per light it was measured in

    @property
    def limit(self) -> float:
        """The highest current density [A/m2]."""
        return self.scale * self.densities[-1]

    def drive(self, density: float) -> float:
        """The driving potential [V]; on a flat piece the one at its far end."""
        wanted = density / self.scale
        place = bisect_right(self.densities, wanted)
        if place == 0:
            return self.drives[0]
        if place == len(self.densities):
            return self.drives[-1]
        low, high = self.densities[place - 1], self.densities[place]
        share = (wanted - low) / (high - low)
        return self.drives[place - 1] + share * (self.drives[place] - self.drives[place - 1])

    def steepness(self, density: float) -> float:
        """Slope of the piece [V m2/A]; zero below the first point."""
        wanted = density / self.scale
        place = bisect_right(self.densities, wanted)
        if not 0 < place < len(self.densities):
            return 0.0
        rise = self.densities[place] - self.densities[place - 1]
        return (self.drives[place] - self.drives[place - 1]) / (rise * self.scale)

    def stray(self, drive: float) -> str:
        """Say on which side a driving potential lies outside the points."""
        if drive > self.drives[-1] + _NEAR:
            return "beyond the last measured potential: the last current goes on"
        flowing = self.densities[0] > 0.0
        if drive < self.drives[0] - _NEAR or (flowing and drive <= self.drives[0] + _NEAR):
            return "at or below the first measured potential, where a current flows already"
        return ""

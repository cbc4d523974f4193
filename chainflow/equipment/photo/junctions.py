"""Which voltage does a solar cell of one or more junctions give at a current?

SI throughout: current density [A/m2] of the device's aperture, voltage [V], temperature [K], gap
[J]. Each junction is one diode: ``J = J_light - J_0 (exp(u/(n kT/q)) - 1) - u/R_shunt`` with
``u = V + J R_series``. J_0 is the light sent out in the detailed balance over the external
radiative efficiency; for an ideality n other than one it is set so that the open-circuit voltage
in the whole light of the reference sun stays what it is. Several equal cells in series share the
area, so each carries the current of the whole.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import exp, inf, log1p
from typing import Protocol

_MOST_STEPS = 100


class Source(Protocol):
    """What gives a voltage that falls as the current rises."""

    @property
    def light(self) -> float:
        """The current density that its light makes [A/m2]."""

    @property
    def limit(self) -> float:
        """The current density that it does not exceed [A/m2]."""

    def voltage(self, density: float) -> float:
        """The voltage [V] at a current density up to the limit."""

    def steepness(self, density: float) -> float:
        """Change of the voltage by the current density [V m2/A]; never above zero."""

    def by_light(self, density: float) -> float:
        """Change of the voltage by the light current [V m2/A]."""

    def stray(self, density: float) -> str:
        """Say how a current lies outside what was measured; empty if it does not."""


@dataclass(frozen=True, slots=True)
class Junction:
    """A junction in its light."""

    light: float  # current density that light makes, of the device's aperture [A/m2]
    dark: float  # J_0, of the same area [A/m2]
    level: float  # n kT/q, times the number of cells in series [V]
    series: float  # [ohm m2]
    shunt: float = inf  # [ohm m2]

    @property
    def limit(self) -> float:
        """The current density at which it gives no voltage before its series resistance [A/m2]."""
        return self.light if self.shunt == inf else inf

    def voltage(self, density: float) -> float:
        """The voltage [V] at a current density up to the limit."""
        return self._inner(self.light - density) - density * self.series

    def steepness(self, density: float) -> float:
        """Change of the voltage by the current density [V m2/A]; never above zero."""
        return -self.by_light(density) - self.series

    def by_light(self, density: float) -> float:
        """Change of the voltage by the light current [V m2/A]."""
        if self.shunt == inf:
            return self.level / (self.light - density + self.dark)
        inner = self._inner(self.light - density)
        return 1.0 / (self.dark / self.level * exp(inner / self.level) + 1.0 / self.shunt)

    def stray(self, density: float) -> str:
        """The diode holds everywhere."""
        return ""

    def _inner(self, left: float) -> float:
        """The voltage of the diode that `left` of the light current passes through [V]."""
        if self.shunt == inf:
            return self.level * log1p(left / self.dark)
        if left <= 0.0:  # the diode blocks but for J_0, and its voltage is below zero
            return self._newton(left, 0.0)
        return self._newton(left, min(self.level * log1p(left / self.dark), left * self.shunt))

    def _newton(self, left: float, start: float) -> float:
        """Newton's method on a convex rising function, from above: no step passes the root."""
        inner = start
        for _ in range(_MOST_STEPS):
            grown = exp(min(inner / self.level, 700.0))
            excess = self.dark * (grown - 1.0) + inner / self.shunt - left
            step = excess / (self.dark * grown / self.level + 1.0 / self.shunt)
            inner -= step
            if abs(step) <= 1e-15 * (abs(inner) + self.level):
                break
        return inner

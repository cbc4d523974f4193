"""At which current do the curves of a photoelectrochemical device cross?

SI throughout: current density [A/m2] of the device's aperture, voltage [V], resistance [ohm m2].
Photoelectrode, solar cell, electrolyte and counter-electrode carry the same current. What is
*needed* rises with it: the photoelectrode's driving potential, the counter-electrode's
overpotential, the electrolyte's drop and, for a photocathode, the reversible voltage of the dark
anode. What the junctions *give* falls with it; a bias is added. Both are monotone, so the curves
cross once if more is given than needed without current, and else nowhere.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from math import asinh, log, sqrt

from chainflow.equipment.cells.losses import between
from chainflow.equipment.photo.electrode_curves import ElectrodeCurve
from chainflow.equipment.photo.junctions import Source

_STEP = 1e-7  # [V]; a crossing closes to less
_EDGE = 1e-12  # relative gap kept to the limiting current while a crossing is looked for


@dataclass(frozen=True, slots=True)
class Overpotential:
    """A dark electrode: ``b / ln 10 asinh(J / 2 J_0)``, Tafel's law at high currents."""

    slope: float  # b, volts per decade of current [V]
    exchange: float  # J_0 [A/m2]

    def voltage(self, density: float) -> float:
        """The overpotential [V]."""
        return self.slope / log(10.0) * asinh(density / (2.0 * self.exchange))

    def steepness(self, density: float) -> float:
        """Its change by the current density [V m2/A]."""
        scaled = density / (2.0 * self.exchange)
        return self.slope / log(10.0) / (2.0 * self.exchange * sqrt(1.0 + scaled * scaled))


@dataclass(frozen=True)
class Circuit:
    """A device in its light; the electrode has `part` of the aperture."""

    electrode: ElectrodeCurve
    part: float
    junctions: tuple[Source, ...]
    counter: Overpotential
    resistance: float
    base: float  # reversible voltage of a dark anode; zero with a photoanode [V]
    bias: float

    def given(self, density: float) -> float:
        """What junctions and bias give [V]."""
        return sum(one.voltage(density) for one in self.junctions) + self.bias

    def needed(self, density: float) -> float:
        """What the rest needs [V]."""
        return self._beside(density) + self.electrode.drive(density / self.part)

    def _beside(self, density: float) -> float:
        """What is needed beside the photoelectrode [V]."""
        return self.base + self.counter.voltage(density) + density * self.resistance

    @cached_property
    def limit(self) -> float:
        """The current density that no voltage exceeds [A/m2]."""
        return min([self.electrode.limit * self.part, *(one.limit for one in self.junctions)])

    @property
    def crosses(self) -> bool:
        """Whether there is a current at which both sides agree."""
        return self.limit > 0.0 and self.given(0.0) > self.needed(0.0)

    @cached_property
    def density(self) -> float:
        """The current density at which the curves cross, or zero [A/m2]."""
        if not self.crosses:
            return 0.0
        high = self.limit * (1.0 - _EDGE)
        excess = self._excess(high)
        if excess <= 0.0:  # a limiting element takes the voltage that is left over
            return high
        return between(self._excess, 0.0, self._excess(0.0), high, excess)

    @cached_property
    def at_limit(self) -> bool:
        """Whether an element is at its limiting current and takes what voltage is left."""
        return self.crosses and self._excess(self.limit * (1.0 - _EDGE)) <= 0.0

    def _excess(self, density: float) -> float:
        return self.needed(density) - self.given(density)

    @property
    def drive(self) -> float:
        """The photoelectrode's driving potential at the crossing [V]: what the others leave it.

        On a plateau the current does not tell it.
        """
        if self._cell_limits or not self.crosses:
            return self.electrode.drive(self.density / self.part)
        return self.given(self.density) - self._beside(self.density)

    def voltages(self) -> tuple[float, ...]:
        """The voltage of each junction at the crossing; a limiting one takes what is left over."""
        found = [one.voltage(self.density) for one in self.junctions]
        if self._cell_limits:
            place = min(range(len(found)), key=lambda i: self.junctions[i].limit)
            found[place] += self._excess(self.density)
        return tuple(found)

    @property
    def _cell_limits(self) -> bool:
        """Whether a junction is at its limiting current and takes what voltage is left."""
        return self.at_limit and self._tightest < self.electrode.limit * self.part

    @property
    def _on_step(self) -> bool:
        """Whether the crossing lies where the photoelectrode's current does not follow potential.

        That is a flat piece of a measured curve: only the light moves the current there.
        """
        return self.crosses and abs(self._excess(self.density)) > _STEP

    @property
    def _tightest(self) -> float:
        return min((one.limit for one in self.junctions), default=float("inf"))

    # --- how the crossing moves ------------------------------------------------------------------

    @property
    def steepness(self) -> float:
        """Change of needed less given voltage by the current density [V m2/A]."""
        density, part = self.density, self.part
        rising = self.electrode.steepness(density / part) / part
        rising += self.counter.steepness(density) + self.resistance
        return rising - sum(one.steepness(density) for one in self.junctions)

    @property
    def per_volt(self) -> float:
        """Change of the current density by a voltage given [A/(m2 V)]."""
        return 0.0 if self._on_step or not self.crosses else 1.0 / self.steepness

    @property
    def by_electrode(self) -> float:
        """Relative change of the current per relative change of the photoelectrode's current."""
        if not self.crosses:
            return 0.0
        if self._on_step:
            return 0.0 if self._cell_limits else 1.0
        return self.electrode.steepness(self.density / self.part) / self.part / self.steepness

    @property
    def by_cell(self) -> float:
        """Relative change of the current per relative change of the junctions' light currents."""
        if not self.crosses:
            return 0.0
        if self._on_step:
            return 1.0 if self._cell_limits else 0.0
        gained = sum(one.light * one.by_light(self.density) for one in self.junctions)
        return gained / self.density / self.steepness

"""What is the voltage of a cell made of, and how is a current found that meets a demand?

SI throughout: current density [A/m2], voltage [V], temperature [K]. Losses are positive in
electrolysers and in fuel cells alike; a cell adds them to the reversible voltage, or takes them
off.
"""

from __future__ import annotations

from collections.abc import Callable
from math import asinh, inf, log1p
from typing import NamedTuple, Protocol

from chainflow.basis.constants import FARADAY, GAS_CONSTANT

TYPICAL_VOLTAGE = 1.8  # [V], where a search begins
_MOST_STEPS = 200
_CLOSE = 4e-16  # relative width of a bracket that holds nothing more


class Losses(NamedTuple):
    """Reversible voltage and losses [V]; `anode` and `cathode` are the parts of `activation`."""

    reversible: float
    activation: float = 0.0
    ohmic: float = 0.0
    concentration: float = 0.0
    unsplit: float = 0.0  # where only the sum of all losses is known
    anode: float | None = None
    cathode: float | None = None

    @property
    def total(self) -> float:
        """The sum of the losses [V]."""
        return self.activation + self.ohmic + self.concentration + self.unsplit

    def results(self) -> dict[str, float]:
        """The parts by the names of results."""
        found = {
            "reversible_V": self.reversible,
            "activation_V": self.activation,
            "ohmic_V": self.ohmic,
            "concentration_V": self.concentration,
            "unsplit_V": self.unsplit,
        }
        if self.anode is not None and self.cathode is not None:
            found |= {"activation_anode_V": self.anode, "activation_cathode_V": self.cathode}
        return found


LOSS_RESULTS = (
    "reversible_V",
    "activation_V",
    "activation_anode_V",
    "activation_cathode_V",
    "ohmic_V",
    "concentration_V",
    "unsplit_V",
)


class Share(NamedTuple):
    """Hydrogen per hydrogen that the current would make: where it goes."""

    net: float  # leaves as hydrogen: the Faraday efficiency
    crossed: float  # leaves with the oxygen
    # the rest is burnt to water again, or was never made


class Curve(Protocol):
    """A cell in its state: everything about it by current density [A/m2]."""

    @property
    def limit(self) -> float:
        """The current density that cannot be reached [A/m2]."""

    def losses(self, density: float) -> Losses:
        """The voltage by its parts."""

    def voltage(self, density: float) -> float:
        """The voltage [V]."""

    def share(self, density: float) -> Share:
        """Where the hydrogen goes."""

    def density_for(self, power: float) -> float:
        """The current density [A/m2] at which current times voltage is a power [W/m2]."""


class VoltageCurve:
    """What every cell shares whose voltage follows from its losses at a current density."""

    __slots__ = ()

    limit: float

    def losses(self, density: float) -> Losses:
        """The voltage by its parts."""
        raise NotImplementedError  # every cell gives its own

    def voltage(self, density: float) -> float:
        """The voltage [V]."""
        found = self.losses(density)
        return found.reversible + found.total

    def density_for(self, power: float) -> float:
        """The current density [A/m2] at which current times voltage is a power [W/m2]."""
        guess = power / TYPICAL_VOLTAGE
        return rising_root(lambda i: i * self.voltage(i), power, guess, self.limit)


def activation(density: float, exchange: float, transfer: float, temperature: float) -> float:
    """Return the activation loss [V], ``RT/(alpha z F) asinh(i / 2 i0)``.

    The exact answer of Butler and Volmer for symmetric transfer; `transfer` is alpha z.
    """
    return GAS_CONSTANT * temperature / (transfer * FARADAY) * asinh(density / (2.0 * exchange))


def concentration(density: float, limit: float, temperature: float) -> float:
    """Return the loss by slow transport [V], ``-RT/2F ln(1 - i/i_lim)``; M (some write RT/4F)."""
    return -GAS_CONSTANT * temperature / (2.0 * FARADAY) * log1p(-density / limit)


def rising_root(
    function: Callable[[float], float], target: float, guess: float, ceiling: float = inf
) -> float:
    """Return x from 0 to below `ceiling` where a rising function with f(0) = 0 meets a target.

    The guess is doubled (or the gap to the ceiling halved) until it is too high, then a secant in
    a bracket (Illinois) closes in.
    """
    if target <= 0.0:
        return 0.0
    low, below = 0.0, -target
    high = min(guess, 0.5 * ceiling)
    above = function(high) - target
    for _ in range(_MOST_STEPS):
        if above >= 0.0:
            break
        low, below = high, above
        high = 2.0 * high if 2.0 * high < ceiling else 0.5 * (high + ceiling)
        if high >= ceiling:
            return low
        above = function(high) - target
    return between(lambda x: function(x) - target, low, below, high, above)


def between(
    function: Callable[[float], float], low: float, below: float, high: float, above: float
) -> float:
    """Close a bracket whose ends give a negative and a positive value."""
    last = 0
    for step in range(_MOST_STEPS):
        if above == 0.0 or high - low <= _CLOSE * high:
            return high
        trial = high - above * (high - low) / (above - below)
        if not low < trial < high or step % 12 == 11:
            trial = 0.5 * (low + high)
        value = function(trial)
        if value == 0.0:
            return trial
        if abs(trial - low) <= _CLOSE * trial or abs(high - trial) <= _CLOSE * trial:
            return trial
        if value < 0.0:
            low, below = trial, value
            above *= 0.5 if last < 0 else 1.0
            last = -1
        else:
            high, above = trial, value
            below *= 0.5 if last > 0 else 1.0
            last = 1
    return 0.5 * (low + high)

"""How does a current spread along a solid-oxide cell whose gas changes on the way?

SI throughout: voltage [V], temperature [K], pressure [Pa], amounts [mol] per mol of feed. Both
electrodes are equipotential, so the voltage U is one number and the local current density is
|U - E(s)| / ASR(s), where s from 0 to 1 is the share of the oxygen that has passed. Then

    mean current density * integral of ASR(s) / |U - E(s)| ds = 1

which is integrated exactly for E straight between nodes; so a voltage close to the outlet's
reversible one makes no trouble. The fuel gas is at shift (and methane) equilibrium everywhere: one
oxygen potential serves hydrogen and carbon monoxide. A model assumption for nickel electrodes (M).
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cache, lru_cache
from math import exp, log
from typing import Any

import numpy as np

from chainflow.basis.constants import FARADAY, GAS_CONSTANT, P_REFERENCE
from chainflow.equipment.base import Array
from chainflow.thermo.electrochemistry import reversible_voltage
from chainflow.thermo.equilibrium import equilibrium_constant

NODES = 21
_LEAST_DRIVE = 1e-250  # [V], voltage over the reversible one at the most used end
_FLAT = 1e-6  # relative rise of E over a step below which its drive counts as constant
_NEWTON_STEPS = 60
_LAST_STEP = 1e-8  # relative; Newton's next would be its square
_PROBE = 1e-6  # step of a difference in a logarithm
_CLOSE = 1e-7  # last step of Newton's method; the next would be its square
_SHIFT = {"CO": -1.0, "H2O": -1.0, "CO2": 1.0, "H2": 1.0}
_METHANE = {"CO": -1.0, "H2": -3.0, "CH4": 1.0, "H2O": 1.0}


@cache
def nodes() -> Array:
    """Return the shares s at which the gas is looked at, denser at both ends; (NODES,)."""
    return 0.5 * (1.0 - np.cos(np.linspace(0.0, np.pi, NODES)))


@dataclass(frozen=True, slots=True)
class FuelGas:
    """Totals of the fuel gas, per mol of feed: carbon, hydrogen, what passes, and pressure."""

    carbon: float
    hydrogen: float  # atoms
    inert: float
    pressure: float
    methane: bool  # whether it is among the components

    def steam_ratio(self, oxygen: Array, temperature: Array) -> Array:
        """Return H2O per H2 at equilibrium, for oxygen atoms and temperature at each node."""
        if self.carbon <= 0.0:
            return oxygen / (0.5 * self.hydrogen - oxygen)
        shift, formed = _constants(temperature)
        methane = np.zeros(len(oxygen))
        if self.methane and self.hydrogen > 0.0:
            methane = self._methane(oxygen, shift, formed)
        steam, hydrogen, *_ = self._shifted(methane, oxygen, shift)
        return steam / hydrogen

    def _shifted(self, methane: Array, oxygen: Array, shift: Array) -> tuple[Array, ...]:
        """H2O, H2, CO, CO2 at shift equilibrium beside an amount of methane."""
        carbon = self.carbon - methane
        hydrogen = 0.5 * self.hydrogen - 2.0 * methane
        # (O - C - w)(H - w) = K (2 C - O + w) w
        a = 1.0 - shift
        b = -((oxygen - carbon) + hydrogen + shift * (2.0 * carbon - oxygen))
        c = (oxygen - carbon) * hydrogen
        q = -0.5 * (b + np.copysign(np.sqrt(np.maximum(b * b - 4.0 * a * c, 0.0)), b))
        first = q / np.where(a == 0.0, np.inf, a)
        second = c / np.where(q == 0.0, np.inf, q)
        low = np.maximum(0.0, oxygen - 2.0 * carbon)
        high = np.minimum(hydrogen, oxygen - carbon)
        middle = 0.5 * (low + high)  # exactly one root lies between low and high
        steam = np.where(np.abs(second - middle) <= np.abs(first - middle), second, first)
        dioxide = oxygen - steam - carbon
        return steam, hydrogen - steam, carbon - dioxide, dioxide

    def _reduced(self, oxygen: Array) -> Array:
        """Methane beside which no H2 and no CO would be left: each takes four oxygens to burn."""
        return 0.25 * (2.0 * self.carbon + 0.5 * self.hydrogen - oxygen)

    def _methane(self, oxygen: Array, shift: Array, formed: Array) -> Array:
        """Methane at equilibrium by Newton's method on its logarithm, below what atoms allow."""
        most = np.minimum(min(self.carbon, 0.25 * self.hydrogen), self._reduced(oxygen))

        def excess(logarithm: Array) -> Array:
            amount = np.exp(logarithm)
            steam, hydrogen, monoxide, _ = self._shifted(amount, oxygen, shift)
            total = self.inert + 0.5 * self.hydrogen - 2.0 * amount + self.carbon
            tiny = 1e-300
            order = np.log(np.maximum(steam, tiny)) - np.log(np.maximum(monoxide, tiny))
            order -= 3.0 * np.log(np.maximum(hydrogen, tiny))
            order += 2.0 * np.log(total * P_REFERENCE / self.pressure)
            return logarithm + order - np.log(formed)

        least = np.maximum(self.carbon - oxygen, 1e-40 * most)
        low, high = np.log(least), np.log(most) + np.log1p(-1e-9)
        now = np.log(1e-3 * most)
        now = np.clip(now - excess(now), low + np.log(2.0), high - np.log(2.0))
        for _ in range(_NEWTON_STEPS):
            value = excess(now)
            low, high = np.where(value < 0.0, now, low), np.where(value >= 0.0, now, high)
            slope = (excess(now + _PROBE) - value) / _PROBE
            better = now - value / slope
            inside = (better > low - _CLOSE) & (better < high + _CLOSE)
            better = np.where(inside, better, 0.5 * (low + high))
            moved = float(np.max(np.abs(better - now)))
            now = better
            if moved < _CLOSE:
                break
        return np.exp(now)


def _constants(temperature: Array) -> tuple[Array, Array]:
    """Return K of the shift and of methane from CO at each node."""
    pairs = _by_level(temperature, _pair)
    return pairs[:, 0], pairs[:, 1]


def _by_level(temperature: Array, function: Callable[[float], Any]) -> Array:
    """Return a function of temperature at each node; worked out once if they are all the same."""
    levels: list[float] = temperature.tolist()
    if levels[0] == levels[-1]:
        return np.array([function(levels[0])] * len(levels))
    return np.array([function(level) for level in levels])


@lru_cache(maxsize=256)
def _pair(temperature: float) -> tuple[float, float]:
    return equilibrium_constant(_SHIFT, temperature), equilibrium_constant(_METHANE, temperature)


def local_voltage(steam_ratio: Array, oxygen_pressure: Array, temperature: Array) -> Array:
    """Return the reversible voltage [V] at each node by H2O per H2 and oxygen pressure [Pa]."""
    standard = _by_level(temperature, _standard)
    order = 0.5 * np.log(oxygen_pressure / P_REFERENCE) - np.log(steam_ratio)
    return standard + GAS_CONSTANT * temperature / (2.0 * FARADAY) * order


@lru_cache(maxsize=256)
def _standard(temperature: float) -> float:
    return reversible_voltage(temperature, "steam")


@dataclass(frozen=True, slots=True)
class AlongCell:
    """A cell whose gas is used up on the way; make it with `AlongCell.of`.

    `sign` is 1 in an electrolyser, whose voltage lies above every local reversible voltage, and -1
    in a fuel cell.
    """

    sign: float
    extreme: float  # the reversible voltage that the cell's lies beyond [V]
    mean: float  # mean reversible voltage over what is converted [V]
    mean_resistance: float  # [ohm m2]
    greatest_resistance: float  # [ohm m2]
    behind: Array  # how far the reversible voltage at each node is from the extreme [V]
    weights: Array  # resistance times share between nodes [ohm m2]

    @staticmethod
    def of(reversible: Array, resistance: Array, sign: float) -> AlongCell:
        """Return the cell with reversible voltage [V] and area resistance [ohm m2] at the nodes."""
        extreme = sign * float(np.max(sign * reversible))
        widths = np.diff(nodes())
        weights = 0.5 * widths * (resistance[1:] + resistance[:-1])
        return AlongCell(
            sign,
            extreme,
            float(0.5 * widths @ (reversible[1:] + reversible[:-1])),
            float(weights.sum()),
            float(np.max(resistance)),
            np.abs(extreme - reversible),
            weights,
        )

    def density(self, voltage: float) -> float:
        """Return the mean current density [A/m2] at a voltage; zero if it does not suffice."""
        drive = self.sign * (voltage - self.extreme)
        return 1.0 / self._integral(drive)[0] if drive > 0.0 else 0.0

    def voltage(self, density: float) -> float:
        """Return the voltage [V] at a mean current density [A/m2]."""
        if density <= 0.0:
            return self.extreme
        return self.extreme + self.sign * self._drive(density, 0.0)

    def density_for(self, power: float) -> float:
        """Return the mean current density [A/m2] at which an electrolyser takes a power [W/m2]."""
        if power <= 0.0:
            return 0.0
        return power / (self.extreme + self._drive(power / self.extreme, 1.0 / self.extreme))

    def _drive(self, density: float, rise: float) -> float:
        """The drive at which the current density times (1 + rise * drive) is `density`.

        Newton's method on logarithms, which bend one way only: from a drive that is too large it
        comes down and never passes the answer.
        """
        drive = density * self.greatest_resistance
        for _ in range(_NEWTON_STEPS):
            integral, slope = self._integral(drive)
            factor = 1.0 + rise * drive
            steep = rise * drive / factor - slope * drive / integral
            step = log(factor / (integral * density)) / steep
            drive = max(drive * exp(-step), _LEAST_DRIVE)
            if abs(step) < _LAST_STEP or drive == _LEAST_DRIVE:
                break
        return drive

    def _integral(self, drive: float) -> tuple[float, float]:
        """The integral of resistance over drive, and its slope by the drive at the far end."""
        over = drive + self.behind
        first, second = over[1:], over[:-1]
        smaller = np.minimum(first, second)
        rise = np.abs(first - second) / smaller
        safe = np.maximum(rise, _FLAT)
        weight = np.where(rise < _FLAT, 1.0 - 0.5 * rise, np.log1p(safe) / safe) / smaller
        slope = -float((self.weights / first) @ (1.0 / second))
        return float(self.weights @ weight), slope

"""Which current does a photovoltaic module give at which voltage?

One diode: ``I = IL - I0 (exp(Vd / a) - 1) - Vd / Rsh`` with the voltage over the diode
``Vd = V + I Rs``. Written by Vd nothing has to be solved: current and voltage follow from it, the
one falls and the other rises. Every search is a bisection on Vd with a fixed number of halvings,
so it cannot fail, and a batch gives the same bits as its cases one by one.

SI throughout: irradiance [W/m2], temperature [K], current [A], voltage [V], power [W], for one
module. Any shape: all functions are elementwise.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np

from chainflow.basis.constants import BOLTZMANN, ELEMENTARY_CHARGE, T_REFERENCE

HALVINGS = 60
STANDARD_IRRADIANCE = 1000.0  # [W/m2]
STANDARD_TEMPERATURE = T_REFERENCE  # [K]
GAP_SLOPE = -2.677e-4  # [1/K], of silicon: De Soto, Klein, Beckman, Solar Energy 80 (2006) 78; R
Array = np.ndarray


class Point(NamedTuple):
    """A point of a curve."""

    current: Array
    voltage: Array

    @property
    def power(self) -> Array:
        """What it gives [W]."""
        return self.current * self.voltage


class Span(NamedTuple):
    """Voltages over the diode [V] between which a module gives power, and the best of them."""

    short: Array  # short-circuited
    opened: Array  # without current, where it is the voltage of the module too
    best: Array  # at maximum power


@dataclass(frozen=True, slots=True)
class Diode:
    """The five numbers of the curve, each of any shape."""

    light_current: Array  # IL [A]
    saturation_current: Array  # I0 [A]
    series_resistance: Array  # Rs [ohm]
    shunt_resistance: Array  # Rsh [ohm]
    ideality_voltage: Array  # a = cells * n * kT/q [V]

    def at(self, diode_voltage: Array) -> Point:
        """Return current and voltage of the module where the diode has a voltage."""
        current = (
            self.light_current
            - self.saturation_current * np.expm1(diode_voltage / self.ideality_voltage)
            - diode_voltage / self.shunt_resistance
        )
        return Point(current, diode_voltage - current * self.series_resistance)

    def slope(self, diode_voltage: Array) -> Array:
        """Return d current / d diode voltage [A/V], below zero."""
        a = self.ideality_voltage
        return -self.saturation_current / a * np.exp(diode_voltage / a) - 1 / self.shunt_resistance

    def span(self) -> Span:
        """Return the ends of the curve and its best point."""
        zero = np.zeros_like(self.light_current)
        shorted = self.light_current * self.series_resistance
        short = rising_zero(lambda v: self.at(v).voltage, zero, shorted)
        ideal = self.ideality_voltage * np.log1p(self.light_current / self.saturation_current)
        opened = rising_zero(lambda v: -self.at(v).current, zero, ideal)
        return Span(short, opened, rising_zero(self._fall_of_power, short, opened))

    def _fall_of_power(self, diode_voltage: Array) -> Array:
        """Return - d power / d diode voltage; it rises, being concave power."""
        current, slope = self.at(diode_voltage).current, self.slope(diode_voltage)
        return -current - slope * (diode_voltage - 2.0 * current * self.series_resistance)


def rising_zero(
    function: Callable[[Array], Array], low: Array, high: Array, halvings: int = HALVINGS
) -> Array:
    """Return where a rising function crosses zero between `low` and `high`, elementwise."""
    low, high = np.asarray(low, dtype=float), np.asarray(high, dtype=float)
    for _ in range(halvings):
        middle = 0.5 * (low + high)
        below = function(middle) < 0.0
        low, high = np.where(below, middle, low), np.where(below, high, middle)
    return 0.5 * (low + high)


def translated(
    at_standard: Diode, coefficient: float, gap: float, irradiance: Array, temperature: Array
) -> Diode:
    """Return the diode of a module in other light [W/m2], above zero, and at another temperature.

    ``IL = S/S0 (IL0 + alpha (T - T0))``, ``I0 = I00 (T/T0)^3 exp(Eg0/kT0 - Eg/kT)``,
    ``Eg = Eg0 (1 - 2.677e-4 (T - T0))``, ``Rsh = Rsh0 S0/S``, ``a = a0 T/T0``, Rs as it is: De
    Soto, Klein and Beckman, Solar Energy 80 (2006) 78 (R in pvlib, C). `coefficient` is alpha
    [A/K], `gap` Eg0 [J].
    """
    sun = np.asarray(irradiance, dtype=float) / STANDARD_IRRADIANCE
    level = np.asarray(temperature, dtype=float)
    warmer, ratio = level - STANDARD_TEMPERATURE, level / STANDARD_TEMPERATURE
    now = gap * (1.0 + GAP_SLOPE * warmer)
    exponent = gap / (BOLTZMANN * STANDARD_TEMPERATURE) - now / (BOLTZMANN * level)
    return Diode(
        np.maximum(sun * (at_standard.light_current + coefficient * warmer), 0.0),
        at_standard.saturation_current * ratio**3 * np.exp(exponent),
        at_standard.series_resistance * np.ones_like(sun),
        at_standard.shunt_resistance / sun,
        at_standard.ideality_voltage * ratio,
    )


def joule(electronvolt: float) -> float:
    """Return an energy in [J]."""
    return electronvolt * ELEMENTARY_CHARGE

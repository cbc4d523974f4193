"""How does the power of a field change with the light on it?

Derivatives in closed form, for one case: of current by light and temperature with the diode's
voltage held, then along the curve. At maximum power the voltage does not count, being the best; on
a load it follows from both curves staying together. SI: [W], [W/m2], [K], [m/s], [A], [V].
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from chainflow.basis.constants import BOLTZMANN
from chainflow.equipment.sun.module import Module
from chainflow.equipment.sun.one_diode import GAP_SLOPE, STANDARD_TEMPERATURE, Array, Diode


class Response(NamedTuple):
    """What a module's current does with the diode's voltage held [A/(W/m2)], [A/K], and by it."""

    by_irradiance: Array
    by_temperature: Array
    by_voltage: Array  # [A/V]


def response(
    module: Module, diode: Diode, voltage: Array, irradiance: Array, temperature: Array
) -> Response:
    """Return how the current of a module answers, where its diode has a voltage."""
    ratio = voltage / diode.ideality_voltage
    growth = np.exp(ratio)
    warmer = temperature - STANDARD_TEMPERATURE
    gap = module.gap * (1.0 + GAP_SLOPE * warmer)
    thermal = BOLTZMANN * temperature
    by_exponent = gap / (thermal * temperature) - module.gap * GAP_SLOPE / thermal
    of_saturation = diode.saturation_current * (3.0 / temperature + by_exponent)
    of_light = irradiance / 1000.0 * module.current_coefficient
    return Response(
        (diode.light_current - voltage / diode.shunt_resistance) / irradiance,
        of_light
        - np.expm1(ratio) * of_saturation
        + diode.saturation_current * growth * ratio / temperature,
        diode.slope(voltage),
    )


def at_maximum(change: Array, current: Array, voltage: Array, resistance: Array) -> Array:
    """Return the change of a module's best power with that of its current, the voltage held."""
    return (voltage - 2.0 * current * resistance) * change


class OnLoad(NamedTuple):
    """A field where it meets its load."""

    series: int
    strings: Array
    current: Array  # of a module [A]
    resistance: Array  # in series, of a module [ohm]
    load_voltage: Array  # [V]
    load_slope: Array  # of the load's voltage by the field's current [V/A]

    def power(self, answer: Response, change: Array, strings: Array) -> Array:
        """Return the change of power with that of a module's current and of the strings.

        Both curves stay together: ``series (Vd - I Rs) = U(strings I)``.
        """
        rise = self.series * (1.0 - answer.by_voltage * self.resistance)
        rise = rise - self.load_slope * self.strings * answer.by_voltage
        pull = (self.series * self.resistance + self.load_slope * self.strings) * change
        moved = (pull + self.load_slope * self.current * strings) / rise
        whole = strings * self.current + self.strings * (change + answer.by_voltage * moved)
        total = self.strings * self.current
        return (self.load_voltage + total * self.load_slope) * whole

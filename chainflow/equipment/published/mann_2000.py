"""The semi-empirical voltage of a PEM fuel cell.

Amphlett et al., J. Electrochem. Soc. 142 (1995) 1 and 9; Mann et al., J. Power Sources 86 (2000)
173. Form and the generic numbers: certainty r (five or more restatements). `FITTED` are the
numbers that optimisation papers publish for the 35-cell Mark V stack (50.6 cm2, 178 um, 343 K; sum
of squares 0.8139 V2 over the stack; r, its voltages C). Only the sum xi1 + xi2 T + xi3 T ln C
counts at one state: sets differ in every number and agree in voltage, so never mix them. Pressures
are in atm, the current is the one of one cell in A, areas in cm2.
"""

from math import exp, log
from typing import NamedTuple

SOURCE = "semi-empirical: Mann et al., J. Power Sources 86 (2000) 173 (r)"


class Numbers(NamedTuple):
    """One set; `xi2` is complete, or None where it follows from area and hydrogen."""

    xi1: float  # [V]
    xi2: float | None  # [V/K]
    xi3: float  # [V/K]
    xi4: float  # [V/K]
    water_content: float
    spread: float  # B of the concentration loss [V]
    contact: float  # [ohm] of one cell
    greatest: float = 1.5  # limiting current density [A/cm2]


GENERIC = Numbers(-0.948, None, 7.6e-5, -1.93e-4, 23.0, 0.016, 3e-4)
FITTED = Numbers(-1.08604672, 3.696007e-3, 6.822847e-5, -1.6725138e-4, 24.0, 0.0158844, 1e-4)


class Parts(NamedTuple):
    """The voltage of a cell [V] by its parts; losses positive."""

    reversible: float
    activation: float
    ohmic: float
    concentration: float

    @property
    def voltage(self) -> float:
        """The voltage [V]."""
        return self.reversible - self.activation - self.ohmic - self.concentration


def voltage(
    numbers: Numbers,
    current: float,
    area: float,
    thickness: float,
    temperature: float,
    hydrogen: float,
    oxygen: float,
) -> Parts:
    """Return the voltage of one cell by its parts.

    Current [A], area [cm2], membrane thickness [cm], temperature [K], pressures of hydrogen and
    oxygen [atm].
    """
    t = temperature
    rising = log(hydrogen) + 0.5 * log(oxygen)
    reversible = 1.229 - 0.85e-3 * (t - 298.15) + 4.3085e-5 * t * rising
    at_cathode = oxygen / (5.08e6 * exp(-498.0 / t))  # [mol/cm3]
    at_anode = hydrogen / (1.09e6 * exp(77.0 / t))
    xi2 = numbers.xi2
    if xi2 is None:
        xi2 = 0.00286 + 0.0002 * log(area) + 4.3e-5 * log(at_anode)
    activation = -(
        numbers.xi1 + xi2 * t + numbers.xi3 * t * log(at_cathode) + numbers.xi4 * t * log(current)
    )
    density = current / area
    return Parts(
        reversible,
        activation,
        current
        * (_resistivity(numbers.water_content, density, t) * thickness / area + numbers.contact),
        -numbers.spread * log(1.0 - density / numbers.greatest),
    )


def _resistivity(water_content: float, density: float, temperature: float) -> float:
    """Return the resistivity of the membrane [ohm cm]."""
    t = temperature
    above = 181.6 * (1.0 + 0.03 * density + 0.062 * (t / 303.0) ** 2 * density**2.5)
    return above / ((water_content - 0.634 - 3.0 * density) * exp(4.18 * (t - 303.0) / t))

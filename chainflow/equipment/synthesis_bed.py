"""How much carbon monoxide reacts in a bed of cobalt catalyst?

Plug flow at one temperature and pressure, from the rate of `published.maretto_1999`:
``catalyst = F_CO int dX / (activity r)``.  The gas is ideal; hydrocarbons of ten carbon atoms and
more count as liquid, all shorter ones and the water as gas.  Flows [mol/s], pressures [Pa],
temperature [K], mass [kg].
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from chainflow.equipment.published import maretto_1999
from chainflow.thermo.components import Array, Matter

_LONGEST_GAS = 9  # carbon atoms
_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(16)
_FROM_ZERO = np.append(0.5 * (1.0 + _NODES), 1.0)  # shares of the way, and its end
_MOST_STEPS = 100
_SETTLED = 1e-13  # relative, of the logarithm of what is left
_FURTHEST = 30.0  # conversion within exp(-30) of what is possible


@dataclass(frozen=True, slots=True)
class Bed:
    """Mass of catalyst [kg] times its activity, and the numbers of the rate."""

    mass: float
    numbers: dict[str, float]

    def conversion(
        self, flows: Array, made: Array, temperature: float, pressure: float, matter: Matter
    ) -> float:
        """Return the share of the CO that becomes hydrocarbons; `made` is what one CO becomes."""
        monoxide, hydrogen = (float(flows[matter.index[name]]) for name in ("CO", "H2"))
        use = -float(made[matter.index["H2"]])
        most = min(1.0, hydrogen / (use * monoxide)) if monoxide > 0.0 else 0.0
        if most <= 0.0:
            return 0.0
        carbon = matter.formula[matter.elements.index("C")]
        gas = (carbon <= _LONGEST_GAS).astype(float)
        total, change = float(flows @ gas), float(made @ gas)
        a, b = maretto_1999.constants(temperature, self.numbers)

        def mass_per(x: Array) -> Array:
            """Mass of catalyst per conversion, [kg]."""
            thin = pressure / (total + monoxide * change * x)
            p_co, p_h2 = monoxide * (1.0 - x) * thin, (hydrogen - use * monoxide * x) * thin
            return monoxide * (1.0 + b * p_co) ** 2 / (a * p_co * p_h2)

        return self._reached(most, mass_per)

    def _reached(self, most: float, mass_per: object) -> float:
        """Find s in ``X = most (1 - exp(-s))``, in which the integral has no pole."""
        assert callable(mass_per)

        def slope(s: Array) -> Array:
            left = np.exp(-s)
            values: Array = mass_per(most * (1.0 - left)) * most * left
            return values

        low, high, s = 0.0, _FURTHEST, min(1.0, self.mass / float(slope(np.zeros(1))[0]))
        for _ in range(_MOST_STEPS):
            slopes = slope(s * _FROM_ZERO)
            excess = 0.5 * s * float(_WEIGHTS @ slopes[:-1]) - self.mass
            low, high = (low, s) if excess > 0.0 else (s, high)
            step = excess / float(slopes[-1])
            if abs(step) <= _SETTLED * s:
                break
            s = s - step if low < s - step < high else 0.5 * (low + high)
        return float(most * -np.expm1(-s))

"""What are the properties of liquid hydrocarbons?

`Oil` holds the hydrocarbons of one set of components that can be in an oil: n-alkanes and
1-alkenes from C2 up and the wax. There is an oil only in a set with at least one of the long
ones (C5 alkanes, C4 alkenes and up); without, C2 to C4 are gases throughout.

The liquid is an ideal solution. Enthalpy: that of the ideal gas, less a latent heat fitted to
heats of vaporisation and liquid heat capacities, plus ``v (p - p0)``. Entropy: consistent with it,
balanced with the ideal gas at the vapour pressure at one temperature (about 10 kPa of vapour).
Vapour pressure: ``ln p = A + B/T + C ln T + D T``. Outside the range of the fits the latent heat
stays what it is at the end and ln p goes on straight in 1/T, also above the critical temperature:
that is how C2 to C4 dissolve. Data and errors: ``hydrocarbons.yaml``. One case; [K], [Pa], [J/mol].
"""

from functools import lru_cache
from typing import TYPE_CHECKING, NamedTuple

import numpy as np

from chainflow.basis.constants import GAS_CONSTANT, P_REFERENCE, T_REFERENCE
from chainflow.thermo.chains import HYDROCARBONS
from chainflow.thermo.species import polynomial, species_of

if TYPE_CHECKING:
    from chainflow.thermo.components import Array

JOINT = 1000.0  # [K] of all their polynomials
_LEAST_LOGARITHM = -200.0  # of a vapour pressure in Pa; colder chains are just as involatile


class LogPressures(NamedTuple):
    """Logarithms of vapour pressures [Pa], their slopes by temperature [1/K], and 1/pressure."""

    value: "Array"
    slope: "Array"
    inverse: "Array"  # [1/Pa]


@lru_cache(maxsize=64)  # each trial of a search asks several times
def _log_pressures(oil: "Oil", temperature: float) -> LogPressures:
    return oil.find_log_pressures(temperature)


class Oil:
    """The hydrocarbons that can be in an oil; arrays run over them, `places` are in the flows."""

    def __init__(self, components: tuple[str, ...]) -> None:
        found = [
            (place, name, species_of(name).input_data["liquid"])
            for place, name in enumerate(components)
            if "liquid" in species_of(name).input_data
        ]
        self.size = len(components)
        self.places = np.array([place for place, _, _ in found])
        self.names = tuple(name for _, name, _ in found)
        data = [liquid for _, _, liquid in found]
        self._low, self._high = np.array([liquid["range"] for liquid in data]).T
        self._pressure = np.array([liquid["vapour-pressure"] for liquid in data]).T
        self._latent = np.array([liquid["latent-heat"] for liquid in data]).T
        self._balance, self._entropy = np.array([liquid["balance"] for liquid in data]).T
        self.volume = np.array([liquid["molar-volume"] for liquid in data])  # [m3/mol]
        gases = [polynomial(name) for name in self.names]
        self._rows = tuple(np.array([getattr(g, end) for g in gases]) for end in ("low", "high"))
        self.vaporisation = np.zeros(self.size)  # [J/mol] at 25 degC
        self.vaporisation[self.places] = self._latent_heats(T_REFERENCE)
        self.vaporisation.setflags(write=False)

    @staticmethod
    def of(components: tuple[str, ...]) -> "Oil | None":
        """Return the oil of a set of components, or None if all its hydrocarbons are short."""
        return Oil(components) if HYDROCARBONS.intersection(components) else None

    def log_pressures(self, temperature: float) -> LogPressures:
        """Return the logarithms of the vapour pressures [Pa] and their slopes [1/K]."""
        return _log_pressures(self, temperature)

    def find_log_pressures(self, temperature: float) -> LogPressures:
        """Work out what `log_pressures` keeps."""
        a, b, c, d = self._pressure
        t = self._inside(temperature)
        value = a + b / t + c * np.log(t) + d * t
        slope = (-b / t + c) / t + d
        ratio = t / temperature
        value = value + slope * t * (1.0 - ratio)
        slope = slope * ratio * ratio
        deep = value < _LEAST_LOGARITHM
        if deep.any():
            value = np.where(deep, _LEAST_LOGARITHM, value)
            slope = np.where(deep, 0.0, slope)
        found = LogPressures(value, slope, np.exp(-value))
        for array in found:
            array.setflags(write=False)
        return found

    def _inside(self, temperature: float) -> "Array":
        inside: Array = np.minimum(np.maximum(temperature, self._low), self._high)
        return inside

    def _latent_heats(self, temperature: float) -> "Array":
        constant, linear, square = self._latent
        t = self._inside(temperature)
        heats: Array = constant + t * (linear + t * square)
        return heats

    def enthalpies(self, temperature: float, pressure: float) -> "Array":
        """Return the enthalpies in the liquid [J/mol], shape (components,), zero for the others."""
        t = temperature
        powers = np.array([t, t**2 / 2, t**3 / 3, t**4 / 4, t**5 / 5, 1.0, 0.0]) * GAS_CONSTANT
        gas = self._rows[int(t > JOINT)] @ powers
        compression = self.volume * (pressure - P_REFERENCE)
        return self._spread(gas - self._latent_heats(t) + compression)

    def heat_capacities(self, temperature: float) -> "Array":
        """Return the slopes of the enthalpies by temperature [J/(mol K)]."""
        t = temperature
        powers = np.array([1.0, t, t**2, t**3, t**4, 0.0, 0.0]) * GAS_CONSTANT
        slope = self._latent[1] + 2.0 * t * self._latent[2]
        inside = (self._low < t) & (t < self._high)
        return self._spread(self._rows[int(t > JOINT)] @ powers - np.where(inside, slope, 0.0))

    def entropies(self, temperature: float) -> "Array":
        """Return the entropies of the pure liquids [J/(mol K)]."""
        t = temperature
        powers = np.array([np.log(t), t, t**2 / 2, t**3 / 3, t**4 / 4, 0.0, 1.0]) * GAS_CONSTANT
        inside = self._inside(t)
        lost = self._latent[1] * np.log(inside / self._balance)
        lost = lost + 2.0 * self._latent[2] * (inside - self._balance)
        return self._spread(self._rows[int(t > JOINT)] @ powers - self._entropy - lost)

    def partial_entropies(self, flows: "Array", temperature: float) -> "Array":
        """Return the partial molar entropies of an oil [J/(mol K)]; zero for what is absent."""
        there = flows > 0.0
        share = np.where(there, flows, 1.0) / float(flows.sum() or 1.0)
        return np.where(there, self.entropies(temperature) - GAS_CONSTANT * np.log(share), 0.0)

    def _spread(self, values: "Array") -> "Array":
        out = np.zeros(self.size)
        out[self.places] = values
        return out

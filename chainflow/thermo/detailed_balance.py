"""How well can an absorber of a given band gap do at best, as a cell or in splitting water?

SI throughout: energies of gaps [J], current density [A/m2], voltage [V], irradiance [W/m2]. In the
detailed balance (Shockley and Queisser, J. Appl. Phys. 32 (1961) 510; numbers for this spectrum:
Ruehle, Solar Energy 130 (2016) 139) every photon above the gap gives one electron, and the only
loss of electrons is the light that the absorber itself sends out: a black body's above the gap,
into the half space (2 pi) in front of it and not behind, without a factor of the refractive index.
Boltzmann's factor stands for Bose and Einstein's: at open circuit of any gap above 0.3 eV in one
sun this changes the emission by less than 1e-3, the voltage by less than 0.02 mV.

Two absorbers in series carry the same current, the upper one takes all photons above its gap, the
lower one those between the two gaps, and neither lights the other.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, NamedTuple

import numpy as np

from chainflow.basis.constants import (
    BOLTZMANN,
    ELEMENTARY_CHARGE,
    LIGHT_SPEED,
    PLANCK,
    T_REFERENCE,
)
from chainflow.thermo.electrochemistry import reversible_voltage
from chainflow.thermo.photons import Array, PhotonCounts

_HALVINGS = 60  # of a bracket of currents, to the last bit


def thermal_voltage(temperature: float) -> float:
    """Return kT/q [V]."""
    return BOLTZMANN * temperature / ELEMENTARY_CHARGE


def emission(gap: Any, temperature: float = T_REFERENCE) -> Any:
    """Return the current density [A/m2] of the light sent out in the dark, in the shape of `gap`.

    ``q 2 pi / (h^3 c^2)`` times the integral of ``E^2 exp(-E/kT)`` from the gap [J] up; at a
    voltage V it is ``exp(qV/kT)`` times as much.
    """
    heat = BOLTZMANN * temperature
    x = np.asarray(gap, dtype=float) / heat
    front = ELEMENTARY_CHARGE * 2.0 * np.pi * heat**3 / (PLANCK**3 * LIGHT_SPEED**2)
    found = front * np.exp(-x) * (x * x + 2.0 * x + 2.0)
    return found if np.ndim(gap) else float(found)


class CellLimit(NamedTuple):
    """The best that a cell of one absorber can do; arrays in the shape of the gaps."""

    short_circuit: Any  # current density [A/m2]
    open_circuit: Any  # [V]
    fill_factor: Any  # [-]
    efficiency: Any  # electric power per light [-]
    best_voltage: Any  # of the highest power [V]


class SplittingLimit(NamedTuple):
    """The best that one or two absorbers can do in splitting water."""

    current_density: Any  # [A/m2]
    efficiency: Any  # solar to hydrogen [-]


class Best(NamedTuple):
    """The gaps [J] that do best, upper first, and how well."""

    gaps: tuple[float, ...]
    efficiency: float


@dataclass(frozen=True)
class DetailedBalance:
    """Limits of absorbers under a spectrum, at a temperature [K]."""

    photons: PhotonCounts
    temperature: float = T_REFERENCE

    def cell(self, gap: Any) -> CellLimit:
        """Return what a solar cell of a gap [J] can do; a number or an array of gaps."""
        from scipy.special import lambertw

        level = thermal_voltage(self.temperature)
        current = self.photons.current_above(gap)
        ratio = current / emission(gap, self.temperature) + 1.0
        open_circuit = level * np.log(ratio)
        # where d(VJ)/dV = 0: (1 + v) exp(v) = ratio, v in units of kT/q
        voltage = level * (np.real(lambertw(np.e * ratio)) - 1.0)
        power = voltage * self._given(gap, voltage)
        return CellLimit(
            current,
            open_circuit,
            power / (current * open_circuit),
            power / self.photons.total,
            voltage,
        )

    def one_absorber(self, gap: Any, needed: float) -> SplittingLimit:
        """Return what an absorber of a gap [J] can split if `needed` [V] is needed for it."""
        current = np.maximum(self._given(gap, needed), 0.0)
        return self._splitting(current)

    def tandem(self, upper: Any, lower: Any, needed: float) -> SplittingLimit:
        """Return what two absorbers in series can split; gaps [J] that broadcast, upper >= lower.

        The current at which their voltages add up to `needed` [V], found by halving.
        """
        upper, lower = np.broadcast_arrays(np.asarray(upper, float), np.asarray(lower, float))
        first = np.asarray(self.photons.current_above(upper))
        second = np.maximum(np.asarray(self.photons.current_above(lower)) - first, 0.0)
        dark = [np.asarray(emission(gap, self.temperature)) for gap in (upper, lower)]
        level = thermal_voltage(self.temperature)
        low, high = np.zeros(first.shape), np.minimum(first, second)
        for _ in range(_HALVINGS):
            middle = 0.5 * (low + high)
            volts = np.log1p((first - middle) / dark[0]) + np.log1p((second - middle) / dark[1])
            enough = level * volts >= needed
            low, high = np.where(enough, middle, low), np.where(enough, high, middle)
        return self._splitting(low)

    def best_cell(self) -> Best:
        """Return the gap of the most efficient solar cell."""
        return _best_of_one(lambda gaps: self.cell(gaps).efficiency, _GRID)

    def best_absorber(self, needed: float) -> Best:
        """Return the gap of the best single absorber for splitting at `needed` [V]."""
        return _best_of_one(lambda gaps: self.one_absorber(gaps, needed).efficiency, _GRID)

    def best_behind(self, gap: float, needed: float) -> Best | None:
        """Return the best pair with this gap [J] in front; None below the smallest gap known.

        Where many do equally well, that with the largest gap behind, which leaves most voltage.
        """
        lower = _GRID[gap > _GRID]
        if not lower.size:
            return None
        found = self.tandem(gap, lower, needed).efficiency
        place = int(np.flatnonzero(found >= (1.0 - _EQUAL) * found.max())[-1])
        return Best((gap, float(lower[place])), float(found[place]))

    def best_in_front(self, gap: float, needed: float) -> Best | None:
        """Return the best pair with this gap [J] behind; None above the largest gap known."""
        upper = _GRID[gap < _GRID]
        if not upper.size:
            return None
        found = _best_of_one(lambda gaps: self.tandem(gaps, gap, needed).efficiency, upper)
        return Best((*found.gaps, gap), found.efficiency)

    def best_tandem(self, needed: float) -> Best:
        """Return the pair of gaps that splits best at `needed` [V]."""
        found = self._best_pair(_GRID[::_COARSE], _GRID[::_COARSE], needed)
        upper, lower = (_GRID[np.abs(_GRID - g) <= 1.5 * _COARSE * _STEP] for g in found.gaps)
        return self._best_pair(upper, lower, needed)

    def _best_pair(self, uppers: Array, lowers: Array, needed: float) -> Best:
        upper, lower = np.meshgrid(uppers, lowers, indexing="ij")
        ordered = upper > lower
        upper, lower = upper[ordered], lower[ordered]
        efficiency = self.tandem(upper, lower, needed).efficiency
        place = int(np.argmax(efficiency))
        return Best((float(upper[place]), float(lower[place])), float(efficiency[place]))

    def _given(self, gap: Any, voltage: Any) -> Any:
        """The current density [A/m2] that a cell gives at a voltage."""
        dark = emission(gap, self.temperature)
        level = thermal_voltage(self.temperature)
        # in logarithms: exp of a voltage far above the gap has no number
        lost = np.exp(np.minimum(np.log(dark) + voltage / level, 700.0)) - dark
        return self.photons.current_above(gap) - lost

    def _splitting(self, current: Any) -> SplittingLimit:
        return SplittingLimit(
            current, current * reversible_voltage(T_REFERENCE) / self.photons.total
        )


_STEP = 0.002 * ELEMENTARY_CHARGE
_GRID = _STEP * np.arange(160, 2200)  # 0.32 to 4.4 eV
_EQUAL = 1e-3  # relative: efficiencies that are as good as each other
_COARSE = 10  # steps of the first search for a pair


def _best_of_one(efficiency: Any, gaps: Array) -> Best:
    found = efficiency(gaps)
    place = int(np.argmax(found))
    return Best((float(gaps[place]),), float(found[place]))

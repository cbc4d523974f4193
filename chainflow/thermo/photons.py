"""How many photons of a spectrum, and how much of its energy, lie above a band gap?

SI throughout: wavelength [m], spectral irradiance [W/m2 per m], energy of a photon [J], current
density [A/m2]. A photon whose energy is at least the gap, ``h c / wavelength >= E_g``, can lift one
electron. Integrals are trapezoids on the points of the spectrum, cut at ``h c / E_g`` with the
spectrum interpolated there.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np

from chainflow.basis.constants import ELEMENTARY_CHARGE, LIGHT_SPEED, PLANCK

Array = np.ndarray


@dataclass(frozen=True, eq=False)
class PhotonCounts:
    """A spectrum as counts of photons; wavelengths rise."""

    wavelength: Array
    irradiance: Array

    @cached_property
    def total(self) -> float:
        """The irradiance of the whole spectrum [W/m2]."""
        return float(np.trapezoid(self.irradiance, self.wavelength))

    def current_above(self, gap: Any) -> Any:
        """The current density [A/m2] if each photon above the gap [J] gives one electron.

        A number for a number, an array in the shape of an array.
        """
        return self._up_to(gap, self._per_watt * self.irradiance, self._charges)

    def energy_above(self, gap: Any) -> Any:
        """The irradiance [W/m2] of all photons above the gap [J], in the shape of `gap`."""
        return self._up_to(gap, self.irradiance, self._energies)

    def current_with(self, wavelength: Array, efficiency: Array, gap: float) -> float:
        """The current density [A/m2] at a quantum efficiency that is known at some wavelengths.

        Straight between the points [m, -], zero outside them and below the gap [J]. The product
        with the photons is integrated on the points of both.
        """
        grid = np.union1d(self.wavelength, wavelength)
        longest = PLANCK * LIGHT_SPEED / gap
        grid = np.append(grid[grid < longest], longest)
        photons = np.interp(grid, self.wavelength, self._per_watt * self.irradiance)
        product = photons * np.interp(grid, wavelength, efficiency, left=0.0, right=0.0)
        return float(np.trapezoid(product, grid))

    @cached_property
    def _per_watt(self) -> Array:
        """Current per power of the photons at each wavelength [A/W]."""
        return self.wavelength * (ELEMENTARY_CHARGE / (PLANCK * LIGHT_SPEED))

    @cached_property
    def _charges(self) -> Array:
        return _running(self._per_watt * self.irradiance, self.wavelength)

    @cached_property
    def _energies(self) -> Array:
        return _running(self.irradiance, self.wavelength)

    def _up_to(self, gap: Any, density: Array, running: Array) -> Any:
        """Integrate a density from the shortest wavelength to that of the gap."""
        longest = PLANCK * LIGHT_SPEED / np.asarray(gap, dtype=float)
        longest = np.clip(longest, self.wavelength[0], self.wavelength[-1])
        place = np.clip(np.searchsorted(self.wavelength, longest) - 1, 0, None)
        at_cut = np.interp(longest, self.wavelength, density)
        rest = 0.5 * (density[place] + at_cut) * (longest - self.wavelength[place])
        found = running[place] + rest
        return found if np.ndim(gap) else float(found)


def _running(density: Array, grid: Array) -> Array:
    """Return the trapezoid integral up to each point."""
    pieces = 0.5 * (density[1:] + density[:-1]) * np.diff(grid)
    return np.concatenate([[0.0], np.cumsum(pieces)])

"""How is sunlight spread over wavelengths?

SI throughout: wavelength [m], spectral irradiance [W/m2 per m], photons [1/(s m2 m)]. The shape is
that of ASTM G173-03 (2002 points from 280 to 4000 nm) as the library pvlib ships it; integrals are
trapezoids on those points.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cache
from importlib.util import find_spec
from pathlib import Path
from typing import Literal

import numpy as np

from chainflow.basis.constants import ELEMENTARY_CHARGE, LIGHT_SPEED, PLANCK

SOURCE = "ASTM G173-03, reference spectra; as shipped with the library pvlib"
_NANOMETRE = 1e-9  # [m]

Column = Literal["global", "direct", "extraterrestrial"]
_FILE = ("data", "ASTMG173.csv")
_PLACES: dict[Column, int] = {"extraterrestrial": 1, "global": 2, "direct": 3}


@dataclass(frozen=True, slots=True)
class Spectrum:
    """Spectral irradiance over wavelength, both of shape (points,); wavelength rises."""

    wavelength: np.ndarray  # [m]
    irradiance: np.ndarray  # [W/m2 per m]

    @property
    def total(self) -> float:
        """All of it [W/m2]."""
        return float(np.trapezoid(self.irradiance, self.wavelength))

    @property
    def energy(self) -> np.ndarray:
        """Energy of one photon at each wavelength [J], ``h c / wavelength``."""
        return PLANCK * LIGHT_SPEED / self.wavelength

    @property
    def photons(self) -> np.ndarray:
        """Photons at each wavelength [1/(s m2 m)]."""
        return self.irradiance / self.energy

    def scaled_to(self, irradiance: float) -> Spectrum:
        """Return light of the same shape with a total of `irradiance` [W/m2]."""
        return replace(self, irradiance=self.irradiance * (irradiance / self.total))

    def through(self, share: np.ndarray) -> Spectrum:
        """Return what is left where a `share` [0 to 1] of each wavelength passes."""
        return replace(self, irradiance=self.irradiance * share)

    def up_to(self, wavelength: float) -> Spectrum:
        """Return the part from the shortest wavelength to `wavelength` [m], cut between points."""
        points = self.wavelength
        cut = float(np.clip(wavelength, points[0], points[-1]))
        inside = points < cut
        last = np.interp(cut, points, self.irradiance)
        return Spectrum(np.append(points[inside], cut), np.append(self.irradiance[inside], last))

    def photon_flux(self, longest: float = np.inf) -> float:
        """Return the photons up to a wavelength `longest` [m], in [1/(s m2)]."""
        part = self.up_to(longest)
        return float(np.trapezoid(part.photons, part.wavelength))


def gap_wavelength(gap: float) -> float:
    """Return the longest wavelength [m] whose photons cross a band gap [eV], ``h c / (q gap)``."""
    return PLANCK * LIGHT_SPEED / (ELEMENTARY_CHARGE * gap)


@cache
def reference(column: Column = "global") -> Spectrum:
    """Return a spectrum of ASTM G173-03.

    `global` (on a plane tilted by 37 deg, 1000.4 W/m2), `direct` (with the circumsolar ring,
    900.1 W/m2) or `extraterrestrial` (1347.9 W/m2 in this range).
    """
    wavelength, irradiance = _table(column)
    return Spectrum(wavelength * _NANOMETRE, irradiance / _NANOMETRE)


def _table(column: Column) -> tuple[np.ndarray, np.ndarray]:
    """Return wavelengths [nm] and spectral irradiance [W/m2 per nm] as pvlib ships them.

    Its file is read without importing pvlib where it lies where it is known to lie: the import
    takes two seconds.
    """
    found = find_spec("pvlib")
    folders = (found.submodule_search_locations if found else None) or []
    path = next((p for p in (Path(f, *_FILE) for f in folders) if p.is_file()), None)
    if path is not None:
        table = np.loadtxt(path, delimiter=",", skiprows=2)
        return table[:, 0], table[:, _PLACES[column]]
    from pvlib.spectrum import get_reference_spectra

    frame = get_reference_spectra(standard="ASTM G173-03")
    return frame.index.to_numpy(dtype=float), frame[column].to_numpy(dtype=float)


def of_sunlight(irradiance: float) -> Spectrum:
    """Return sunlight of an irradiance [W/m2]: the global reference, scaled."""
    return reference().scaled_to(irradiance)

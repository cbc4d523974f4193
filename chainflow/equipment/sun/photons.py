"""How many photons does one watt of sunlight bring?

The global reference spectrum as counts of photons, SI throughout.
"""

from __future__ import annotations

from functools import cache

from chainflow.equipment.sun.spectrum import Spectrum, of_sunlight, reference
from chainflow.thermo.photons import PhotonCounts

FULL_SUN = 1000.0  # [W/m2], irradiance that measurements and plateaus refer to


@cache
def reference_photons() -> PhotonCounts:
    """Return the photons of the spectrum as it is tabled, 1000.37 W/m2."""
    return _counts(reference())


@cache
def unit_photons() -> PhotonCounts:
    """Return the photons of 1 W/m2 of sunlight."""
    return _counts(of_sunlight(1.0))


def _counts(spectrum: Spectrum) -> PhotonCounts:
    return PhotonCounts(spectrum.wavelength, spectrum.irradiance)

"""Which share of the light does each absorber of a photoelectrochemical device take?

All per watt of sunlight on the device: shares of its energy [-] and currents [A/W], so that an
irradiance [W/m2] makes shares to W/m2 and currents to A/m2 of the device's aperture. Gaps in [J].
A share of the light is reflected at the front whatever its colour. Behind that the photoelectrode
takes a share of the photons above its gap and none below; each junction of the solar cell takes
all photons above its own gap that get there. A cell beside the photoelectrode has its own part of
the aperture and gets the light as it comes.
"""

from __future__ import annotations

from functools import lru_cache
from typing import NamedTuple

import numpy as np

from chainflow.equipment.sun.photons import unit_photons

Efficiency = float | tuple[tuple[float, ...], tuple[float, ...]]  # constant, or by wavelength [m]


class Taken(NamedTuple):
    """What one absorber takes."""

    gap: float
    energy: float  # share of the light [-]
    photons: float  # current if each photon taken gave one electron [A/W]


class Paths(NamedTuple):
    """Where the light goes; the shares add up to one."""

    not_absorbed: float  # reflected at the front
    passed: float  # leaves behind the last absorber
    electrode: Taken
    junctions: tuple[Taken, ...]
    available: float  # all photons above the gap of the photoelectrode [A/W], on its own part


@lru_cache(maxsize=256)
def light_paths(
    gap: float, reflection: float, absorption: float, junctions: tuple[float, ...], beside: float
) -> Paths:
    """Return where the light goes.

    Parameters
    ----------
    gap : of the photoelectrode [J].
    reflection, absorption : shares [-]; absorption is of what gets in and lies above the gap.
    junctions : gaps of the solar cell [J], in the order in which light meets them.
    beside : part of the aperture that a cell beside has [-]; zero if the cell is behind.
    """
    own, inside = 1.0 - beside, 1.0 - reflection
    above = _above(gap)
    electrode = Taken(gap, *(own * inside * absorption * part for part in above))
    on_cell = beside if beside else own
    thinned = 0.0 if beside else absorption  # share of the photons above `gap` that is missing
    taken, ceiling = [], np.inf
    for lower in junctions:
        if lower < ceiling:
            parts = _between(lower, ceiling, gap, thinned)
            taken.append(Taken(lower, *(on_cell * inside * part for part in parts)))
            ceiling = lower
        else:
            taken.append(Taken(lower, 0.0, 0.0))
    passed = inside - electrode.energy - sum(one.energy for one in taken)
    return Paths(reflection, passed, electrode, tuple(taken), own * above[1])


@lru_cache(maxsize=256)
def current_at(
    efficiency: tuple[tuple[float, ...], tuple[float, ...]] | float, gap: float
) -> float:
    """Return the current [A/W] at an external quantum efficiency, constant or by wavelength [m]."""
    if isinstance(efficiency, float):
        return efficiency * _above(gap)[1]
    wavelength, values = efficiency
    return unit_photons().current_with(np.array(wavelength), np.array(values), gap)


def current_above(gap: float) -> float:
    """Return the current of all photons above a gap [A/W]."""
    return _above(gap)[1]


@lru_cache(maxsize=1024)
def _above(gap: float) -> tuple[float, float]:
    """Return the share of the light above a gap, and the current of its photons [A/W]."""
    photons = unit_photons()
    return photons.energy_above(gap), photons.current_above(gap)


def _between(low: float, high: float, gap: float, thinned: float) -> tuple[float, ...]:
    """Return energy and current of the photons between two energies, thinned above `gap`."""
    ends = (low, min(max(gap, low), high), high)
    counts = [_above(end) if np.isfinite(end) else (0.0, 0.0) for end in ends]
    below, thin = ([a - b for a, b in zip(counts[i], counts[i + 1], strict=True)] for i in (0, 1))
    return tuple(a + (1.0 - thinned) * b for a, b in zip(below, thin, strict=True))

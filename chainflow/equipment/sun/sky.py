"""Where is the sun, and how bright is a sky without clouds?

Positions by the algorithm of Reda and Andreas, Solar Energy 76 (2004) 577, clear skies by Ineichen
and Perez, Solar Energy 73 (2002) 151, both from the library pvlib. Angles in [deg] as there: zenith
from straight up (refraction included), azimuth clockwise from north.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from typing import TYPE_CHECKING

import numpy as np

from chainflow.equipment.sun.hours import HOURS
from chainflow.equipment.sun.weather import Place, Weather

if TYPE_CHECKING:
    import pandas as pd

SOURCES = (
    "sun position: Reda and Andreas, Solar Energy 76 (2004) 577",
    "clear sky: Ineichen and Perez, Solar Energy 73 (2002) 151",
)
YEAR = 2001  # of the sun's positions: no leap year; others differ by less than 0.3 deg


@dataclass(frozen=True, slots=True, eq=False)
class Positions:
    """Where the sun stands in the middle of each hour; arrays of shape (hours,) [deg]."""

    zenith: np.ndarray  # as seen, with refraction
    azimuth: np.ndarray


def middles(zone: float) -> pd.DatetimeIndex:
    """Return the middle of each hour of a year, in the time zone [h] of a place."""
    import pandas as pd

    start = pd.Timestamp(YEAR, 1, 1) - pd.Timedelta(hours=zone) + pd.Timedelta(minutes=30)
    return pd.date_range(start, periods=HOURS, freq="h", tz="UTC")


@lru_cache(maxsize=8)
def positions(place: Place) -> Positions:
    """Return where the sun stands in the middle of each hour of a year."""
    return positions_at(middles(place.zone), place)


def positions_at(times: pd.DatetimeIndex, place: Place) -> Positions:
    """Return where the sun stands at some times."""
    from pvlib.solarposition import get_solarposition

    found = get_solarposition(times, place.latitude, place.longitude, altitude=place.altitude)
    return Positions(found["apparent_zenith"].to_numpy(), found["azimuth"].to_numpy())


@lru_cache(maxsize=8)
def clear_sky(place: Place, turbidity: float | None, air: float, wind: float) -> Weather:
    """Return a year without clouds.

    `turbidity` is Linke's (about 2 for clean mountain air, 3 for the country, 5 for a town);
    without it the monthly means of the place are taken from the maps that pvlib ships. `air` [K]
    and `wind` [m/s] are those of every hour.
    """
    from pvlib import atmosphere, clearsky, irradiance

    times, sun = middles(place.zone), positions(place)
    linke = (
        clearsky.lookup_linke_turbidity(times, place.latitude, place.longitude).to_numpy()
        if turbidity is None
        else turbidity
    )
    mass = atmosphere.get_absolute_airmass(
        atmosphere.get_relative_airmass(sun.zenith), atmosphere.alt2pres(place.altitude)
    )
    beyond = irradiance.get_extra_radiation(times).to_numpy()
    with np.errstate(divide="ignore", invalid="ignore"):  # of the night, made zero below
        found = clearsky.ineichen(sun.zenith, mass, linke, place.altitude, beyond)
    horizontal, direct, diffuse = (
        np.nan_to_num(np.asarray(found[name], dtype=float)) for name in ("ghi", "dni", "dhi")
    )
    level = np.full(HOURS, 1.0)
    return Weather("clear sky", place, horizontal, direct, diffuse, air * level, wind * level)

"""How much of the sky's light falls on a plane that is tilted or follows the sun?

Irradiance [W/m2] from the hourly beam, the sky's diffuse light and what the ground throws back, by
the library pvlib; angles are settings [rad] and go to it in [deg]. Shapes are (8760,).
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from math import degrees, pi
from typing import Annotated, Literal

import numpy as np
from pydantic import BaseModel, ConfigDict, Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.quantities import Fraction, OpenFraction, measured
from chainflow.equipment.setting_numbers import stated
from chainflow.equipment.sun import cover
from chainflow.equipment.sun.cover import Cover
from chainflow.equipment.sun.sky import middles, positions
from chainflow.equipment.sun.weather import Weather

Tilt = Annotated[float, measured("rad", ge=0, le=pi)]
Azimuth = Annotated[float, measured("rad", ge=0, le=2 * pi)]
SOURCES = (
    "sky on a tilted plane: Hay and Davies, First Canadian Solar Radiation Data Workshop (1980) 59",
    "sky on a tilted plane: Perez et al., Solar Energy 44 (1990) 271",
    "tracking about one axis: Marion and Dobos, NREL/TP-6A20-58891 (2013)",
    *cover.SOURCES,
)
_MODELS = {"isotropic": "isotropic", "hay-davies": "haydavies", "perez": "perez"}
_AIMED = {
    "fixed": ("tilt", "azimuth"),
    "single-axis": ("axis_tilt", "axis_azimuth", "largest_rotation", "ground_cover"),
    "two-axis": (),
}


class Plane(BaseModel):
    """How the plane of the aperture stands; azimuths count clockwise from north."""

    model_config = ConfigDict(frozen=True, extra="forbid")

    mount: Literal["fixed", "single-axis", "two-axis"] = Field(
        "fixed", description="standing still, or following the sun about one axis or two"
    )
    tilt: Tilt = Field(0.0, description="from level (mount: fixed)")
    azimuth: Azimuth = Field(pi, description="where it faces, clockwise from north (mount: fixed)")
    axis_tilt: Annotated[float, measured("rad", ge=0, lt=pi / 2)] = Field(
        0.0, description="of the axis from level (mount: single-axis)"
    )
    axis_azimuth: Azimuth = Field(
        pi, description="along the axis, clockwise from north (mount: single-axis)"
    )
    largest_rotation: Annotated[float, measured("rad", gt=0, le=pi / 2)] = Field(
        pi / 3, description="from level either way (mount: single-axis); common practice, no source"
    )
    ground_cover: OpenFraction | None = Field(
        None,
        description="area of modules per area of ground: rows then turn back so as not to shade "
        "each other (mount: single-axis)",
    )
    sky: Literal["isotropic", "hay-davies", "perez"] = Field(
        "hay-davies", description="how bright the sky is around the sun and at the horizon"
    )
    albedo: Fraction = Field(
        0.2, description="light that the ground throws back; common practice, no source"
    )
    cover: Cover | None = Field(
        None,
        description="front that turns slanting light back, as {model: fresnel}; without it all "
        "light gets in as straight light does",
    )

    @model_validator(mode="after")
    def _of_one_mount(self) -> Plane:
        own = (*_AIMED[self.mount], "mount", "sky", "albedo", "cover")
        strange = sorted(stated(self) - set(own))
        if strange:
            text = (
                f"'{strange[0]}' means nothing with mount {self.mount}: remove it or change 'mount'"
            )
            raise PydanticCustomError("plane", "{text}", {"text": text})
        return self


@dataclass(frozen=True, slots=True, eq=False)
class InPlane:
    """What falls on the plane in each hour of a year; shape (8760,)."""

    total: np.ndarray  # [W/m2]
    beam: np.ndarray  # [W/m2], straight from the sun
    admitted: np.ndarray  # [W/m2], of the total: what the cover does not turn back
    admitted_beam: np.ndarray  # [W/m2], of the beam
    zenith: np.ndarray  # of the sun [deg]
    azimuth: np.ndarray  # of the sun [deg]
    incidence: np.ndarray  # between sun and plane [deg]

    @property
    def direct(self) -> np.ndarray:
        """Share of what gets in that comes straight from the sun [-]; none in the dark."""
        lit = self.admitted > 0.0
        return np.where(lit, self.admitted_beam / np.where(lit, self.admitted, 1.0), 0.0)


@lru_cache(maxsize=16)
def in_plane(weather: Weather, plane: Plane) -> InPlane:
    """Return what falls on a plane, hour by hour.

    The sun counts where it stands in the middle of the hour. Where the brightness of Perez is
    undefined (the sun is below the horizon) the sky is taken as evenly bright. A cover treats sky
    and ground as evenly bright too, also the brightness around the sun.
    """
    from pvlib import atmosphere, irradiance

    sun = positions(weather.place)
    tilt, facing = _stance(plane, sun.zenith, sun.azimuth)
    incidence = irradiance.aoi(tilt, facing, sun.zenith, sun.azimuth)
    parts = irradiance.get_total_irradiance(
        tilt,
        facing,
        sun.zenith,
        sun.azimuth,
        weather.direct,
        weather.horizontal,
        weather.diffuse,
        dni_extra=irradiance.get_extra_radiation(middles(weather.place.zone)).to_numpy(),
        airmass=atmosphere.get_relative_airmass(sun.zenith),
        albedo=plane.albedo,
        model=_MODELS[plane.sky],
    )
    beam, sky, ground = (
        np.asarray(parts[name], dtype=float)
        for name in ("poa_direct", "poa_sky_diffuse", "poa_ground_diffuse")
    )
    even = weather.diffuse * 0.5 * (1.0 + np.cos(np.radians(tilt)))
    sky = np.maximum(np.where(np.isfinite(sky), sky, even), 0.0)
    beam = np.maximum(np.nan_to_num(beam), 0.0)
    ground = np.maximum(np.nan_to_num(ground), 0.0)
    total = beam + sky + ground
    within, within_beam = total, beam
    if plane.cover is not None:
        shares = plane.cover.diffuse(tilt)
        within_beam = plane.cover.beam(incidence) * beam
        within = within_beam + shares.sky * sky + shares.ground * ground
    return InPlane(total, beam, within, within_beam, sun.zenith, sun.azimuth, np.asarray(incidence))


def _stance(plane: Plane, zenith: np.ndarray, azimuth: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Tilt and azimuth of the plane in each hour [deg]; level and facing south at night."""
    if plane.mount == "fixed":
        level = np.ones_like(zenith)
        return degrees(plane.tilt) * level, degrees(plane.azimuth) * level
    if plane.mount == "two-axis":
        up = zenith < 90.0
        return np.where(up, zenith, 0.0), np.where(up, azimuth, 180.0)
    from pvlib.tracking import singleaxis

    found = singleaxis(
        zenith,
        azimuth,
        axis_tilt=degrees(plane.axis_tilt),
        axis_azimuth=degrees(plane.axis_azimuth),
        max_angle=degrees(plane.largest_rotation),
        backtrack=plane.ground_cover is not None,
        gcr=plane.ground_cover or 1.0,
    )
    tilt = np.nan_to_num(np.asarray(found["surface_tilt"], dtype=float))
    facing = np.nan_to_num(np.asarray(found["surface_azimuth"], dtype=float), nan=180.0)
    return tilt, facing

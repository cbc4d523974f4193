"""How much sunlight falls on the aperture: as stated, under a clear sky, or by a weather file?

SI throughout: light [W], irradiance [W/m2], area [m2], temperature [K], wind [m/s], angles [rad].
"""

from __future__ import annotations

from collections.abc import Mapping
from math import pi, radians
from typing import Annotated, Any, ClassVar

import numpy as np
from pydantic import (
    AfterValidator,
    BaseModel,
    BeforeValidator,
    ConfigDict,
    Field,
    InstanceOf,
    ValidationInfo,
    WithJsonSchema,
    model_validator,
)
from pydantic_core import PydanticCustomError

from chainflow.basis.constants import T_REFERENCE
from chainflow.basis.names import shorten
from chainflow.basis.quantities import Area, Fraction, Irradiance, Temperature, measured
from chainflow.equipment.base import Caution, Equipment, Light, Outcome, Port, Role, Site
from chainflow.equipment.ports import Feeds, Flow
from chainflow.equipment.setting_numbers import stated
from chainflow.equipment.sun import plane, sky, spectrum
from chainflow.equipment.sun.hours import HourFault, hour_of, name_of
from chainflow.equipment.sun.plane import InPlane, Plane, in_plane
from chainflow.equipment.sun.weather import Place, Weather, WeatherFault, read_weather

BRIGHTEST, TYPICAL = "brightest", "typical"
_HOUR = 3600.0  # [s]
_MARKS = ("irradiance", "place", "weather")  # one of them says where the light is from
_MEANINGLESS = {  # what a way to say it leaves no room for
    "irradiance": ("hour", "plane"),
    "place": ("direct",),
    "weather": ("direct", "air", "wind"),
}


def _weather(given: object, info: ValidationInfo) -> object:
    if not isinstance(given, str):
        if isinstance(given, Weather):
            return given
        text = f"{shorten(str(given))} is no file, wanted the name of a weather file"
        raise PydanticCustomError("weather", "{text}", {"text": text})
    try:
        return read_weather(given, (info.context or {}).get("folder", ""))
    except WeatherFault as fault:
        raise PydanticCustomError("weather", "{text}", {"text": str(fault)}) from None


def _hour(given: str) -> str:
    if given not in (BRIGHTEST, TYPICAL):
        try:
            hour_of(given)
        except HourFault as fault:
            text = f"{fault}; or '{BRIGHTEST}' or '{TYPICAL}'"
            raise PydanticCustomError("hour", "{text}", {"text": text}) from None
    return given


_REFLECTED = Port(
    "reflected",
    "light",
    Role.OFFERS,
    optional=True,
    means="slanting light that the plane's cover turns back",
)
WeatherFile = Annotated[
    InstanceOf[Weather],
    BeforeValidator(_weather),
    WithJsonSchema({"type": "string", "description": "weather file: EPW, TMY3 (CSV) or TM2"}),
]
Hour = Annotated[str, AfterValidator(_hour)]
Wind = Annotated[float, measured("m/s", ge=0)]


class ClearPlace(BaseModel):
    """A place under a sky without clouds."""

    model_config = ConfigDict(frozen=True, extra="forbid")

    latitude: Annotated[float, measured("rad", ge=-pi / 2, le=pi / 2)] = Field(
        description="north positive"
    )
    longitude: Annotated[float, measured("rad", ge=-pi, le=pi)] = Field(description="east positive")
    altitude: Annotated[float, measured("m", ge=-500, le=9000)] = Field(
        0.0, description="above the sea"
    )
    time_zone: Annotated[float, measured("s", ge=-12 * _HOUR, le=14 * _HOUR)] | None = Field(
        None, description="ahead of Greenwich, summer time left out; by longitude without it"
    )
    turbidity: Annotated[float, measured("1", ge=1, le=12)] | None = Field(
        None, description="Linke's: 2 clean, 3 country, 5 town; from monthly maps without it"
    )

    @property
    def place(self) -> Place:
        """Where it is, in degrees and hours."""
        longitude = float(np.degrees(self.longitude))
        ahead = round(longitude / 15.0) if self.time_zone is None else self.time_zone / _HOUR
        return Place(float(np.degrees(self.latitude)), longitude, self.altitude, ahead)


class Sunlight(Equipment):
    """Light that falls on an aperture: irradiance in its plane times its area.

    Either `irradiance` says it, or a `place` under a clear sky, or a `weather` file; the latter two
    give the light on a `plane` in one `hour` of the year, and the sums of the year as results. The
    flowsheet is solved for that hour: the mean of a year is no state in which a plant ever works.
    Without `hour` it is the brightest hour of the year, which sizes the plant; `typical` is the
    hour nearest to the irradiance at which half of the year's light comes brighter.

    An hour is named by its end in local standard time, as weather files stamp it; the sun counts
    where it stands half an hour before. The spectrum has the shape of ASTM G173-03, global, always.

    With a `cover` on the plane `light` is what gets through it, and what it turns back because it
    slants leaves as `reflected`; without one, the default, no light is lost for its angle. The hour
    is chosen by all that falls.
    """

    kind: ClassVar[str] = "sunlight"
    family: ClassVar[str] = "sunlight"
    gives: ClassVar[tuple[str, ...]] = (
        "hour_of_year",
        "sun_zenith_rad",
        "sun_azimuth_rad",
        "incidence_rad",
        "year_in_plane_J_m2",
        "year_direct_in_plane_J_m2",
        "year_reflected_J_m2",
        "year_horizontal_J_m2",
        "year_direct_J_m2",
        "year_diffuse_J_m2",
        "year_brightest_W_m2",
        "year_sunlit_s",
        "year_air_K",
    )
    ports: ClassVar[tuple[Port, ...]] = (
        Port("light", "light", Role.OFFERS, main=True, means="light on the aperture"),
        _REFLECTED,
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "light + reflected = irradiance * aperture",
        "irradiance in the plane = beam * cos(incidence) + sky + ground",
        "year = sum over 8760 hours of irradiance * 3600 s",
    )
    sources: ClassVar[tuple[str, ...]] = (spectrum.SOURCE, *sky.SOURCES, *plane.SOURCES)

    irradiance: Irradiance | None = Field(
        None, description="irradiance in the plane of the aperture"
    )
    place: ClearPlace | None = Field(None, description="where the sky is clear")
    weather: WeatherFile | None = Field(
        None, description="weather file beside the flowsheet: EPW, TMY3 (CSV) or TM2"
    )
    hour: Hour | None = Field(
        None,
        description="end of the hour that is solved, as 21 Jun 12:00; or brightest (also without "
        "it), or typical",
    )
    plane: Plane | None = Field(None, description="how the aperture stands; level without it")
    aperture: Area = Field(description="area that the light falls on")
    direct: Fraction = Field(
        0.9,  # ASTM G173-03: direct and circumsolar 900.1 of global 1000.4 W/m2
        description="share of the irradiance that comes straight from the sun",
    )
    air: Temperature = Field(T_REFERENCE, description="temperature of the air around")
    wind: Wind = Field(1.0, description="speed of the wind")

    @model_validator(mode="after")
    def _of_one_sky(self) -> Sunlight:
        given = [name for name in _MARKS if getattr(self, name) is not None]
        if len(given) != 1:
            found = " and ".join(f"'{name}'" for name in given) or "none of them"
            text = (
                "one of 'irradiance', 'place' and 'weather' says how much light there is, "
                f"found {found}"
            )
            raise PydanticCustomError("sunlight", "{text}", {"text": text})
        strange = [name for name in _MEANINGLESS[given[0]] if name in stated(self)]
        if strange:
            text = f"'{strange[0]}' means nothing beside '{given[0]}': remove it"
            raise PydanticCustomError("sunlight", "{text}", {"text": text})
        return self

    def port_list(self) -> tuple[Port, ...]:
        covered = self.plane is not None and self.plane.cover is not None
        return self.ports if covered else tuple(p for p in self.ports if p is not _REFLECTED)

    # --- the year ----------------------------------------------------------------------------

    @property
    def sky(self) -> Weather | None:
        """The year of weather behind it; None if the irradiance is stated."""
        if self.place is not None:
            clear = self.place
            return sky.clear_sky(clear.place, clear.turbidity, self.air, self.wind)
        return self.weather

    def year(self) -> Light:
        """Return the light of all 8760 hours as a batch: five arrays of shape (8760,).

        With a cover on the plane it is what gets through it.
        ``field.run({"light": sun.year()})`` is a year of a field. ValueError if the irradiance is
        stated: one number has no year.
        """
        weather = self.sky
        if weather is None:
            raise ValueError("a stated irradiance has no year: give 'weather' or 'place'")
        found = self._in_plane(weather)
        rates = found.admitted * self.aperture
        return Light(  # arrays in the place of single numbers
            *_untyped(rates, found.admitted, found.direct, weather.air, weather.wind)
        )

    def _in_plane(self, weather: Weather) -> InPlane:
        return in_plane(weather, self.plane or Plane())

    def _chosen(self, total: np.ndarray) -> int:
        """The hour that is solved."""
        if self.hour is None or self.hour == BRIGHTEST:
            return int(np.argmax(total))
        if self.hour == TYPICAL:
            return typical_hour(total)
        return hour_of(self.hour)

    # --- physics -----------------------------------------------------------------------------

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        weather = self.sky
        if weather is None:
            assert self.irradiance is not None
            rate = self.irradiance * self.aperture
            return Outcome(
                {"light": Light(rate, self.irradiance, self.direct, self.air, self.wind)}
            )
        found = self._in_plane(weather)
        hour = self._chosen(found.total)
        admitted, total = float(found.admitted[hour]), float(found.total[hour])
        air, wind = float(weather.air[hour]), float(weather.wind[hour])
        light = Light(admitted * self.aperture, admitted, float(found.direct[hour]), air, wind)
        outlets: dict[str, Flow] = {"light": light}
        if _REFLECTED in self.port_list():
            beam = float(found.beam[hour] - found.admitted_beam[hour])
            lost = total - admitted
            share = beam / lost if lost > 0.0 else 0.0
            outlets["reflected"] = Light(lost * self.aperture, lost, share, air, wind)
        dark = Caution(
            "dark-hour", f"in the hour that ends at {name_of(hour)} no light falls on the aperture"
        )
        return Outcome(
            outlets,
            results={"hour_of_year": float(hour + 1)}
            | _angles(found, hour)
            | _sums(weather, found),
            cautions=() if total > 0.0 else (dark,),
        )


def typical_hour(total: np.ndarray) -> int:
    """Return the hour nearest to the irradiance above which half of all light comes."""
    order = np.argsort(total, kind="stable")
    summed = np.cumsum(total[order])
    return int(order[np.searchsorted(summed, 0.5 * summed[-1])]) if summed[-1] > 0.0 else 0


def _untyped(*arrays: Any) -> tuple[Any, ...]:
    return arrays


def _angles(found: InPlane, hour: int) -> dict[str, float]:
    return {
        "sun_zenith_rad": radians(found.zenith[hour]),
        "sun_azimuth_rad": radians(found.azimuth[hour]),
        "incidence_rad": radians(found.incidence[hour]),
    }


def _sums(weather: Weather, found: InPlane) -> dict[str, float]:
    sums = {
        "year_in_plane_J_m2": found.total,
        "year_direct_in_plane_J_m2": found.beam,
        "year_reflected_J_m2": found.total - found.admitted,
        "year_horizontal_J_m2": weather.horizontal,
        "year_direct_J_m2": weather.direct,
        "year_diffuse_J_m2": weather.diffuse,
    }
    return {name: _HOUR * float(np.sum(hours)) for name, hours in sums.items()} | {
        "year_brightest_W_m2": float(found.total.max()),
        "year_sunlit_s": _HOUR * int((weather.horizontal > 0.0).sum()),
        "year_air_K": float(weather.air.mean()),
    }

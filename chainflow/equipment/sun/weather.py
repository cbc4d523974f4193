"""What does a weather file say of each hour of a year?

The open formats EPW, TMY3 (CSV) and TM2, told apart by their first line and read by the library
pvlib. SI throughout: irradiance [W/m2], air temperature [K], wind [m/s], altitude [m]; latitude and
longitude [deg], north and east positive; time zone [h] east of Greenwich. Row k of every array is
the hour k of the year, named by its end (`chainflow.equipment.sun.hours`): the rows are counted,
whatever the stamps that a format writes.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import lru_cache
from pathlib import Path
from typing import Any

import numpy as np

from chainflow.basis.constants import ICE_POINT
from chainflow.basis.faults import FileFault
from chainflow.basis.names import shorten
from chainflow.equipment.sun.hours import HOURS, name_of

LARGEST = 20_000_000  # [bytes]
_LEAP_DAY = slice(24 * 59, 24 * 60)  # 29 Feb among 8784 hours
_READING = (  # column, least, most, unit: what lies outside is a mark for a missing reading
    ("ghi", 0.0, 1500.0, "W/m2"),
    ("dni", 0.0, 1500.0, "W/m2"),
    ("dhi", 0.0, 1500.0, "W/m2"),
    ("temp_air", -95.0, 65.0, "degC"),
    ("wind_speed", 0.0, 120.0, "m/s"),
)
_WHAT = {
    "ghi": "global irradiance",
    "dni": "direct normal irradiance",
    "dhi": "diffuse irradiance",
    "temp_air": "air temperature",
    "wind_speed": "wind speed",
}
_TM2_NAMES = {"GHI": "ghi", "DNI": "dni", "DHI": "dhi", "DryBulb": "temp_air", "Wspd": "wind_speed"}
_TM2_TENTHS = ("DryBulb", "Wspd")
# whatever a reader stumbles over in a file that is something else
_NOT_READ = (ValueError, LookupError, TypeError, AttributeError, NameError, ArithmeticError)


class WeatherFault(ValueError):
    """A file that is no year of weather; one sentence that begins with its name."""


@dataclass(frozen=True, slots=True)
class Place:
    """Where on the earth."""

    latitude: float  # [deg]
    longitude: float  # [deg]
    altitude: float  # [m]
    zone: float  # [h]


@dataclass(frozen=True, slots=True, eq=False)
class Weather:
    """A year at a place; arrays of shape (8760,)."""

    name: str
    place: Place
    horizontal: np.ndarray  # global irradiance on level ground [W/m2]
    direct: np.ndarray  # of the beam, on a plane that faces the sun [W/m2]
    diffuse: np.ndarray  # of the sky on level ground [W/m2]
    air: np.ndarray  # [K]
    wind: np.ndarray  # [m/s]


def read_weather(name: str, folder: str | Path = "") -> Weather:
    """Return the year in a weather file; a relative name counts from `folder`.

    Raises `FileFault` if there is no such file, `WeatherFault` if it is no weather file.
    """
    path = Path(folder) / name
    try:
        size, changed = path.stat().st_size, path.stat().st_mtime_ns
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or "it is no path of a file"
        raise FileFault(f"cannot read the weather file {shorten(name, 100)}: {reason}") from None
    if size > LARGEST:
        raise WeatherFault(
            f"{shorten(name, 100)} is larger than {LARGEST} bytes, wanted 8760 hours of weather"
        )
    return _read(str(path), shorten(name, 100), changed)


@lru_cache(maxsize=8)
def _read(path: str, shown: str, changed: int) -> Weather:  # noqa: ARG001 - `changed` keys the cache
    try:
        with Path(path).open("rb") as file:
            first = file.readline(2000).decode("utf-8", errors="replace").strip()
    except OSError as error:
        raise FileFault(f"cannot read the weather file {shown}: {error.strerror}") from None
    try:
        columns, place = _FORMATS[_format(first)](path)
    except _NOT_READ:
        raise WeatherFault(
            f"{shown} is no weather file: by its first line it would be {_format(first)}, but it "
            "does not read as that; wanted EPW, TMY3 (CSV) or TM2"
        ) from None
    return _checked(columns, place, shown)


def _format(first: str) -> str:
    if first.upper().startswith("LOCATION,"):
        return "EPW"
    return "TMY3" if "," in first else "TM2"


def _epw(path: str) -> tuple[Mapping[str, Any], Place]:
    from pvlib.iotools import read_epw

    data, head = read_epw(path)
    return data, Place(head["latitude"], head["longitude"], head["altitude"], head["TZ"])


def _tmy3(path: str) -> tuple[Mapping[str, Any], Place]:
    from pvlib.iotools import read_tmy3

    data, head = read_tmy3(path, map_variables=True)
    return data, Place(head["latitude"], head["longitude"], head["altitude"], head["TZ"])


def _tm2(path: str) -> tuple[Mapping[str, Any], Place]:
    from pvlib.iotools import read_tmy2

    data, head = read_tmy2(path)
    columns = {
        name: data[old] / (10.0 if old in _TM2_TENTHS else 1.0) for old, name in _TM2_NAMES.items()
    }
    return columns, Place(head["latitude"], head["longitude"], head["altitude"], head["TZ"])


_FORMATS = {"EPW": _epw, "TMY3": _tmy3, "TM2": _tm2}


def _checked(columns: Mapping[str, Any], place: Place, shown: str) -> Weather:
    found = {}
    for name, low, high, unit in _READING:
        values = np.asarray(columns[name], dtype=float)
        if len(values) == HOURS + 24:
            values = np.delete(values, _LEAP_DAY)
        if len(values) != HOURS:
            raise WeatherFault(
                f"{shown} has {len(values)} rows, wanted the {HOURS} hours of a year"
            )
        wrong = np.flatnonzero(~((values >= low) & (values <= high)))
        if wrong.size:
            first = int(wrong[0])
            raise WeatherFault(
                f"{shown}: {wrong.size} of its hours have no {_WHAT[name]}, the first is "
                f"{name_of(first)} with {values[first]:g} {unit}, wanted {low:g} to {high:g} "
                f"{unit}: fill the gaps or take another file"
            )
        found[name] = values
    return Weather(
        shown,
        place,
        found["ghi"],
        found["dni"],
        found["dhi"],
        found["temp_air"] + ICE_POINT,
        found["wind_speed"],
    )

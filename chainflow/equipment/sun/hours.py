"""Which hour of the year is meant?

A year has 8760 hours, counted from 0; hour 0 goes from midnight to 1:00 on the first of January.
An hour is named by its *end*, in local standard time, as weather files stamp it: ``21 Jun 12:00``
is the hour from 11:00 to 12:00, and the sun stands where it stands at 11:30. No leap day, no
summer time.
"""

from __future__ import annotations

import re

from chainflow.basis.names import shorten

HOURS = 8760
MONTHS = ("Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec")
_DAYS = (31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31)
_TEXT = re.compile(
    r"(?P<day>[0-9]{1,2}) (?P<month>[A-Za-z]{3}) (?P<hour>[0-9]{1,2}):(?P<minute>[0-9]{2})"
)
_WANTED = "wanted day, month and the end of an hour, as in '21 Jun 12:00'"


class HourFault(ValueError):
    """A text that names no hour of the year; one sentence."""


def hour_of(text: str) -> int:
    """Return the number of an hour of the year, 0 to 8759; raises `HourFault`."""
    match = _TEXT.fullmatch(text.strip())
    if match is None:
        raise HourFault(f"{shorten(text)} is no hour, {_WANTED}")
    month = match["month"].capitalize()
    if month not in MONTHS:
        raise HourFault(
            f"{shorten(text)}: there is no month {match['month']}, wanted one of "
            f"{', '.join(MONTHS)}"
        )
    place, day = MONTHS.index(month), int(match["day"])
    if not 1 <= day <= _DAYS[place]:
        raise HourFault(
            f"{shorten(text)}: {month} has the days 1 to {_DAYS[place]} "
            "(a year of weather has no leap day)"
        )
    end, minute = int(match["hour"]), int(match["minute"])
    if minute or not end <= 24:
        raise HourFault(f"{shorten(text)}: hours end at 1:00, 2:00 ... 24:00, {_WANTED}")
    return (24 * (sum(_DAYS[:place]) + day - 1) + end - 1) % HOURS


def name_of(hour: int) -> str:
    """Return the name of an hour of the year, the end of it."""
    days, end = divmod(hour, 24)
    for month, length in zip(MONTHS, _DAYS, strict=True):
        if days < length:
            return f"{days + 1} {month} {end + 1}:00"
        days -= length
    raise HourFault(f"hour {hour} is outside the {HOURS} hours of a year")

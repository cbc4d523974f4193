"""Do the mirrors of a concentrator face the sun?

A receiver gets only what comes straight from the sun, and mirrors are counted by the light that
falls on a plane facing it; what falls on a plane that stands still says little about them.
"""

from __future__ import annotations

from collections.abc import Iterator
from math import sin

from chainflow.equipment.concentrator import Concentrator
from chainflow.equipment.sun.plane import Plane
from chainflow.equipment.sunlight import Sunlight
from chainflow.flowsheet.network import Flowsheet

HALF_ANGLE = 4.652e-3  # [rad], of the sun's disc seen from the earth, 959.6 arc seconds (M)
# the most that mirrors can do which turn about one axis; closed form
MOST_ABOUT_ONE_AXIS = 1.0 / sin(HALF_ANGLE)


def mirrors_astray(sheet: Flowsheet) -> Iterator[tuple[str, str]]:
    """Yield concentrators whose light falls on a plane that does not face the sun: name, sentence.

    Light of a stated irradiance has no plane: it is taken as given on mirrors that face the sun.
    """
    for name, piece in sheet.equipment.items():
        if not isinstance(piece, Concentrator):
            continue
        for source in _skies(sheet, name):
            trouble = _trouble(sheet.equipment[source], piece.concentration)
            if trouble:
                yield name, f"the light of {source} falls on {trouble}"


def _skies(sheet: Flowsheet, name: str) -> list[str]:
    """Return the suns whose light gets to a piece, be it through splitters."""
    found, seen, waiting = [], {name}, [name]
    while waiting:
        senders = [line.source for line in sheet.into(waiting.pop())]
        fresh = [sender for sender in dict.fromkeys(senders) if sender not in seen]
        seen.update(fresh)
        suns = [one for one in fresh if isinstance(sheet.equipment[one], Sunlight)]
        found += suns
        waiting += [one for one in fresh if one not in suns]
    return found


def _trouble(sun: object, concentration: float) -> str:
    """Say how a plane does not face the sun; empty if it does, or nobody knows."""
    if not isinstance(sun, Sunlight) or sun.irradiance is not None:
        return ""
    mount = (sun.plane or Plane()).mount
    if mount == "fixed":
        return (
            "a plane that stands still, mirrors follow the sun: write plane: {mount: two-axis} "
            "for the light on a concentrator, and another sunlight for modules that stand still"
        )
    if mount == "single-axis" and concentration > MOST_ABOUT_ONE_AXIS:
        return (
            f"a plane that turns about one axis, which cannot concentrate {concentration:.4g} "
            f"times, {MOST_ABOUT_ONE_AXIS:.3g} at most: write plane: {{mount: two-axis}}, or lower "
            "'concentration'"
        )
    return ""

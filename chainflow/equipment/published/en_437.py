"""Groups of natural gas by Wobbe index, after EN 437, Test gases - Test pressures.

Certainty: M (from memory, the standard was not seen).  Upper Wobbe index of the dry gas [J/m3],
combustion and metering at 15 degC, 1.01325 bar.  National rules are narrower and also limit
hydrogen, oxygen, dew point and sulphur: a gas inside a group is not yet one that a grid takes.
"""

from typing import Literal

GasGroup = Literal["H", "L", "E"]

UPPER_WOBBE_INDEX: dict[GasGroup, tuple[float, float]] = {
    "H": (45.7e6, 54.7e6),
    "L": (39.1e6, 44.8e6),
    "E": (40.9e6, 54.7e6),
}

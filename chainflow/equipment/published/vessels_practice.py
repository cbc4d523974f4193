"""What vessels weigh and hold, and what they lose.

Certainty: M (practice, from memory) for mass shares and losses; R for the cavern's 0.04 % a year
(UK consultancy, 2022) and for the 0.03 to 0.1 % a day of large hydrogen spheres (trade text).  The
wall shares of volume are own estimates from usual wall thicknesses (common practice, no source).
They say nothing about one maker's vessel and are meant to be overridden.
"""

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class VesselFigures:
    """One vessel: mass share of the fluid, inner per outer volume, loss, pressure that stays."""

    mass_share: float  # fluid / (fluid + vessel)
    volume_share: float  # inside / outside
    loss: float  # of the contents per second
    least_pressure: float  # [Pa] that stays when empty
    meant_for: str  # phase: gas, liquid


_DAY = 86400.0
_YEAR = 365.25 * _DAY

VESSELS = {
    "hydrogen-350": VesselFigures(0.05, 0.80, 0.0, 20e5, "gas"),  # 4 to 6 wt%
    "hydrogen-700": VesselFigures(0.055, 0.68, 0.0, 20e5, "gas"),  # type IV, 4.5 to 6 wt%
    "hydrogen-tubes": VesselFigures(0.0125, 0.85, 0.0, 10e5, "gas"),  # 200 bar steel, 1 to 1.5 wt%
    "cng-steel": VesselFigures(0.14, 0.88, 0.0, 10e5, "gas"),  # type I, 12 to 16 wt%
    "cng-composite": VesselFigures(0.37, 0.82, 0.0, 10e5, "gas"),  # type IV, 35 to 40 wt%
    "lng-trailer": VesselFigures(0.70, 0.80, 0.002 / _DAY, 0.0, "liquid"),  # 0.1 to 0.3 %/d
    "lng-tank": VesselFigures(0.70, 0.85, 0.0005 / _DAY, 0.0, "liquid"),  # land tank 0.05 %/d
    "liquid-hydrogen-trailer": VesselFigures(0.12, 0.75, 0.005 / _DAY, 0.0, "liquid"),  # 0.3 to 1
    "liquid-hydrogen-sphere": VesselFigures(0.20, 0.85, 0.0005 / _DAY, 0.0, "liquid"),  # 0.03-0.06
    "salt-cavern": VesselFigures(1.0, 1.0, 0.0004 / _YEAR, 0.0, "gas"),
    "liquid-tank": VesselFigures(0.93, 0.98, 0.00005 / _DAY, 0.0, "liquid"),  # vessel 5 to 10 %
}

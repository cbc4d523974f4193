"""What do bubbles and the diaphragm cost in an alkaline cell?

Hammoudi, Henao, Agbossou, Dube, Doumbia, New multi-physics approach for modelling and design of
alkaline electrolyzers, Int. J. Hydrogen Energy 37 (2012) 13895; bubble cover after Vogt. Certainty
r (diaphragm r + C; a copy prints 0.5^(T/50), which is wrong). The published cover is not monotone
in temperature and negative above 87 degC: it is clamped to 0 to 0.9 here.
"""

from math import exp

SOURCE = "bubbles, diaphragm: Hammoudi et al., Int. J. Hydrogen Energy 37 (2012) 13895 (r; clamped)"
LIMITING_CURRENT = 3e5  # [A/m2], 30 A/cm2
GREATEST_COVER = 0.9


def bubble_cover(
    density: float, temperature: float, pressure: float, vapour: float, limiting: float
) -> float:
    """Return the share of an electrode that bubbles cover [-], 0 to 0.9.

    Current densities [A/m2], temperature [K], pressure and vapour pressure [Pa].
    """
    ratio = temperature / 298.0
    base = max(-97.25 + 182.0 * ratio - 84.0 * ratio**2, 0.0)
    cover = base * (density / limiting) ** 0.3 * pressure / (pressure - vapour)
    return min(cover, GREATEST_COVER)


def diaphragm_resistance(temperature: float) -> float:
    """Return the resistance of the diaphragm [ohm m2] at a temperature [K]."""
    return 1e-4 * (0.060 + 80.0 * exp(-temperature / 50.0))

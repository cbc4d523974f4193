"""How well does a wet perfluorosulfonic-acid membrane conduct protons?

Springer, Zawodzinski, Gottesfeld, Polymer electrolyte fuel cell model, J. Electrochem. Soc. 138
(1991) 2334, equation 23. Certainty r + C: restated by many, evaluated here. Good for a water
content (mol water per mol of acid groups) above one; 20 to 22 in contact with liquid water (M), 14
over saturated vapour (M). It claims nothing about other ionomers or aged membranes.
"""

from math import exp

SOURCE = "membrane: Springer, Zawodzinski, Gottesfeld, J. Electrochem. Soc. 138 (1991) 2334 (r + C)"
LIQUID_WATER_CONTENT = 22.0  # [mol/mol], membrane in contact with liquid water (M)


def conductivity(water_content: float, temperature: float) -> float:
    """Return the conductivity [S/m] at a water content [mol/mol] above one and temperature [K]."""
    at_30 = 0.005139 * water_content - 0.00326  # [S/cm]
    return 100.0 * at_30 * exp(1268.0 * (1.0 / 303.0 - 1.0 / temperature))

"""How well does caustic potash conduct?

Gilliam, Graydon, Kirk, Thorpe, A review of specific conductivities of potassium hydroxide
solutions, Int. J. Hydrogen Energy 32 (2007) 359, doi 10.1016/j.ijhydene.2006.10.062. Certainty
r + C (four restatements, evaluated here); 0 to 12 mol/L, 0 to 100 degC, without bubbles.
"""

from math import exp

SOURCE = "caustic potash: Gilliam et al., Int. J. Hydrogen Energy 32 (2007) 359 (r + C)"


def molarity(mass_share: float, temperature: float) -> float:
    """Return the KOH content [mol/L] of a solution by its mass share [-] and temperature [K]."""
    percent = 100.0 * mass_share
    density = 183.1221 - 0.56845 * temperature + 984.5679 * exp(percent / 115.96277)
    return percent * density / 5610.5


def conductivity(molar: float, temperature: float) -> float:
    """Return the conductivity [S/m] by KOH content [mol/L] and temperature [K]."""
    per_cm = (
        -2.041 * molar
        - 0.0028 * molar**2
        + 0.005332 * molar * temperature
        + 207.2 * molar / temperature
        + 0.001043 * molar**3
        - 3e-7 * molar**2 * temperature**2
    )
    return 100.0 * per_cm

"""Which voltage splits water, in closed form, and how much water vapour stands over caustic potash?

LeRoy, Bowen, LeRoy, The thermodynamics of aqueous water electrolysis, J. Electrochem. Soc. 127
(1980) 1954; vapour pressure after Balej, Int. J. Hydrogen Energy 10 (1985) 233. Certainty r + C.
The vapour pressure is used by the physical alkaline cell. The voltage (liquid water, everything at
1 bar, 25 to 250 degC) is only a check on our own Gibbs energies, which it meets to 0.5 mV.
"""

from math import log, log10

SOURCE = (
    "vapour over caustic potash: LeRoy, Bowen, LeRoy, J. Electrochem. Soc. 127 (1980) 1954 (r + C)"
)


def reversible_voltage(temperature: float) -> float:
    """Return the reversible voltage of liquid water [V] at a temperature [K]."""
    t = temperature
    return 1.5184 - 1.5421e-3 * t + 9.523e-5 * t * log(t) + 9.84e-8 * t**2


def vapour_pressure(molal: float, temperature: float) -> float:
    """Return the pressure of water [Pa] over KOH of a molality [mol/kg] at a temperature [K]."""
    m, t = molal, temperature
    pure = 35.4462 - 3343.93 / t - 10.9 * log10(t) + 0.0041645 * t
    factor = 1.0 - 0.0012062 * m + 5.6024e-4 * m**2 - 7.8228e-6 * m**3
    shift = -0.01508 * m - 0.0016788 * m**2 + 2.25887e-5 * m**3
    return 1e5 * float(10.0 ** (shift + factor * pure))

"""The area resistance that reference designs of steam-electrolysis plants used.

O'Brien, Stoots, Herring, Hawkes, Idaho National Laboratory reports 2008 to 2010, from memory (M):
ASR = ASR(1100 K) - 0.463 + 3.973e-5 exp(10 300/T) ohm cm2 with 0.28 to 0.4 ohm cm2 at 1100 K.
Steep: 750 to 900 degC only.
"""

from math import exp

SOURCE = "set obrien-2010: O'Brien, Stoots, Herring, Hawkes, INL reports 2008-2010 (M)"
NUMBERS = {"resistance": 0.40e-4}  # [ohm m2] at 1100 K


def area_resistance(at_1100: float, temperature: float) -> float:
    """Return the area resistance [ohm m2] from the one at 1100 K and the temperature [K]."""
    return at_1100 + 1e-4 * (-0.463 + 3.973e-5 * exp(10300.0 / temperature))

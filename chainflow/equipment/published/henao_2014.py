"""Kinetics of nickel electrodes in caustic potash.

Henao, Kloeckner, Blunier et al., J. Power Sources 250 (2014) 58. Certainty r. Transfer coefficients
rise and exchange currents move with temperature as fitted between about 25 and 90 degC; plain
nickel, not activated.
"""

SOURCE = "kinetics: Henao et al., J. Power Sources 250 (2014) 58 (r)"


def anode(temperature: float) -> tuple[float, float]:
    """Return transfer number (coefficient times two electrons) and exchange current [A/m2]."""
    current = 30.4 - 0.206 * temperature + 0.00035 * temperature**2  # [mA/cm2]
    return 2.0 * (0.0675 + 0.00095 * temperature), 10.0 * current


def cathode(temperature: float) -> tuple[float, float]:
    """Return transfer number (coefficient times two electrons) and exchange current [A/m2]."""
    current = 13.72491 - 0.09055 * temperature + 0.0001555 * temperature**2  # [mA/cm2]
    return 2.0 * (0.1175 + 0.00095 * temperature), 10.0 * current

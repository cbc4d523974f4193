"""Kinetics of electrodes in caustic potash with one activation energy.

Abdin, Webb, Gray, Modelling and simulation of an alkaline electrolyser cell, Energy 138 (2017)
316. Certainty r; 0.348 + 0.025 V at 0.3 A/cm2 and 80 degC (C). Exchange currents are those of flat
metal at 25 degC times a roughness.
"""

from math import exp

from chainflow.basis.constants import GAS_CONSTANT

SOURCE = "kinetics: Abdin, Webb, Gray, Energy 138 (2017) 316 (r)"
_ACTIVATION = 80.51e3  # [J/mol]


def anode(temperature: float) -> tuple[float, float]:
    """Return transfer number and exchange current [A/m2]."""
    return 1.65, 1.25 * 1e-7 * _arrhenius(temperature)


def cathode(temperature: float) -> tuple[float, float]:
    """Return transfer number and exchange current [A/m2]."""
    return 0.73, 1.05 * 10.0 * _arrhenius(temperature)


def _arrhenius(temperature: float) -> float:
    return exp(-_ACTIVATION / GAS_CONSTANT * (1.0 / temperature - 1.0 / 298.15))

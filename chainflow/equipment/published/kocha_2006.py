"""How fast does hydrogen pass a wet perfluorosulfonic-acid membrane?

Kocha, Yang, Yi, Characterization of gas crossover in PEM fuel cells, AIChE J. 52 (2006) 1916.
Certainty M, cross-checked: 13 % above the 2.95e-14 mol/(m s Pa) that Trinke et al., ECS Trans.
75(14) (2016) 1081, measured at 60 degC (R, another membrane), and 4 % below the value of
Schalenbach et al., Int. J. Hydrogen Energy 38 (2013) 14921, at 80 degC (M). Pure diffusion: it
leaves out convection, cracks and the supersaturation of the water beside a working electrode.
"""

from math import exp

from chainflow.basis.constants import GAS_CONSTANT

SOURCE = "hydrogen crossover: Kocha, Yang, Yi, AIChE J. 52 (2006) 1916 (M, cross-checked)"
_PER_CM_BAR = 1e-3  # mol/(cm s bar) is 1e-3 mol/(m s Pa)


def hydrogen_permeability(temperature: float) -> float:
    """Return the permeability for hydrogen [mol/(m s Pa)] at a temperature [K]."""
    return _PER_CM_BAR * 6.6e-8 * exp(-21030.0 / (GAS_CONSTANT * temperature))

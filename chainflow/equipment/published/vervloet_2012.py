"""Chain growth on cobalt by the local ratio of hydrogen to carbon monoxide in the pellet.

    alpha = 1 / [1 + k (c_H2/c_CO)^beta exp(dE/R (1/493.15 K - 1/T))]

Vervloet, Kapteijn, Nijenhuis, van Ommen, Catal. Sci. Technol. 2 (2012) 1221. Certainty M (from
memory, arithmetic checked). The ratio is the one inside the catalyst at the local conversion:
taking that of the gas leaves the diffusion of CO into the pellet out.
"""

from math import exp

from chainflow.basis.constants import GAS_CONSTANT

SOURCE = "chain growth: Vervloet et al., Catal. Sci. Technol. 2 (2012) 1221 (M)"
NUMBERS = {"k": 0.0567, "beta": 1.76, "dE": 120.4e3}  # dE [J/mol]
_TEMPERATURE = 493.15  # [K]


def chain_growth(ratio: float, temperature: float, numbers: dict[str, float]) -> float:
    """Return alpha [-] for H2/CO [-] at a temperature [K]."""
    heat = numbers["dE"] / GAS_CONSTANT * (1.0 / _TEMPERATURE - 1.0 / temperature)
    return 1.0 / (1.0 + numbers["k"] * ratio ** numbers["beta"] * exp(heat))

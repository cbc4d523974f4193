"""How fast does carbon monoxide react on a cobalt catalyst?

    -r_CO = a p_CO p_H2 / (1 + b p_CO)^2

Yates and Satterfield, Energy and Fuels 5 (1991) 168, from 220 to 240 degC, 5 to 15 bar, H2/CO 1.5
to 3.5, 29 wt% Co/MgO/SiO2 in a slurry; their table at 240 degC, a 75.76 mmol/(min g MPa2), b 11.61
1/MPa (r). With temperature after Maretto and Krishna, Catal. Today 52 (1999) 279: exponents r,
power of the prefactor M; together they meet both points of the table to 0.02 % (computed).
Catalysts of today are 3 to 10 times more active (M); water, deactivation and diffusion are left
out.
"""

from math import exp

SOURCE = (
    "rate: Yates and Satterfield, Energy Fuels 5 (1991) 168 (r), with temperature after Maretto "
    "and Krishna, Catal. Today 52 (1999) 279 (r, M)"
)
NUMBERS = {
    "a": 8.8533e-13,  # [mol/(s kg Pa2)] at 493.15 K
    "a_slope": 4494.41,  # [K]
    "b": 2.226e-5,  # [1/Pa] at 493.15 K
    "b_slope": -8236.0,  # [K]
}
LOWEST, HIGHEST = 493.15, 513.15  # [K] of the measurements
_TEMPERATURE = 493.15  # [K]


def constants(temperature: float, numbers: dict[str, float]) -> tuple[float, float]:
    """Return a [mol/(s kg Pa2)] and b [1/Pa] at a temperature [K]."""
    inverse = 1.0 / _TEMPERATURE - 1.0 / temperature
    a = numbers["a"] * exp(numbers["a_slope"] * inverse)
    return a, numbers["b"] * exp(numbers["b_slope"] * inverse)

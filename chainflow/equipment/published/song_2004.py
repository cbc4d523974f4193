"""Chain growth on cobalt by composition and temperature.

    alpha = (a y_CO / (y_CO + y_H2) + b) [1 - c (T - 533 K)]

Song, Ramkrishna, Trinh, Wright, Korean J. Chem. Eng. 21 (2004) 308: the correlation of
Yermakova and Anikeev with a slope by temperature. Certainty M (from memory, arithmetic checked).
It disagrees with `vervloet_2012` by up to 0.14 at 240 degC.
"""

SOURCE = "chain growth: Song et al., Korean J. Chem. Eng. 21 (2004) 308 (M)"
NUMBERS = {"a": 0.2332, "b": 0.6330, "c": 0.0039}
_TEMPERATURE = 533.0  # [K]


def chain_growth(ratio: float, temperature: float, numbers: dict[str, float]) -> float:
    """Return alpha [-] for H2/CO [-] in the reactor at a temperature [K]."""
    level = numbers["a"] / (1.0 + ratio) + numbers["b"]
    return level * (1.0 - numbers["c"] * (temperature - _TEMPERATURE))

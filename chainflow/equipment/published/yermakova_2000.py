"""Chain growth on cobalt by the composition of the gas.

    alpha = a y_CO / (y_CO + y_H2) + b

Yermakova and Anikeev, Ind. Eng. Chem. Res. 39 (2000) 1453: a 0.2332 +- 0.0740, b 0.6330 +- 0.0420
at 533 K. Certainty M (from memory, arithmetic checked). It knows nothing of temperature, water or
pressure; `song_2004` adds the temperature.
"""

SOURCE = "chain growth: Yermakova and Anikeev, Ind. Eng. Chem. Res. 39 (2000) 1453 (M)"
NUMBERS = {"a": 0.2332, "b": 0.6330}


def chain_growth(ratio: float, temperature: float, numbers: dict[str, float]) -> float:  # noqa: ARG001 # all three correlations are called alike
    """Return alpha [-] for H2/CO [-] in the reactor; the temperature [K] is of no account."""
    return numbers["a"] / (1.0 + ratio) + numbers["b"]

"""At which pressure does water boil, and how much gas does it hold?

Saturation pressure by the auxiliary equation of IAPWS-95 (Wagner and Pruss, J. Phys. Chem. Ref.
Data 31 (2002) 387) and Henry's constants by IAPWS G7-04, Guideline on the Henry's constant and
vapor-liquid distribution constant (2004). Temperature [K], pressure and constants [Pa].

There is no ice. The formulas are meant for 273.16 K and above; below, they describe supercooled
water (at 233 K the pressure lies within 1 % of Murphy and Koop, Q. J. R. Meteorol. Soc. 131 (2005)
1539), and below 233 K they are continued to 200 K only so that searches do not break.
"""

from functools import lru_cache
from math import exp, log
from typing import NamedTuple

from chainflow.thermo.species import LOWEST_TEMPERATURE
from chainflow.thermo.validity import StateError

CRITICAL_TEMPERATURE = 647.096  # [K], IAPWS-95
CRITICAL_PRESSURE = 22.064e6  # [Pa], IAPWS-95


class HenryData(NamedTuple):
    """Coefficients of IAPWS G7-04 and the range they were fitted to [K]."""

    a: float
    b: float
    c: float
    lowest: float
    highest: float


HENRY = {
    "H2": HenryData(-4.73284, 6.08954, 6.06066, 273.15, 636.09),
    "O2": HenryData(-9.44833, 4.43822, 11.42005, 274.15, 616.52),
    "N2": HenryData(-9.67578, 4.72162, 11.70585, 278.12, 636.46),
    "CO": HenryData(-10.52862, 5.13259, 12.01421, 278.15, 588.67),
    "CO2": HenryData(-8.55445, 4.01195, 9.52345, 274.19, 642.66),
    "CH4": HenryData(-10.44708, 4.66491, 12.12986, 275.46, 633.11),
    "Ar": HenryData(-8.40954, 4.29587, 10.52779, 273.19, 568.36),
    "C2H6": HenryData(-19.67563, 4.51222, 20.62567, 275.44, 473.46),
}


class LogAndSlopes(NamedTuple):
    """A logarithm and its first and second derivative by temperature [-], [1/K], [1/K2]."""

    value: float
    first: float
    second: float


def saturation_pressure(temperature: float) -> float:
    """Return the vapour pressure of liquid water [Pa] at a temperature [K].

    Good to 0.01 % from 273.16 to 647.096 K; continued down to 200 K (see the module's head).
    Raises `StateError` outside 200 to 647.096 K.
    """
    if not LOWEST_TEMPERATURE <= temperature <= CRITICAL_TEMPERATURE:
        raise StateError(
            f"liquid water at {temperature:g} K: wanted {LOWEST_TEMPERATURE:g} to "
            f"{CRITICAL_TEMPERATURE:g} K"
        )
    tau = 1.0 - temperature / CRITICAL_TEMPERATURE
    return CRITICAL_PRESSURE * exp(_reduced_sum(tau) * CRITICAL_TEMPERATURE / temperature)


def saturation_temperature(pressure: float) -> float:
    """Return the temperature [K] at which water boils at a pressure [Pa].

    Raises `StateError` below the vapour pressure at 200 K or above the critical pressure.
    """
    lowest = saturation_pressure(LOWEST_TEMPERATURE)
    if not lowest <= pressure <= CRITICAL_PRESSURE:
        raise StateError(
            f"water does not boil at {pressure:g} Pa: wanted {lowest:.3g} Pa to "
            f"{CRITICAL_PRESSURE:.6g} Pa"
        )
    wanted = log(pressure)
    temperature = 1.0 / (1.0 / 373.124 - (wanted - log(101325.0)) / 4890.0)
    temperature = min(max(temperature, LOWEST_TEMPERATURE), CRITICAL_TEMPERATURE)
    for _ in range(50):
        found = log_saturation_pressure(temperature)
        # the logarithm is almost straight in 1/T, so the step is taken there
        inverse = 1.0 / temperature + (found.value - wanted) / (found.first * temperature**2)
        better = min(max(1.0 / inverse, LOWEST_TEMPERATURE), CRITICAL_TEMPERATURE)
        if abs(better - temperature) <= 1e-12 * temperature:
            return better
        temperature = better
    return temperature


@lru_cache(maxsize=256)
def log_saturation_pressure(temperature: float) -> LogAndSlopes:
    """Return the logarithm of the vapour pressure [Pa] and its slopes by temperature [K]."""
    ratio = temperature / CRITICAL_TEMPERATURE
    tau = max(1.0 - ratio, 0.0)
    value = _reduced_sum(tau)
    root = tau**0.5
    first = (
        -7.85951783
        + 1.5 * 1.84408259 * root
        + tau**2 * (3 * -11.7866497 + 3.5 * 22.6807411 * root + 4 * -15.9618719 * tau)
        + 7.5 * 1.80122502 * tau**6 * root
    )
    second = (
        0.75 * 1.84408259 / max(root, 1e-8)
        + tau * (6 * -11.7866497 + 8.75 * 22.6807411 * root + 12 * -15.9618719 * tau)
        + 48.75 * 1.80122502 * tau**5 * root
    )
    return _over_ratio(log(CRITICAL_PRESSURE), value, first, second, ratio)


def _reduced_sum(tau: float) -> float:
    root = tau**0.5
    return (
        -7.85951783 * tau
        + 1.84408259 * tau * root
        + tau**3 * (-11.7866497 + 22.6807411 * root + -15.9618719 * tau)
        + 1.80122502 * tau**7 * root
    )


def _over_ratio(
    start: float, value: float, first: float, second: float, ratio: float
) -> LogAndSlopes:
    """Turn f(tau), f', f'' into ``start + f/ratio`` and its slopes by temperature."""
    inverse = 1.0 / ratio
    slope = -inverse * (first + value * inverse)
    bend = inverse * (second + 2 * inverse * (first + value * inverse))
    return LogAndSlopes(
        start + value * inverse, slope / CRITICAL_TEMPERATURE, bend / CRITICAL_TEMPERATURE**2
    )


def henry_constant(name: str, temperature: float) -> float:
    """Return Henry's constant k_H [Pa] of a gas in water, ``x = p_gas / k_H``.

    Fitted ranges stand in `HENRY`; between 200 K and the critical point of water the formula is
    continued beyond them. Raises `StateError` outside, `ValueError` for a gas without data.
    """
    if not LOWEST_TEMPERATURE <= temperature <= CRITICAL_TEMPERATURE:
        raise StateError(
            f"Henry's constant of {name} at {temperature:g} K: wanted {LOWEST_TEMPERATURE:g} to "
            f"{CRITICAL_TEMPERATURE:g} K"
        )
    return exp(log_henry_constant(name, temperature).value)


def henry_slope(name: str, temperature: float) -> float:
    """Return d ln k_H / d(1/T) [K]; times the gas constant it is the heat of dissolution."""
    return -(temperature**2) * log_henry_constant(name, temperature).first


@lru_cache(maxsize=1024)
def log_henry_constant(name: str, temperature: float) -> LogAndSlopes:
    """Return ln(k_H/Pa) and its slopes by temperature [K]."""
    if name not in HENRY:
        raise ValueError(f"no Henry's constant for {name} in water; known: {', '.join(HENRY)}")
    data = HENRY[name]
    ratio = temperature / CRITICAL_TEMPERATURE
    tau = max(1.0 - ratio, 1e-8)  # the slopes of tau^0.355 have no end at the critical point
    power = data.b * tau**0.355
    slope, bend = 0.355 * power / tau, -0.355 * 0.645 * power / tau**2
    start = _over_ratio(0.0, data.a + power, slope, bend, ratio)
    outer = data.c * ratio**-0.41 * exp(tau)
    factor = -(0.41 / ratio + 1.0) / CRITICAL_TEMPERATURE
    pressure = log_saturation_pressure(temperature)
    return LogAndSlopes(
        pressure.value + start.value + outer,
        pressure.first + start.first + outer * factor,
        pressure.second + start.second + outer * (factor**2 + 0.41 / temperature**2),
    )

"""Is a state one that the data can describe?

Cantera clips negative amounts, extrapolates polynomials and normalises whatever it gets without a
word. Everything that enters a kernel passes here first: amounts [mol/s], temperature [K],
pressure [Pa].
"""

from collections.abc import Sequence
from math import isfinite
from typing import TYPE_CHECKING

from chainflow.basis.faults import ChainflowError
from chainflow.thermo.species import HIGHEST_TEMPERATURE, LOWEST_TEMPERATURE

if TYPE_CHECKING:
    from chainflow.thermo.components import Array

ROUND_OFF = 1e-12  # negative amounts up to this share of the total are taken as zero


class StateError(ChainflowError, ValueError):
    """A state outside the data: negative or non-finite amounts, temperature or pressure."""

    exit_code = 3


def require_state(temperature: float, pressure: float) -> None:
    """Raise `StateError` unless temperature [K] and pressure [Pa] lie inside the data."""
    if not LOWEST_TEMPERATURE <= temperature <= HIGHEST_TEMPERATURE:
        raise StateError(
            f"temperature is {temperature:g} K, the data of the gases hold from "
            f"{LOWEST_TEMPERATURE:g} to {HIGHEST_TEMPERATURE:g} K"
        )
    if not (pressure > 0.0 and isfinite(pressure)):
        raise StateError(f"pressure is {pressure:g} Pa, wanted a finite value above zero")


def some(flows: "Array") -> bool:
    """Return whether any of a few flows is not zero; quicker than asking the array."""
    return any(flows.tolist())


def require_amounts(amounts: "Array", names: Sequence[str]) -> float:
    """Return the total of one set of amounts [mol/s], or raise `StateError`.

    Negative amounts within round-off of the total count as zero.
    """
    values = amounts.tolist()
    total = sum(values)
    lowest = min(values)
    if isfinite(total) and lowest >= 0.0:
        return float(total)
    return _repaired_total(values, names)


def _repaired_total(values: list[float], names: Sequence[str]) -> float:
    for name, value in zip(names, values, strict=True):
        if not isfinite(value):
            raise StateError(f"flow of {name} is {value}, wanted a finite number")
    total = sum(value for value in values if value > 0.0)
    for name, value in zip(names, values, strict=True):
        if value < -ROUND_OFF * total:
            raise StateError(f"flow of {name} is {value:g} mol/s, wanted zero or more")
    return total


def without_round_off(amounts: "Array", names: Sequence[str]) -> "Array":
    """Return the amounts with negative round-off set to zero, or raise `StateError`."""
    values = amounts.tolist()
    if min(values) >= 0.0 and isfinite(sum(values)):
        return amounts
    _repaired_total(values, names)
    return amounts.clip(0.0)

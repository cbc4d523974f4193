"""When does water condense, and how much gas dissolves in it?

Dew point and the split of a wet gas into gas and liquid water by Rachford and Rice, with slopes.
One case: flows (components,) [mol/s], temperature [K], pressure [Pa].

Assumed: the gas is ideal and the liquid obeys Raoult (water) and Henry (gases), so
``y_i = K_i x_i`` with ``K = p_sat/p`` and ``k_H/p``; what is not named as dissolved stays in the
gas. Left out are the Poynting factor and attraction in the gas, which raise the vapour by 2 to
20 % up to 30 bar. There is no ice: see `chainflow.thermo.saturation`.
"""

from math import exp
from typing import TYPE_CHECKING, NamedTuple

import numpy as np

from chainflow.thermo.saturation import (
    CRITICAL_PRESSURE,
    CRITICAL_TEMPERATURE,
    HENRY,
    henry_constant,
    henry_slope,
    log_henry_constant,
    log_saturation_pressure,
    saturation_pressure,
    saturation_temperature,
)
from chainflow.thermo.validity import require_state, without_round_off

if TYPE_CHECKING:
    from chainflow.thermo.components import Array, Matter

__all__ = [
    "CRITICAL_PRESSURE",
    "CRITICAL_TEMPERATURE",
    "HENRY",
    "henry_constant",
    "henry_slope",
    "log_henry_constant",
    "log_saturation_pressure",
    "saturation_pressure",
    "saturation_temperature",
    "condenses",
    "water_split",
    "water_split_slopes",
]


class Solubles(NamedTuple):
    """What may enter the liquid: places in the flow vector (water first) and names."""

    places: tuple[int, ...]
    names: tuple[str, ...]


def solubles(matter: "Matter", dissolved: tuple[str, ...]) -> Solubles:
    """Return water and those of the named gases that are among the components.

    Raises `ValueError` for a name without Henry's constant.
    """
    for name in dissolved:
        if name not in HENRY:
            raise ValueError(f"no Henry's constant for {name} in water; known: {', '.join(HENRY)}")
    if matter.water is None:
        return Solubles((), ())
    names = ("H2O", *(name for name in dissolved if name in matter.index))
    return Solubles(tuple(matter.index[name] for name in names), names)


def distribution(names: tuple[str, ...], temperature: float, pressure: float) -> list[float]:
    """Return ``K = y/x`` of water (first) and of the dissolved gases."""
    values = [exp(log_saturation_pressure(temperature).value) / pressure]
    values += [exp(log_henry_constant(name, temperature).value) / pressure for name in names[1:]]
    return values


def condenses(
    matter: "Matter",
    flows: "Array",
    temperature: float,
    pressure: float,
    dissolved: tuple[str, ...] = ("CO2",),
) -> bool:
    """Return whether any liquid water forms; pure water exactly at saturation counts as gas."""
    if matter.water is None or temperature >= CRITICAL_TEMPERATURE or flows[matter.water] <= 0.0:
        return False
    names = matter.solubles(dissolved).names
    return _condenses(matter, flows.tolist(), distribution(names, temperature, pressure), dissolved)


def _condenses(
    matter: "Matter", flows: list[float], values: list[float], dissolved: tuple[str, ...]
) -> bool:
    places = matter.solubles(dissolved).places
    shares = sum(flows[i] / value for i, value in zip(places, values, strict=True))
    return shares > sum(flows)


def _surely_dry(
    amounts: list[float], places: tuple[int, ...], temperature: float, pressure: float
) -> bool:
    """Whether the gas is dry even if every other gas dissolved as readily as any can."""
    if not _LEAST_HENRY_FROM <= temperature <= _LEAST_HENRY_TO:
        return False
    water, *others = places
    wet = amounts[water] * pressure / saturation_pressure(temperature)
    for i in others:
        wet += amounts[i] * pressure / _LEAST_HENRY
    return wet < sum(amounts)


def water_split(
    matter: "Matter",
    flows: "Array",
    temperature: float,
    pressure: float,
    dissolved: tuple[str, ...] = ("CO2",),
) -> tuple["Array", "Array"]:
    """Return the gas and the liquid water that flows form together, two (components,) arrays.

    All gas above 647.096 K, without water, or where ``sum(z_i/K_i) <= 1``. Pure water exactly at
    saturation is not fixed by temperature and pressure; it counts as gas here.

    Parameters
    ----------
    matter : Matter
        The components.
    flows : array, shape (components,)
        Both phases together [mol/s].
    temperature, pressure : float
        [K], [Pa].
    dissolved : tuple of names
        Gases that dissolve by Henry's law.
    """
    require_state(temperature, pressure)
    flows = without_round_off(flows, matter.components)
    return split(matter, flows, temperature, pressure, dissolved) or (flows, matter.nothing)


_LEAST_HENRY = 1.5e7  # [Pa], below every Henry's constant between the next two temperatures
_LEAST_HENRY_FROM, _LEAST_HENRY_TO = 260.0, 600.0  # [K]
_NO_LIQUID = 1e-15  # share of the flow below which condensate is round-off


def split(
    matter: "Matter",
    flows: "Array",
    temperature: float,
    pressure: float,
    dissolved: tuple[str, ...],
) -> tuple["Array", "Array"] | None:
    """Return gas and liquid of checked flows, or None if all is gas."""
    if matter.water is None or temperature >= CRITICAL_TEMPERATURE or flows[matter.water] <= 0.0:
        return None
    amounts = flows.tolist()
    places, names = matter.solubles(dissolved)
    if _surely_dry(amounts, places, temperature, pressure):
        return None
    values = distribution(names, temperature, pressure)
    if not _condenses(matter, amounts, values, dissolved):
        return None
    total = sum(amounts)
    shares, others = [amounts[i] / total for i in places], amounts.copy()
    for i in places:
        others[i] = 0.0
    inert = sum(others) / total
    vapour = _vapour_share(shares, values, inert)
    water = np.zeros(len(amounts))
    for i, value in zip(places, values, strict=True):
        water[i] = amounts[i] * min((1.0 - vapour) / (1.0 + vapour * (value - 1.0)), 1.0)
    if float(water.sum()) <= _NO_LIQUID * total:  # just saturated, to round-off
        return None
    return flows - water, water


def _vapour_share(shares: list[float], values: list[float], inert: float) -> float:
    """Solve Rachford and Rice for the share of gas, 0 to 1; liquid is known to form."""
    if inert == 0.0 and sum(z * k for z, k in zip(shares, values, strict=True)) <= 1.0:
        return 0.0
    gases = inert + sum(shares[1:])
    if len(shares) == 1 or gases == inert:
        return inert / (1.0 - values[0])
    low, high = 0.0, 1.0
    vapour = min(gases / max(1.0 - values[0], 1e-3), 0.999999)
    for _ in range(100):
        excess, slope = _rachford_rice(vapour, shares, values, inert)
        low, high = (vapour, high) if excess > 0.0 else (low, vapour)
        better = vapour - excess / slope
        if not low <= better <= high:
            better = 0.5 * (low + high)
        step, vapour = abs(better - vapour), better
        # the step is squared once more by the next one, which is then below round-off
        if step <= 1e-9 * min(vapour, 1.0 - vapour) or step <= 4e-16 * vapour:
            break
    return vapour


def _rachford_rice(
    vapour: float, shares: list[float], values: list[float], inert: float
) -> tuple[float, float]:
    """Return ``sum(y - x)`` and its slope by the share of gas; it falls steadily."""
    excess = inert / vapour
    slope = -excess / vapour
    for share, value in zip(shares, values, strict=True):
        part = (value - 1.0) / (1.0 + vapour * (value - 1.0))
        excess += share * part
        slope -= share * part * part
    return excess, slope


class SplitSlopes(NamedTuple):
    """Slopes of the liquid by flows (components, components), temperature and pressure."""

    by_flows: "Array"
    by_temperature: "Array"
    by_pressure: "Array"


def water_split_slopes(
    matter: "Matter",
    flows: "Array",
    gas: "Array",
    water: "Array",
    temperature: float,
    pressure: float,
    dissolved: tuple[str, ...] = ("CO2",),
) -> "Array":
    """Return d water_i / d flow_j, shape (components, components), at fixed temperature, pressure.

    `gas` and `water` are what `water_split` made of `flows`. Where there is one phase only, the
    slopes are those of that phase.
    """
    return split_slopes(matter, flows, gas, water, temperature, pressure, dissolved).by_flows


def split_slopes(
    matter: "Matter",
    flows: "Array",
    gas: "Array",
    water: "Array",
    temperature: float,
    pressure: float,
    dissolved: tuple[str, ...] = ("CO2",),
) -> SplitSlopes:
    """Return the slopes of the liquid by flows, temperature and pressure.

    From ``d ln(y/x) = d ln K`` for water and each dissolved gas: a diagonal plus a constant, so
    the inverse can be written down.
    """
    size = len(flows)
    by_flows, zero = np.zeros((size, size)), np.zeros(size)
    liquid_total, gas_total = float(water.sum()), float(gas.sum())
    if liquid_total <= 0.0:
        return SplitSlopes(by_flows, zero, zero)
    places, names = matter.solubles(dissolved)
    at = np.array(places)
    if gas_total <= 1e-14 * liquid_total:
        by_flows[at, at] = 1.0
        return SplitSlopes(by_flows, zero, zero)
    values = np.array(distribution(names, temperature, pressure))
    share = liquid_total / (liquid_total + values * gas_total)  # of each component in the liquid
    give = flows[at] * share * (1.0 - share)
    both = 1.0 / gas_total + 1.0 / liquid_total
    reach = np.full(size, -give.sum() / gas_total)
    reach[at] += share
    reach *= both / (1.0 - both * give.sum())
    by_flows[at, :] = np.outer(give, reach - 1.0 / gas_total)
    by_flows[at, at] += share
    by_temperature, by_pressure = np.zeros(size), np.zeros(size)
    by_temperature[at] = _moved(give.tolist(), both, log_slopes(names, temperature))
    by_pressure[at] = _moved(give.tolist(), both, [-1.0 / pressure] * len(places))
    return SplitSlopes(by_flows, by_temperature, by_pressure)


def split_by_temperature(
    matter: "Matter",
    flows: "Array",
    water: "Array",
    temperature: float,
    pressure: float,
    dissolved: tuple[str, ...],
) -> "Array":
    """Return d water / dT at constant flows and pressure, shape (components,); two phases."""
    places, names = matter.solubles(dissolved)
    moved = np.zeros(len(flows))
    liquid_total = sum(water.tolist())
    gas_total = sum(flows.tolist()) - liquid_total
    if gas_total <= 1e-14 * liquid_total:
        return moved
    values = distribution(names, temperature, pressure)
    give = []
    for i, value in zip(places, values, strict=True):
        share = liquid_total / (liquid_total + value * gas_total)
        give.append(float(flows[i]) * share * (1.0 - share))
    both = 1.0 / gas_total + 1.0 / liquid_total
    for i, change in zip(places, _moved(give, both, log_slopes(names, temperature)), strict=True):
        moved[i] = change
    return moved


def _moved(give: list[float], both: float, change: list[float]) -> list[float]:
    """Return how the liquid answers to changes of ln K at constant flows."""
    fed_back = both * sum(g * c for g, c in zip(give, change, strict=True))
    fed_back /= 1.0 - both * sum(give)
    return [-g * (fed_back + c) for g, c in zip(give, change, strict=True)]


def log_slopes(names: tuple[str, ...], temperature: float) -> list[float]:
    """Return d ln K / dT of water (first) and of the dissolved gases [1/K]."""
    slopes = [log_saturation_pressure(temperature).first]
    return slopes + [log_henry_constant(name, temperature).first for name in names[1:]]

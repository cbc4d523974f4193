"""Is carbon, or metal dusting, to be feared at the inlet, at the outlet or where a gas is cooled?

Activities of carbon against graphite [-], temperatures [K], pressure [Pa].  A gas that is not at
equilibrium has one activity by each route (2 CO, CH4, CO + H2); the greatest counts, and only
routes count whose species are all there.

Metal dusting needs CO, a metal between about 450 and 800 degC, and an activity above one there:
common practice, no source (certainty M); both ends are settings.  A product hotter than that does
no harm as it is.  What counts is the way down: nearly every gas with CO that is cooled without
reacting passes an activity of one on it, so what is told is from which temperature on.
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import NamedTuple

from chainflow.equipment.base import Caution
from chainflow.thermo.carbon import ROUTES, carbon_activities
from chainflow.thermo.components import Array, Matter
from chainflow.thermo.streams import Stream

DUSTING_FROM = 723.15  # [K]
DUSTING_TO = 1073.15  # [K]
CARBON_FORMS_ABOVE = 573.15  # [K], colder it forms too slowly; common practice, no source
_BY_CO = ("boudouard", "water-gas")
_TOLD = 0.5  # [K], how closely a temperature is told
_THERE = 1e-6  # mole fraction from which a species counts


class Cooled(NamedTuple):
    """A gas that is cooled through the window of metal dusting without reacting."""

    activity: float  # the greatest on the way
    level: float  # [K], where it is
    onset: float  # [K], hottest temperature in the window at which the activity is above one


def greatest_activity(
    matter: Matter,
    flows: Array,
    temperature: float,
    pressure: float,
    routes: tuple[str, ...] = tuple(ROUTES),
) -> float:
    """Return the greatest activity of carbon by any of the routes whose species are all there."""
    total = float(flows.sum())
    found = carbon_activities(matter, flows, temperature, pressure) if total > 0.0 else {}
    whole = [
        value
        for route, value in found.items()
        if route in routes
        and all(
            name in matter.index and flows[matter.index[name]] > _THERE * total
            for name in ROUTES[route]
        )
    ]
    return max(whole, default=0.0)


def cooling_activity(gas: Stream, low: float, high: float) -> Cooled | None:
    """Return the greatest activity by CO of a gas cooled without reaction through a window.

    None if the gas is no hotter than the window.  The logarithm of each route's activity runs one
    way with temperature, so the ends of what is passed decide.
    """
    hottest = min(float(gas.temperature), high)
    if hottest <= low or float(gas.total) == 0.0:
        return None

    def activity(level: float) -> float:
        pressure = float(gas.pressure)
        return greatest_activity(gas.matter, gas.flows, level, pressure, _BY_CO)

    greatest, level = max((activity(level), level) for level in (low, hottest))
    onset = hottest if activity(hottest) > 1.0 else low
    if greatest > 1.0 and onset == low:
        cold, hot = low, hottest
        while hot - cold > _TOLD:
            onset = 0.5 * (cold + hot)
            cold, hot = (onset, hot) if activity(onset) > 1.0 else (cold, onset)
        onset = cold
    return Cooled(greatest, level, onset)


def inlet_caution(activity: float, level: float, limit: float) -> Iterator[Caution]:
    """A caution about carbon before the catalyst."""
    if activity > limit and level > CARBON_FORMS_ABOVE:
        text = (
            f"carbon activity {activity:.3g} at the inlet, {level - 273.15:.4g} degC: carbon can "
            "form before the catalyst; more steam, more hydrogen or a colder feed lowers it"
        )
        yield Caution("carbon-at-inlet", text)


def dusting_caution(found: Cooled | None, low: float) -> Iterator[Caution]:
    """A caution about metal dusting where the product is cooled; `low` ends the window [K]."""
    if found is not None and found.activity > 1.0:
        text = (
            f"cooled without reacting, the product has a carbon activity above 1 from "
            f"{found.onset - 273.15:.3g} degC down, {found.activity:.3g} at "
            f"{found.level - 273.15:.4g} degC: metal dusting on metal between there and "
            f"{low - 273.15:.3g} degC; cool it quickly (quench, or a boiler that keeps its metal "
            "colder) or choose an alloy for it"
        )
        yield Caution("dusting-when-cooled", text)

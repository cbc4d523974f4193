"""Is carbon, or metal dusting, to be feared at the inlet, at the outlet or where a gas is cooled?

Activities of carbon against graphite [-], temperatures [K], pressure [Pa].  A gas that is not at
equilibrium has one activity by each route (2 CO, CH4, CO + H2); the greatest counts, and only
routes count whose species are all there.  Metal dusting needs an activity above one between about
450 and 800 degC: common practice, no source (certainty M); both ends are settings.
"""

from __future__ import annotations

from collections.abc import Iterator

from chainflow.equipment.base import Caution
from chainflow.thermo.carbon import ROUTES, carbon_activities
from chainflow.thermo.components import Array, Matter
from chainflow.thermo.streams import Stream

DUSTING_FROM = 723.15  # [K]
DUSTING_TO = 1073.15  # [K]
CARBON_FORMS_ABOVE = 573.15  # [K], colder it forms too slowly; common practice, no source
_THERE = 1e-6  # mole fraction from which a species counts


def greatest_activity(matter: Matter, flows: Array, temperature: float, pressure: float) -> float:
    """Return the greatest activity of carbon by any route all of whose species are there."""
    total = float(flows.sum())
    found = carbon_activities(matter, flows, temperature, pressure) if total > 0.0 else {}
    whole = [
        value
        for route, value in found.items()
        if all(
            name in matter.index and flows[matter.index[name]] > _THERE * total
            for name in ROUTES[route]
        )
    ]
    return max(whole, default=0.0)


def cooling_activity(gas: Stream, low: float, high: float) -> tuple[float, float] | None:
    """Return the greatest activity of a gas cooled without reaction through a window, and where.

    None if the gas is no hotter than the window.  The logarithm of each route's activity runs one
    way with temperature, so the ends of what is passed decide.
    """
    hottest = min(float(gas.temperature), high)
    if hottest <= low or float(gas.total) == 0.0:
        return None
    return max(
        (greatest_activity(gas.matter, gas.flows, level, float(gas.pressure)), level)
        for level in (low, hottest)
    )


def inlet_caution(activity: float, level: float, limit: float) -> Iterator[Caution]:
    """A caution about carbon before the catalyst."""
    if activity > limit and level > CARBON_FORMS_ABOVE:
        text = (
            f"carbon activity {activity:.3g} at the inlet, {level - 273.15:.4g} degC: carbon can "
            "form before the catalyst; more steam, more hydrogen or a colder feed lowers it"
        )
        yield Caution("carbon-at-inlet", text)


def dusting_caution(found: tuple[float, float] | None) -> Iterator[Caution]:
    """A caution about metal dusting where the product is cooled."""
    if found is not None and found[0] > 1.0:
        text = (
            f"carbon activity reaches {found[0]:.3g} at {found[1] - 273.15:.4g} degC where the "
            "product is cooled without reacting: metal dusting; cool it quickly (quench or "
            "boiler) or choose an alloy for it"
        )
        yield Caution("metal-dusting", text)

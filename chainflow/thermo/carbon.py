"""Would a gas deposit carbon?

The activity of carbon against graphite, from any of three reactions; above one, carbon can form:

    2 CO -> C + CO2        CH4 -> C + 2 H2        CO + H2 -> C + H2O

In a gas at equilibrium all three agree. Ideal gas, graphite without volume (its ``v (p - p0)`` is
0.02 % of RT per bar at 300 K); carbon that is not graphite (whiskers) needs a higher activity.
"""

from math import exp, log
from typing import NamedTuple

from chainflow.basis.constants import GAS_CONSTANT, P_REFERENCE
from chainflow.thermo.components import Array, Matter
from chainflow.thermo.reactants import TRACE
from chainflow.thermo.species import polynomial
from chainflow.thermo.validity import require_amounts, require_state

GREATEST = 600.0  # logarithm of the greatest activity that is told apart
ROUTES = {
    "boudouard": {"CO": 2.0, "CO2": -1.0},
    "methane": {"CH4": 1.0, "H2": -2.0},
    "water-gas": {"CO": 1.0, "H2": 1.0, "H2O": -1.0},
}


class _Route(NamedTuple):
    """A route's activity and the mole fraction of its scarcest species."""

    activity: float
    scarcest: float


def carbon_activity(matter: Matter, flows: Array, temperature: float, pressure: float) -> float:
    """Return the activity of carbon in a gas [-]; carbon deposits above one.

    The route whose scarcest species is the most plentiful counts. Without any complete route it
    is zero, unless CO or CH4 has nothing beside it: then its partner counts as a trace of 1e-20,
    and the activity is at least what comes out.
    """
    found = _routes(matter, flows, temperature, pressure)
    best = max(found.values(), key=lambda route: route.scarcest, default=None)
    return 0.0 if best is None else best.activity


def carbon_activities(
    matter: Matter, flows: Array, temperature: float, pressure: float
) -> dict[str, float]:
    """Return the activity of carbon by each route that the gas allows.

    Keys are ``boudouard``, ``methane``, ``water-gas``. In a gas that is not at equilibrium they
    differ, and any above one can deposit carbon.
    """
    found = _routes(matter, flows, temperature, pressure)
    return {name: route.activity for name, route in found.items()}


def _routes(matter: Matter, flows: Array, temperature: float, pressure: float) -> dict[str, _Route]:
    require_state(temperature, pressure)
    total = require_amounts(flows, matter.components)
    if total == 0.0:
        return {}
    index = matter.index
    share = {name: float(flows[i]) / total for name, i in index.items() if flows[i] > 0.0}
    found = {}
    for name, reaction in ROUTES.items():
        if all(share.get(species, 0.0) > TRACE for species, count in reaction.items() if count > 0):
            scarcest = min(share.get(species, TRACE) for species in reaction)
            found[name] = _Route(_activity(reaction, share, temperature, pressure), scarcest)
    return found


def _activity(
    reaction: dict[str, float], share: dict[str, float], temperature: float, pressure: float
) -> float:
    warmth = GAS_CONSTANT * temperature
    order = log(pressure / P_REFERENCE)
    logarithm = -polynomial("C(gr)").gibbs(temperature) / warmth
    for species, count in reaction.items():
        potential = polynomial(species).gibbs(temperature) / warmth + order
        logarithm += count * (potential + log(max(share.get(species, 0.0), TRACE)))
    return exp(min(max(logarithm, -GREATEST), GREATEST))

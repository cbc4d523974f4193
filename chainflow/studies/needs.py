"""What does a route need from outside, and which heat does it need and give off?

SI: masses [kg/s], power and heat [W], temperatures [K].
"""

from __future__ import annotations

from collections.abc import Iterable

from chainflow.accounts.plant import PlantAccount
from chainflow.solver.solution import Solution
from chainflow.thermo.streams import Stream

_WATER, _CARBON = "H2O", "CO2"


def needs(account: PlantAccount) -> dict[str, float | None]:
    """Return what a plant buys [kg/s or W] and the shares it gets back."""
    bought = account.bought
    return {
        "water_kg_s": _mass(bought.material.values(), _WATER),
        "CO2_kg_s": _mass(bought.material.values(), _CARBON),
        "CO2_from_air_kg_s": _mass((s for _, s in account.from_air), _CARBON),
        "power_W": bought.power_total,
        "heat_W": bought.heat_total,
        "cold_W": bought.cold_total,
        "water_kg_kWh_fuel": account.water.as_data()["top_up_kg_kWh_fuel"],
        "carbon_efficiency": account.carbon.efficiency,
        "water_returned": account.returned["water"],
        "CO2_returned": account.returned["CO2"],
    }


def _mass(streams: Iterable[Stream], species: str) -> float:
    total = 0.0
    for stream in streams:
        if species in stream.matter.index:
            place = stream.matter.index[species]
            total += float(stream.flows[place] * stream.matter.molar_mass[place])
    return total


def heat_needs(solution: Solution, account: PlantAccount) -> dict[str, float | None]:
    """Return the heat that a plant needs [W], how it is met, and the hottest need [K].

    What a heat network makes of power for users that it is short of is met by power.
    """
    duties = [duty for outcome in solution.outcomes.values() for duty in outcome.duties]
    asked = [duty for duty in duties if duty.heat > 0.0]

    def met(*ways: str) -> float:
        return sum(duty.heat for duty in asked if duty.met_by in ways)

    short = sum(network.electric for network in account.heat.networks.values())
    return {
        "needed_W": sum(duty.heat for duty in asked),
        "recovered_W": met("own", "heat") - short,
        "electric_W": met("power") + short,
        "ambient_W": met("ambient"),
        "bought_W": met("bought"),
        "hottest_K": max((duty.hottest for duty in asked), default=None),
    }

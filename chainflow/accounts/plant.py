"""What are the results of the whole plant, and how are they named?

`plant_account` puts all accounts of a solution together; `plant_value` finds one number by its
address without the leading ``plant.``: ``efficiency.overall.LHV``, ``bought.power_W``,
``returned.water``. SI throughout.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from chainflow.accounts.carbon import CarbonAccount, carbon_account
from chainflow.accounts.costs import CostAccount, cost_account
from chainflow.accounts.deliveries import Deliveries, deliveries
from chainflow.accounts.efficiency import Efficiency, efficiency, sunlight
from chainflow.accounts.heat import HeatAccount, heat_account
from chainflow.accounts.leaving import Purge, purges
from chainflow.accounts.losses import LossMap, loss_map
from chainflow.accounts.purchases import Purchases, purchases
from chainflow.accounts.returned import returned
from chainflow.accounts.water import WaterAccount, water_account
from chainflow.basis.faults import UsageFault
from chainflow.basis.names import suggest
from chainflow.solver.solution import Solution
from chainflow.thermo.streams import Stream

RETURNED = {"water": "H2O", "CO2": "CO2"}


@dataclass(frozen=True, slots=True)
class PlantAccount:
    """All accounts of the plant."""

    sunlight: float  # [W]
    bought: Purchases
    sold: Deliveries
    efficiency: Efficiency
    returned: dict[str, float | None]
    heat: HeatAccount
    losses: LossMap
    carbon: CarbonAccount
    water: WaterAccount
    purges: tuple[Purge, ...] = ()
    costs: CostAccount | None = None
    from_air: tuple[tuple[str, Stream], ...] = ()

    def as_data(self) -> dict[str, Any]:
        """Return everything as plain data; names end in their unit."""
        found = self.efficiency
        return {
            "sunlight_W": self.sunlight,
            "bought": {
                "power_W": self.bought.power_total,
                "heat_W": self.bought.heat_total,
                "cold_W": self.bought.cold_total,
                "material": by_species(self.bought.material.items()),
            },
            "from_air": by_species(self.from_air),
            "sold": {
                "power_W": self.sold.power_total,
                "heat_W": self.sold.heat_total,
                "material": by_species(self.sold.material),
            },
            "efficiency": {
                "sunlight_to_fuel": found.sunlight_to_fuel,
                "overall": found.overall,
            },
            "sunlight_share": found.sunlight_share,
            "rungs": [
                {
                    "from": rung.start,
                    "to": rung.end,
                    "ratio": rung.ratio,
                    "uses": [
                        {"equipment": use.equipment, "what": use.what, "rate_W": use.rate}
                        for use in rung.uses
                    ],
                }
                for rung in found.rungs
            ],
            "returned": dict(self.returned),
            "heat": self.heat.as_data(),
            "exergy": self.losses.sums(),
            "losses": self.losses.as_data(),
            "carbon": self.carbon.as_data(),
            "water": self.water.as_data(),
            "purges": [_purge_data(purge) for purge in self.purges],
            "costs": None if self.costs is None else self.costs.as_data(),
        }


def plant_account(solution: Solution) -> PlantAccount:
    """Return all accounts of a solution."""
    bought, sold = purchases(solution), deliveries(solution)
    return PlantAccount(
        sunlight=sunlight(solution),
        bought=bought,
        sold=sold,
        efficiency=efficiency(solution, bought, sold),
        losses=loss_map(solution, bought),
        carbon=carbon_account(solution, bought, sold),
        water=water_account(solution, bought),
        purges=purges(solution),
        costs=cost_account(solution, bought, sold),
        returned={name: returned(solution, species) for name, species in RETURNED.items()},
        heat=heat_account(solution),
        from_air=tuple(
            (name, stream) for name, found in solution.outcomes.items() for stream in found.taken
        ),
    )


def _purge_data(purge: Purge) -> dict[str, Any]:
    stream = purge.stream
    names = zip(stream.matter.components, stream.flows.tolist(), strict=True)
    return {
        "stream": purge.key,
        "flow_mol_s": {name: flow for name, flow in names if flow > 0.0},
        "lhv_W": float(stream.lhv),
        "share_of_fuel": purge.share_of_fuel,
    }


def by_species(streams: Any) -> dict[str, dict[str, float]]:
    """Return flow [mol/s] and LHV [W] by ``name.species`` from pairs of name and stream."""
    found: dict[str, dict[str, float]] = {}
    for name, stream in streams:
        for species, flow, value in _parts(stream):
            entry = found.setdefault(f"{name}.{species}", {"flow_mol_s": 0.0, "lhv_W": 0.0})
            entry["flow_mol_s"] += flow
            entry["lhv_W"] += flow * value
    return found


def _parts(stream: Stream) -> list[tuple[str, float, float]]:
    matter = stream.matter
    rows = zip(matter.components, stream.flows.tolist(), matter.lhv.tolist(), strict=True)
    return [(species, flow, value) for species, flow, value in rows if flow > 0.0]


def plant_value(data: Mapping[str, Any], address: str) -> float:
    """Return one number of `PlantAccount.as_data` by its address; `nan` where it is None.

    Raises `UsageFault` for an address that leads nowhere.
    """
    here: Any = data
    left = address
    while left:
        key = _key(here, left, address)
        here, left = here[key], left[len(key) + 1 :]
    if isinstance(here, Mapping | list):
        inside = list(here) if isinstance(here, Mapping) else []
        raise UsageFault(f"'plant.{address}' is no number, name one of: {', '.join(inside)}")
    return float("nan") if here is None else float(here)


def _key(here: Any, left: str, address: str) -> str:
    known = list(here) if isinstance(here, Mapping) else []
    for key in sorted(known, key=len, reverse=True):
        if left == key or left.startswith(f"{key}."):
            return str(key)
    word = left.split(".")[0]
    raise UsageFault(f"'plant.{address}': there is no '{word}'{suggest(word, known)}")

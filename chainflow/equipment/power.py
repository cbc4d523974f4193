"""The plant's own switchboard and the public grid.  Electric power in [W]."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, ClassVar

import numpy as np
from pydantic import Field

from chainflow.equipment.base import Array, Equipment, Outcome, Port, Role, Site, rate
from chainflow.equipment.origins import POWER_INTENSITY, PowerIntensity
from chainflow.equipment.ports import ANY_NAME, Feeds, as_number


class Switchboard(Equipment):
    """Power bar: serves every named outlet, and what the others leave goes to `rest`.

    Without a `shortage` line the rest is what it is; below zero the plant is short of power and
    has no steady state.  With one, the shortage is asked for there.
    """

    kind: ClassVar[str] = "switchboard"
    family: ClassVar[str] = "power"
    ports: ClassVar[tuple[Port, ...]] = (
        Port("supply", "power", Role.TAKES, many=True, main=True, means="power fed in"),
        Port("shortage", "power", Role.CALLS, optional=True, means="asked when supply is short"),
        Port(ANY_NAME, "power", Role.SERVES, optional=True, means="each user by a name of its own"),
        Port("rest", "power", Role.OFFERS, optional=True, means="what the users leave"),
    )
    formulas: ClassVar[tuple[str, ...]] = ("rest = sum(supply) + shortage - sum(served)",)

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        supply = rate(feeds, "supply")
        served = {name: float(amount) for name, amount in asked.items()}
        balance = supply - sum(served.values())
        if "shortage" not in site.inlets:
            return Outcome({**served, "rest": balance})
        shortage = max(-balance, 0.0)
        return Outcome({**served, "rest": max(balance, 0.0)}, {"shortage": shortage})

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        short = "shortage" in site.inlets and as_number(outcome.drawn["shortage"]) > 0.0
        one = np.array([[1.0]])
        gain, loss = (
            ({"drawn:shortage": -one}, {"drawn:shortage": one})
            if short
            else ({"rest": one}, {"rest": -one})
        )
        return {"supply": gain} | {f"asked:{name}": {name: one, **loss} for name in asked}


class Grid(Equipment):
    """The public grid: sells whatever is asked, buys whatever is left over."""

    kind: ClassVar[str] = "grid"
    family: ClassVar[str] = "power"
    gives: ClassVar[tuple[str, ...]] = ("bought_W", "sold_W")
    ports: ClassVar[tuple[Port, ...]] = (
        Port(
            "surplus", "power", Role.TAKES, many=True, optional=True, main=True, means="power sold"
        ),
        Port(
            "power", "power", Role.SERVES, many=True, optional=True, main=True, means="power bought"
        ),
    )

    carbon_intensity: PowerIntensity | None = Field(None, description=POWER_INTENSITY)

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        bought = float(asked.get("power", 0.0))
        sold = rate(feeds, "surplus")
        return Outcome(
            {"power": bought}, results={"bought_W": bought, "sold_W": sold}, power=sold - bought
        )

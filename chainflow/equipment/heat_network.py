"""A switchboard for heat: serves each need from heat that is hot enough.

Heat [W], temperature [K].
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, ClassVar

from chainflow.equipment.base import Equipment, Flow, Heat, Outcome, Port, Role, Site
from chainflow.equipment.cascade import Cascade, cascade
from chainflow.equipment.ports import ANY_NAME, Feeds, arriving

_ROUND_OFF = 1e-9  # relative, of all heat


class HeatNetwork(Equipment):
    """Collects heat given off and serves heat needs, by the heat cascade.

    A need is met only from heat at or above its temperatures.  What cannot be met is asked at
    `shortage`; without that line the plant has no steady state.
    """

    kind: ClassVar[str] = "heat-network"
    family: ClassVar[str] = "heat"
    gives: ClassVar[tuple[str, ...]] = ("shortage_W", "rest_W")
    ports: ClassVar[tuple[Port, ...]] = (
        Port("supply", "heat", Role.TAKES, many=True, main=True, means="heat fed in"),
        Port(
            "shortage", "heat", Role.CALLS, optional=True, means="asked when no heat is hot enough"
        ),
        Port(ANY_NAME, "heat", Role.SERVES, optional=True, means="each user by a name of its own"),
        Port("rest", "heat", Role.OFFERS, optional=True, means="what the users leave"),
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "problem table over all temperature intervals, approach 0 K",
    )
    sources: ClassVar[tuple[str, ...]] = ("Linnhoff and Flower, AIChE J. 24 (1978) 633",)

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        given = [h for h in arriving(feeds, "supply") if isinstance(h, Heat)]
        needed = [h for h in asked.values() if isinstance(h, Heat)]
        table = cascade([h for h in given if h.rate > 0], [h for h in needed if h.rate > 0])
        hottest = max((max(h.start, h.end) for h in needed), default=site.ambient)
        missing = table.hot_utility
        drawn: dict[str, float | Heat] = {}
        unmet: dict[str, str] = {}
        if "shortage" in site.inlets:
            drawn["shortage"] = Heat(missing, hottest, hottest, hottest)
        elif missing > _ROUND_OFF * sum(abs(h.rate) for h in (*given, *needed)):
            unmet["shortage"] = self._sentence(missing, hottest, given)
        outlets: dict[str, Flow] = {name: h for name, h in asked.items() if isinstance(h, Heat)}
        outlets["rest"] = self._rest(table, given, site)
        return Outcome(
            outlets,
            drawn,
            results={"shortage_W": missing, "rest_W": table.cold_utility},
            unmet=unmet,
        )

    def _rest(self, table: Cascade, given: list[Heat], site: Site) -> Heat:
        if table.rest is not None:
            return table.rest
        level = min((min(h.start, h.end) for h in given), default=site.ambient)
        return Heat(0.0, level, level, level)

    def _sentence(self, missing: float, hottest: float, given: list[Heat]) -> str:
        best = max((max(h.start, h.end) for h in given), default=0.0)
        found = (
            f"the hottest heat it gets is at {best - 273.15:.4g} degC"
            if given
            else "it gets no heat"
        )
        return (
            f"{missing / 1e3:.6g} kW of the heat asked (up to {hottest - 273.15:.4g} degC) "
            f"cannot be met: {found}; link 'shortage', or meet the need with 'power'"
        )

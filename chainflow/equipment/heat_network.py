"""A switchboard for heat: what is given off serves what is needed, as far as it is hot enough.

Heat [W], temperature [K].
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Annotated, Any, ClassVar

import numpy as np
from pydantic import Field

from chainflow.basis.quantities import measured
from chainflow.equipment.base import (
    Array,
    Caution,
    Equipment,
    Flow,
    Heat,
    Outcome,
    Port,
    Role,
    Site,
)
from chainflow.equipment.cascade import Cascade, cascade
from chainflow.equipment.heat_matching import Left, Matching, match
from chainflow.equipment.ports import ANY_NAME, Feeds, arriving

_ROUND_OFF = 1e-9  # relative, of all heat
_PIECE = 4  # numbers of a piece of heat


class HeatNetwork(Equipment):
    """Collects heat given off and serves heat needs, matched by the pinch.

    Heat meets a need only where it is `approach` hotter; as much is met as the problem table
    allows.  Every need, the hottest first, takes the coldest heat that is hot enough, so that what
    goes to `rest` is as hot as it can be.  What is missing is asked at `shortage`, at the
    temperatures where it is missing: of another network, or as electric heat of a switchboard.
    Without that line the plant has no steady state.
    """

    kind: ClassVar[str] = "heat-network"
    family: ClassVar[str] = "heat"
    gives: ClassVar[tuple[str, ...]] = (
        "recovered_W",
        "shortage_W",
        "rest_W",
        "pinch_given_K",
        "pinch_needed_K",
    )
    ports: ClassVar[tuple[Port, ...]] = (
        Port("supply", "heat", Role.TAKES, many=True, main=True, means="heat fed in"),
        Port(
            "shortage",
            "heat or power",
            Role.CALLS,
            optional=True,
            means="asked when no heat is hot enough: heat, or power for electric heat",
        ),
        Port(ANY_NAME, "heat", Role.SERVES, optional=True, means="each user by a name of its own"),
        Port("rest", "heat", Role.OFFERS, optional=True, means="what the users leave"),
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "shortage = most over T of [heat needed above T - approach] - [heat given above T]",
        "rest = sum(supply) + shortage - sum(served)",
    )
    sources: ClassVar[tuple[str, ...]] = (
        "Linnhoff and Flower, AIChE J. 24 (1978) 633",
        "default approach: common practice, no source",
    )

    approach: Annotated[float, measured("K", ge=0, difference=True)] = Field(
        10.0, description="smallest temperature difference between heat given and heat needed"
    )

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        given, needs = _heats(arriving(feeds, "supply")), _named(asked)
        found = match(_pieces(given), _pieces(list(needs.values())), self.approach)
        table = cascade(_flowing(given), _flowing(list(needs.values())), self.approach)
        missing = float(found.missing[0])
        electric = "shortage" in site.electric
        drawn: dict[str, float | Heat] = {}
        unmet: dict[str, str] = {}
        if "shortage" in site.inlets:
            drawn["shortage"] = missing if electric else self._wanted(found, needs, site)
        elif missing > _ROUND_OFF * sum(abs(h.rate) for h in (*given, *needs.values())):
            unmet["shortage"] = self._sentence(missing, found, given, needs)
        rest = _rest(found, given, site)
        outlets: dict[str, Flow] = {**needs, "rest": rest}
        return Outcome(
            outlets,
            drawn,
            power=missing if electric else 0.0,
            results=_results(found, table) | {"rest_W": rest.rate},
            cautions=self._cautions(needs) if site.detail else (),
            unmet=unmet,
        )

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        given, needs = _heats(arriving(feeds, "supply")), _named(asked)
        flows = [*given, *needs.values()]
        found = match(_pieces(given), _pieces(list(needs.values())), self.approach, slopes=True)
        none = np.zeros((_PIECE, _PIECE * len(_pieces(flows))))
        rows = {"rest": _rows(found.rest, falls=True) if found.rest else none}
        if "shortage" in site.electric:
            rows["drawn:shortage"] = found.missing[None, 1:]
        elif "shortage" in site.inlets:
            rows["drawn:shortage"] = _rows(found.wanted, falls=False) if found.wanted else none
        labels = [f"supply#{i}" if i > 1 else "supply" for i in range(1, len(given) + 1)]
        blocks: dict[str, dict[str, Array]] = {}
        at = 0
        for label, flow in zip([*labels, *(f"asked:{name}" for name in needs)], flows, strict=True):
            end = at + _PIECE * len(flow.pieces)
            blocks[label] = {name: row[:, at:end] for name, row in rows.items()}
            if label.startswith("asked:"):
                blocks[label][label.removeprefix("asked:")] = np.eye(end - at)
            at = end
        return blocks

    def recovered(self, feeds: Feeds, asked: Mapping[str, Any]) -> dict[str, float]:
        """What each user gets of the heat that is fed in [W]; the rest of it is shortage."""
        given, needs = _heats(arriving(feeds, "supply")), _named(asked)
        met = match(_pieces(given), _pieces(list(needs.values())), self.approach).met
        found: dict[str, float] = {}
        at = 0
        for name, need in needs.items():
            end = at + len(need.pieces)
            found[name] = sum(met[at:end])
            at = end
        return found

    def _wanted(self, found: Matching, needs: Mapping[str, Heat], site: Site) -> Heat:
        """What is asked of another network: the heat that is missing, where it is missing."""
        if found.wanted:
            return _flow(found.wanted, falls=False)
        level = max((need.hottest + self.approach for need in needs.values()), default=site.ambient)
        return Heat(0.0, level, level, level)

    def _cautions(self, needs: Mapping[str, Heat]) -> tuple[Caution, ...]:
        if self.approach > 0.0 or not any(need.rate > 0.0 for need in needs.values()):
            return ()
        text = "heat passes without a temperature difference: its exchangers would be without end"
        return (Caution("zero-approach", text),)

    def _sentence(
        self, missing: float, found: Matching, given: Sequence[Heat], needs: Mapping[str, Heat]
    ) -> str:
        """Why needs are not met: nothing is hot enough, or there is not enough of what is."""
        mend = "link 'shortage', or meet the need with 'power'"
        short = f"{missing / 1e3:.6g} kW of the heat asked"
        hottest = found.wanted[0].hot[0]
        best = max((h.hottest for h in given if h.rate > 0.0), default=None)
        if best is None:
            return f"{short} cannot be met: it gets no heat; {mend}"
        if best < hottest:
            return (
                f"{short} (up to {_celsius(hottest - self.approach)}) cannot be met: the hottest "
                f"heat it gets is at {_celsius(best)}, which serves up to "
                f"{_celsius(best - self.approach)} with an approach of {self.approach:g} K; {mend}"
            )
        level = min(float(piece.cold[0]) for piece in found.wanted)
        above = _above(_flowing(given), level)
        wanted = _above(_flowing(list(needs.values())), level - self.approach)
        return (
            f"{short} cannot be met: it gets {above / 1e3:.6g} kW at or above {_celsius(level)}, "
            f"where {wanted / 1e3:.6g} kW are needed (an approach of {self.approach:g} K counted); "
            f"{mend}"
        )


def _heats(flows: Sequence[Flow]) -> list[Heat]:
    return [flow for flow in flows if isinstance(flow, Heat)]


def _named(asked: Mapping[str, Any]) -> dict[str, Heat]:
    return {name: heat for name, heat in asked.items() if isinstance(heat, Heat)}


def _pieces(flows: Sequence[Heat]) -> list[Heat]:
    return [piece for flow in flows for piece in flow.pieces]


def _flowing(flows: Sequence[Heat]) -> list[Heat]:
    return [piece for piece in _pieces(flows) if piece.rate > 0.0]


def _above(flows: Sequence[Heat], level: float) -> float:
    """Heat at or above a temperature [W]."""
    total = 0.0
    for piece in flows:
        span = piece.hottest - piece.coldest
        share = (piece.hottest - level) / span if span > 0.0 else float(piece.hottest >= level)
        total += piece.rate * min(max(share, 0.0), 1.0)
    return total


def _results(found: Matching, table: Cascade) -> dict[str, float]:
    """What is recovered, and the pinch where there is one."""
    results = {"recovered_W": sum(found.met), "shortage_W": float(found.missing[0])}
    if table.pinch_given is not None and table.pinch_needed is not None:
        results["pinch_given_K"] = table.pinch_given
        results["pinch_needed_K"] = table.pinch_needed
    return results


def _rest(found: Matching, given: Sequence[Heat], site: Site) -> Heat:
    if found.rest:
        return _flow(found.rest, falls=True)
    level = min((h.coldest for h in given), default=site.ambient)
    return Heat(0.0, level, level, level)


def _flow(left: Sequence[Left], *, falls: bool) -> Heat:
    """What is left over, or missing, as one flow."""
    pieces = []
    for piece in left:
        hot, cold = float(piece.hot[0]), float(piece.cold[0])
        ends = (hot, cold) if falls else (cold, hot)
        pieces.append(Heat(float(piece.rate[0]), *ends, float(piece.mean[0])))
    return Heat.total(pieces)


def _rows(left: Sequence[Left], *, falls: bool) -> Array:
    """Slopes of the numbers of every piece, as they stand in the flow."""
    rows = []
    for piece in left:
        ends = (piece.hot, piece.cold) if falls else (piece.cold, piece.hot)
        rows += [piece.rate[1:], *(end[1:] for end in ends), piece.mean[1:]]
    return np.array(rows)


def _celsius(level: float) -> str:
    return f"{level - 273.15:.4g} degC"

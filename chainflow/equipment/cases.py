"""A batch of cases through equipment that works on one case: taken apart, run, put together.

The leading axis of every stream, and of every number that is an array, is the case.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from typing import Any

import numpy as np

from chainflow.equipment.heat_needs import Duty
from chainflow.equipment.outcome import Outcome
from chainflow.equipment.ports import Feeds, Heat, arriving
from chainflow.thermo.components import Matter
from chainflow.thermo.streams import Stream


def matter_of(feeds: Feeds) -> Matter:
    for port in feeds:
        for flow in arriving(feeds, port):
            if isinstance(flow, Stream):
                return flow.matter
    return Matter.of(())


def case_count(*groups: Mapping[str, Any]) -> int | None:
    for group in groups:
        for port in group:
            for flow in arriving(group, port):
                if isinstance(flow, Stream) and flow.gas.ndim == 2:
                    return int(flow.gas.shape[0])
                if isinstance(flow, np.ndarray) and flow.ndim == 1:
                    return int(flow.shape[0])
    return None


def one_case(group: Mapping[str, Any], i: int) -> dict[str, Any]:
    def one(flow: Any) -> Any:
        if isinstance(flow, Stream) and flow.gas.ndim == 2:
            return flow.case(i)
        if isinstance(flow, np.ndarray) and flow.ndim == 1:
            return float(flow[i])
        return flow

    return {
        port: tuple(one(f) for f in flow) if isinstance(flow, tuple) else one(flow)
        for port, flow in group.items()
    }


def _stack(values: list[Any]) -> Any:
    if isinstance(values[0], Stream):
        return Stream.stack(values)
    if isinstance(values[0], Heat):
        return Heat(
            *(
                np.array([getattr(v, name) for v in values])
                for name in ("rate", "start", "end", "mean")
            )
        )  # type: ignore[arg-type] # a batch of heats holds arrays
    return np.array(values)


def stack_outcomes(singles: list[Outcome]) -> Outcome:
    first = singles[0]
    return Outcome(
        outlets={k: _stack([s.outlets[k] for s in singles]) for k in first.outlets},
        drawn={k: _stack([s.drawn[k] for s in singles]) for k in first.drawn},
        duties=_stack_duties(singles),
        power=np.array([s.power for s in singles]),  # type: ignore[arg-type] # one number a case
        results={k: np.array([s.results.get(k, np.nan) for s in singles]) for k in first.results},  # type: ignore[misc] # one number a case
        cautions=tuple(dict.fromkeys(c for s in singles for c in s.cautions)),
        idealisations=tuple(dict.fromkeys(c for s in singles for c in s.idealisations)),
        unmet={k: v for s in singles for k, v in s.unmet.items()},
    )


def _stack_duties(singles: list[Outcome]) -> tuple[Duty, ...]:
    """One duty per purpose and way of meeting, with the heat of each case."""
    keys = list(dict.fromkeys((d.purpose, d.met_by) for s in singles for d in s.duties))
    stacked = []
    for purpose, met_by in keys:
        mine = [
            [d for d in s.duties if (d.purpose, d.met_by) == (purpose, met_by)] for s in singles
        ]
        some = next(d[0] for d in mine if d)
        heat = np.array([sum(d.heat for d in group) for group in mine])
        stacked.append(replace(some, heat=heat))  # type: ignore[arg-type] # one number a case
    return tuple(stacked)

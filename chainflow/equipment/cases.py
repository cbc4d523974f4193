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
from chainflow.equipment.ports import Feeds, Heat, Light, arriving
from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.streams import Stream


def matter_of(feeds: Feeds) -> Matter:
    """The matter of the streams that arrive; the usual components if none does."""
    for port in feeds:
        for flow in arriving(feeds, port):
            if isinstance(flow, Stream):
                return flow.matter
    return Matter.of(DEFAULT_COMPONENTS)


def case_count(*groups: Mapping[str, Any]) -> int | None:
    """How many cases a batch holds; None if it is one case alone."""
    for group in groups:
        for port in group:
            for flow in arriving(group, port):
                if isinstance(flow, Stream) and flow.gas.ndim == 2:
                    return int(flow.gas.shape[0])
                if isinstance(flow, np.ndarray) and flow.ndim == 1:
                    return int(flow.shape[0])
                if isinstance(flow, Light) and flow.cases is not None:
                    return flow.cases
    return None


def one_case(group: Mapping[str, Any], i: int) -> dict[str, Any]:
    """One case of a batch; what is the same in all cases stays as it is."""

    def one(flow: Any) -> Any:
        if isinstance(flow, Stream) and flow.gas.ndim == 2:
            return flow.case(i)
        if isinstance(flow, np.ndarray) and flow.ndim == 1:
            return float(flow[i])
        if isinstance(flow, Light):
            return flow.case(i)
        return flow

    return {
        port: tuple(one(f) for f in flow) if isinstance(flow, tuple) else one(flow)
        for port, flow in group.items()
    }


def _column(numbers: list[Any]) -> Any:
    """One number a case, in the place of a single number: hence without a type."""
    return np.array(numbers)


def _stack(values: list[Any]) -> Any:
    if isinstance(values[0], Stream):
        return Stream.stack(values)
    if isinstance(values[0], Heat):
        names = ("rate", "start", "end", "mean")
        return Heat(*(_column([getattr(v, name) for v in values]) for name in names))
    if isinstance(values[0], Light):
        columns = zip(*(v.numbers for v in values), strict=True)
        return Light(*(_column(list(column)) for column in columns))
    return _column(values)


def stack_outcomes(singles: list[Outcome]) -> Outcome:
    """The outcomes of single cases as one, each of its numbers an array over the cases."""
    first = singles[0]
    return Outcome(
        outlets={k: _stack([s.outlets[k] for s in singles]) for k in first.outlets},
        drawn={k: _stack([s.drawn[k] for s in singles]) for k in first.drawn},
        duties=_stack_duties(singles),
        power=_column([s.power for s in singles]),
        results={k: _column([s.results.get(k, np.nan) for s in singles]) for k in first.results},
        cautions=tuple(dict.fromkeys(c for s in singles for c in s.cautions)),
        idealisations=tuple(dict.fromkeys(c for s in singles for c in s.idealisations)),
        taken=tuple(
            Stream.stack(list(parts)) for parts in zip(*(s.taken for s in singles), strict=True)
        ),
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
        heat = _column([sum(d.heat for d in group) for group in mine])
        stacked.append(replace(some, heat=heat))
    return tuple(stacked)

"""Where is the way of a stream from one temperature to another cut, so that its heat is even?

SI throughout: temperature [K], pressure [Pa], flows [mol/s].  Where water or oil condenses or boils
on the way the path is cut where that begins and several times from there on.  Cuts know how they
move with the start of the path, the dew point and the flows.
"""

from __future__ import annotations

from collections.abc import Callable
from math import inf
from typing import NamedTuple

from chainflow.thermo.dew import dew_temperature, oil_dew_temperature
from chainflow.thermo.phases import any_liquid
from chainflow.thermo.species import LOWEST_TEMPERATURE
from chainflow.thermo.streams import Stream
from chainflow.thermo.water import (
    CRITICAL_TEMPERATURE,
    log_saturation_pressure,
    saturation_pressure,
    saturation_temperature,
)

_STEPS = 6  # of the path where part of the stream is liquid
# Shares of the rise of water vapour on the way at which it is cut.  The first is less where the gas
# is but a trace r beside the water: at r times 50 it stands 1 K below boiling.
_RISEN = (0.1, 0.3, 0.6)
_TRACES = 50.0
_HALVINGS = 45  # of the temperatures between which oil begins to condense, to round-off
# A gas that leaves a condenser stands at its dew point; whether a little of it is fog is nothing
# that the shape of its heat should jump with.
_FOG = 1.0  # [K] below the dew point
_FOG_SHARE = 0.05  # of the flow
_AROUND_BOILING = 1e-9  # relative distance from the temperature at which pure water boils


class Cut(NamedTuple):
    """A temperature [K] at which a path is cut, and how it moves."""

    temperature: float
    by_start: float = 0.0  # with the temperature at which the path starts
    by_dew: float = 0.0  # with the dew point
    by_water: float = 0.0  # with the flow of water [K s/mol]
    by_rest: float = 0.0  # with that of all else [K s/mol]


class Way(NamedTuple):
    """The cuts of a path in its order, and from which temperature on all is gas."""

    cuts: tuple[Cut, ...] = ()
    dry_from: float = 0.0  # zero if it is gas all the way
    dew_of: str = "water"  # what falls first, water or oil; empty where it was only searched for

    def state(self, first: Stream, level: float, dissolved: tuple[str, ...]) -> Stream:
        """The stream at a temperature on its way; at its dew point it is the gas that it is above.

        There round-off would tell how much has condensed: a millionth of steam with a trace of gas.
        """
        if level == self.dry_from and level >= LOWEST_TEMPERATURE:
            return Stream.gaseous(first.matter, first.flows, level, first.pressure)
        return Stream.at(first.matter, first.flows, level, float(first.pressure), dissolved)


def find_way(first: Stream, level: float, dissolved: tuple[str, ...]) -> Way:
    """Return where the way of a stream to another temperature is cut."""
    start, pressure = float(first.temperature), float(first.pressure)
    matter, flows = first.matter, first.flows

    def wet(temperature: float) -> bool:
        return any_liquid(matter, flows, temperature, pressure, dissolved)

    liquid = _liquid_share(first)
    wet_start, wet_end = wet(start) or liquid > 0.0, wet(level)
    if not wet_start and not wet_end:
        return Way()
    begins, ends = Cut(start, by_start=1.0), Cut(level)
    if wet_start and wet_end:
        return Way(tuple(_while_wet(first, begins, ends)), inf)
    if matter.water is not None and float(flows[matter.water]) == float(first.total):
        levels = _around_boiling(start, level, saturation_temperature(pressure))
        return Way(tuple(Cut(t) for t in levels), max(levels, default=max(start, level)))
    water = dew_temperature(matter, flows, pressure, dissolved) or 0.0
    oil = oil_dew_temperature(matter, flows, pressure) or 0.0
    dew, dew_of = max(water, oil), "oil" if oil >= water else "water"
    low, high = (start, level) if wet_start else (level, start)
    if not min(low, high) < dew < max(low, high):  # it is wet where it is hot
        dew, dew_of = _dew_point(wet, low, high), ""
    if abs(dew - low) < _FOG and liquid < _FOG_SHARE:
        return Way()
    at_dew = Cut(dew, by_dew=1.0)
    if wet_start:
        return Way((*_while_wet(first, begins, at_dew), at_dew), dew, dew_of)
    return Way((at_dew, *_while_wet(first, at_dew, ends)), dew, dew_of)


def _liquid_share(stream: Stream) -> float:
    return (float(stream.water.sum()) + float(stream.liquid.sum())) / float(stream.total)


def _around_boiling(start: float, level: float, boiling: float) -> list[float]:
    """The temperatures just before and after pure water boils, as far as they are on the way."""
    cuts = [boiling * (1.0 - _AROUND_BOILING), boiling * (1.0 + _AROUND_BOILING)]
    low, high = min(start, level), max(start, level)
    return [t for t in (cuts if start < level else cuts[::-1]) if low < t < high]


def _dew_point(wet: Callable[[float], bool], low: float, high: float) -> float:
    """The temperature between `low` (wet) and `high` (dry) at which condensing begins."""
    for _ in range(_HALVINGS):
        middle = 0.5 * (low + high)
        low, high = (middle, high) if wet(middle) else (low, middle)
    return high


def _while_wet(first: Stream, start: Cut, end: Cut) -> list[Cut]:
    """The cuts of a path on which part of the flow is liquid, in its order.

    Water beside a gas that does not condense: some even in temperature, the others where the vapour
    has risen by certain shares, so that water with a trace of gas boils where it does.  Where oil
    may form all are even.
    """
    matter = first.matter
    water = float(first.flows[matter.water]) if matter.water is not None else 0.0
    rest = float(first.total) - water
    low, high = (end, start) if start.temperature > end.temperature else (start, end)
    by_vapour = water > 0.0 and rest > 0.0 and matter.oil is None
    if not by_vapour or high.temperature >= CRITICAL_TEMPERATURE:
        return _even(start, end, _STEPS)
    risen = _risen(low, high, water, rest, float(first.pressure))
    cuts = [*_even(low, high, _STEPS - len(risen)), *risen]
    return sorted(cuts, key=lambda cut: cut.temperature, reverse=start is high)


def _even(start: Cut, end: Cut, steps: int) -> list[Cut]:
    return [_between(start, end, k / steps) for k in range(1, steps)]


def _between(start: Cut, end: Cut, share: float) -> Cut:
    return Cut(*(a + share * (b - a) for a, b in zip(start, end, strict=True)))


class _Vapour(NamedTuple):
    """Water vapour beside the rest at saturation [mol/s], and its slopes."""

    flow: float
    by_level: float
    by_water: float
    by_rest: float

    @staticmethod
    def at(temperature: float, water: float, rest: float, pressure: float) -> _Vapour:
        share = saturation_pressure(temperature) / pressure
        if share >= 1.0 or rest * share / (1.0 - share) >= water:
            return _Vapour(water, 0.0, 1.0, 0.0)
        by_rest = share / (1.0 - share)
        moved = log_saturation_pressure(temperature).first * by_rest / (1.0 - share)
        return _Vapour(rest * by_rest, rest * moved, 0.0, by_rest)


def _risen(low: Cut, high: Cut, water: float, rest: float, pressure: float) -> list[Cut]:
    """The cuts at which the vapour has risen by certain shares from `low` to `high`."""
    least = _Vapour.at(low.temperature, water, rest, pressure)
    most = _Vapour.at(high.temperature, water, rest, pressure)
    cuts = []
    trace = min(_RISEN[0], _TRACES * rest / water)
    by_trace = _TRACES / water if trace < _RISEN[0] else 0.0
    for share, by_ratio in ((trace, by_trace), (_RISEN[1], 0.0), (_RISEN[2], 0.0)):
        keep, rise = 1.0 - share, by_ratio * (most.flow - least.flow)
        flow = keep * least.flow + share * most.flow
        level = saturation_temperature(pressure * flow / (flow + rest))
        if not low.temperature < level < high.temperature:
            cuts.append(low if level <= low.temperature else high)
            continue
        # d ln y = rest / (v (v + rest)) dv - d rest / (v + rest), and d ln p_sat = d ln y
        per_log = 1.0 / log_saturation_pressure(level).first
        by_flow = per_log * rest / (flow * (flow + rest))
        by_low, by_high = keep * least.by_level * by_flow, share * most.by_level * by_flow
        by_rest = by_flow * (keep * least.by_rest + share * most.by_rest + rise)
        cuts.append(
            Cut(
                level,
                by_low * low.by_start + by_high * high.by_start,
                by_low * low.by_dew + by_high * high.by_dew,
                by_flow * (keep * least.by_water + share * most.by_water - rise * rest / water),
                by_rest - per_log / (flow + rest),
            )
        )
    return cuts

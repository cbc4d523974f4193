"""Heat given off or needed by a stream that is brought to another temperature.

SI throughout: heat [W], temperature [K], pressure [Pa].  The heat is that of a reversible path at
the outlet's pressure: every duty carries its exact enthalpy and its entropy-mean temperature.
Where water or oil condenses or boils on the way the heat is not spread evenly over the
temperatures, so the path is cut where that begins and into even steps from there on.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

import numpy as np

from chainflow.equipment.base import Array, Caution, Outcome, Site
from chainflow.equipment.heat_needs import Duty
from chainflow.equipment.ports import mean_temperature
from chainflow.thermo.phases import any_liquid
from chainflow.thermo.streams import (
    DISSOLVED,
    Stream,
    enthalpy_slopes,
    entropy_slopes,
    temperature_slopes,
)
from chainflow.thermo.water import saturation_temperature

_STEPS = 6  # even steps in temperature where part of the stream is liquid water
_HALVINGS = 24  # of the temperatures between which water begins to condense
_AROUND_BOILING = 1e-9  # relative distance from the temperature at which pure water boils
_DATA_SPREAD = 0.01  # latent heat / latent entropy is the boiling temperature to 0.5 % at 30 bar
_ASKED = np.array([[-1.0], [1.0], [1.0], [1.0]])  # heat asked for is negative heat given off
_NO_HEAT = 1e-9  # relative to R T per mol
_SAME = 1e-9  # relative: a mean that is heat over entropy and no limit


def cooling_duties(
    purpose: str,
    inlet: Stream,
    outlet: Stream,
    site: Site,
    dissolved: tuple[str, ...] = DISSOLVED,
) -> list[Duty]:
    """Duties that bring `inlet` to the state of `outlet`, the same flows at another temperature."""
    start, level, pressure = (
        float(number) for number in (inlet.temperature, outlet.temperature, outlet.pressure)
    )
    heat = float(outlet.enthalpy) - float(inlet.enthalpy)
    linked = bool(site.inlets & {"heat", "power"}) or "heat" in site.outlets
    if not (site.detail or linked) or heat == 0.0 or float(inlet.total) == 0.0:
        return [Duty.between(purpose, heat, start, level)]
    matter, flows = inlet.matter, inlet.flows
    first = inlet.at_pressure(pressure, dissolved)
    between = _cuts(first, level, dissolved) if site.detail else []
    if min(start, level) < site.ambient < max(start, level):  # below it heat is another thing
        between = sorted({*between, site.ambient}, reverse=start > level)
    path = [first, *(Stream.at(matter, flows, t, pressure, dissolved) for t in between), outlet]
    levels = [start, *between, level]
    return [
        _duty(purpose, path[i], path[i + 1], levels[i], levels[i + 1]) for i in range(len(path) - 1)
    ]


def _duty(purpose: str, before: Stream, after: Stream, start: float, end: float) -> Duty:
    """The heat from one state to the next, at its entropy-mean temperature."""
    heat = float(after.enthalpy) - float(before.enthalpy)
    entropy = float(after.entropy) - float(before.entropy)
    mean = mean_temperature(start, end)
    if heat * entropy > 0.0:
        ends = (start, end, float(before.temperature))
        least, most = min(ends) * (1.0 - _DATA_SPREAD), max(ends) * (1.0 + _DATA_SPREAD)
        mean = min(max(heat / entropy, least), most)
    return Duty(purpose, heat, start, end, mean)


def _cuts(first: Stream, level: float, dissolved: tuple[str, ...]) -> list[float]:
    """Temperatures between the two ends where the path is cut, in its order."""
    start, pressure = float(first.temperature), float(first.pressure)
    matter, flows = first.matter, first.flows

    def wet(temperature: float) -> bool:
        return any_liquid(matter, flows, temperature, pressure, dissolved)

    condensed = bool(first.water.any() or first.liquid.any())
    wet_start, wet_end = wet(start) or condensed, wet(level)
    if not wet_start and not wet_end:
        return []
    if wet_start and wet_end:
        return _inside(start, level, _STEPS)
    if matter.water is not None and float(flows[matter.water]) == float(first.total):
        return _around_boiling(start, level, saturation_temperature(pressure))
    dew = _dew_point(wet, *((start, level) if wet_start else (level, start)))
    if wet_start:
        return [*_inside(start, dew, _STEPS), dew]
    return [dew, *_inside(dew, level, _STEPS)]


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


def _inside(start: float, end: float, steps: int) -> list[float]:
    return [float(t) for t in np.linspace(start, end, steps + 1)[1:-1]]


def add_heat_slopes(
    blocks: dict[str, Array],
    inlet: Stream,
    outlet_row: Array,
    site: Site,
    outcome: Outcome,
    at: tuple[float, float],
) -> dict[str, dict[str, Array]]:
    """Add what the linked `heat` or `power` port carries to the slopes; {} if it is not known.

    `outlet_row` holds the slopes of the enthalpy that leaves by ``[n_1..n_C, H]`` of the inlet,
    `at` the temperature [K] and pressure [Pa] of the outlet.
    """
    if not (site.inlets & {"heat", "power"} or "heat" in site.outlets):
        return {"inlet": blocks}
    carried = [duty for duty in outcome.duties if duty.met_by in ("heat", "power")]
    if len(carried) > 1:
        return {}
    none = np.zeros((4, len(outlet_row)))
    rows: Array | None = none
    if carried:
        rows = _heat_rows(inlet, outlet_row, carried[0], at)
    if rows is None:
        return {}
    given = bool(carried) and carried[0].heat < 0.0
    if "power" in site.inlets:
        by_power = bool(carried) and carried[0].met_by == "power"
        blocks["drawn:power"] = -rows[:1] if by_power else none[:1]
    if "heat" in site.inlets:
        blocks["drawn:heat"] = none if given else rows * _ASKED
    if "heat" in site.outlets:
        blocks["heat"] = rows if given else none
    return {"inlet": blocks}


class _End(NamedTuple):
    """One end of a heat flow: its state, and its slopes by the inlet."""

    stream: Stream
    temperature: Array
    enthalpy: Array
    entropy: Array


def _heat_rows(
    inlet: Stream, outlet_row: Array, duty: Duty, at: tuple[float, float]
) -> Array | None:
    """Slopes of heat given off, ``[rate, start, end, mean]``; None if a limit set its mean.

    Its mean temperature is heat over entropy, the entropy being that of the stream at the
    outlet's pressure before less after.
    """
    level, pressure = at
    own = duty.start == float(inlet.temperature)
    before = _inlet_end(inlet, pressure) if own else _fixed_end(inlet, duty.start, pressure)
    after = _fixed_end(inlet, duty.end, pressure)
    after_row = outlet_row if duty.end == level else after.enthalpy
    entropy = float(before.stream.entropy) - float(after.stream.entropy)
    if entropy == 0.0 or abs(-duty.heat / entropy - duty.mean) > _SAME * duty.mean:
        return None
    rate = before.enthalpy - after_row
    mean = (rate - duty.mean * (before.entropy - after.entropy)) / entropy
    return np.vstack([rate, before.temperature, after.temperature, mean])


def _inlet_end(inlet: Stream, pressure: float) -> _End:
    """The inlet, let down to the outlet's pressure where its entropy counts."""
    first = inlet.at_pressure(pressure)
    by_flow, by_level = entropy_slopes(first)
    to_flow, to_enthalpy = temperature_slopes(first)
    temperature = np.append(*temperature_slopes(inlet))
    enthalpy = np.zeros(len(temperature))
    enthalpy[-1] = 1.0
    entropy = np.append(by_flow + by_level * to_flow, by_level * to_enthalpy)
    return _End(first, temperature, enthalpy, entropy)


def _fixed_end(inlet: Stream, level: float, pressure: float) -> _End:
    """The same flows at a temperature that does not move."""
    stream = Stream.at(inlet.matter, inlet.flows, level, pressure)
    enthalpy = np.append(enthalpy_slopes(stream)[0], 0.0)
    entropy = np.append(entropy_slopes(stream)[0], 0.0)
    return _End(stream, np.zeros(len(enthalpy)), enthalpy, entropy)


def wrong_way(what: str, heat: float, total: float, *, cools: bool) -> tuple[Caution, ...]:
    """A caution for a cooler that has to heat, or a heater that has to cool."""
    if (heat if cools else -heat) <= _NO_HEAT * total * 2500.0:
        return ()
    does, instead = ("cool", "heat") if cools else ("heat", "cool")
    text = (
        f"this {what} is there to {does} but has to {instead} with {abs(heat) / 1e3:.4g} kW: "
        "look at its temperature and feed"
    )
    return (Caution("works-the-wrong-way", text),)

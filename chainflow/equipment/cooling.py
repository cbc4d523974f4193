"""Heat given off or needed by a stream that is brought to another temperature.

SI throughout: heat [W], temperature [K], pressure [Pa].  The heat is that of a reversible path at
the outlet's pressure: every duty carries its exact enthalpy and its entropy-mean temperature.
Where water condenses or boils on the way the heat is not spread evenly over the temperatures, so
the path is cut where that begins and into even steps from there on.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from chainflow.equipment.base import Caution, Site
from chainflow.equipment.heat_needs import Duty
from chainflow.equipment.ports import mean_temperature
from chainflow.thermo.streams import DISSOLVED, Stream
from chainflow.thermo.water import condenses

_STEPS = 6  # even steps in temperature where part of the stream is liquid water
_HALVINGS = 45  # of the temperatures between which water begins to condense
_AROUND_BOILING = 1e-9  # relative distance from the temperature at which pure water boils
_DATA_SPREAD = 0.01  # latent heat / latent entropy is the boiling temperature to 0.5 % at 30 bar
_NO_HEAT = 1e-9  # relative to R T per mol


def cooling_duties(
    purpose: str,
    inlet: Stream,
    level: float,
    pressure: float,
    heat: float,
    site: Site,
    dissolved: tuple[str, ...] = DISSOLVED,
) -> list[Duty]:
    """Duties that bring `inlet` to the temperature `level` at `pressure`, adding up to `heat`."""
    start = float(inlet.temperature)
    wanted = site.detail or "heat" in site.outlets or "heat" in site.inlets
    if not wanted or heat == 0.0 or float(inlet.total) == 0.0:
        return [Duty.between(purpose, heat, start, level)]
    matter, flows = inlet.matter, inlet.flows
    first = inlet.at_pressure(pressure, dissolved)
    after = float(inlet.enthalpy) + heat
    last = Stream.from_enthalpy(matter, flows, after, pressure, level, dissolved)
    between = _cuts(first, level, dissolved)
    path = [first, *(Stream.at(matter, flows, t, pressure, dissolved) for t in between), last]
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
        return condenses(matter, flows, temperature, pressure, dissolved)

    wet_start, wet_end = wet(start) or bool(first.water.any()), wet(level)
    if not wet_start and not wet_end:
        return []
    if wet_start and wet_end:
        return _inside(start, level, _STEPS)
    dew = _dew_point(wet, *((start, level) if wet_start else (level, start)))
    if float(flows[matter.water]) == float(first.total):
        cuts = [dew * (1.0 - _AROUND_BOILING), dew * (1.0 + _AROUND_BOILING)]
        cuts = cuts if wet_start else cuts[::-1]
        return [t for t in cuts if min(start, level) < t < max(start, level)]
    if wet_start:
        return [*_inside(start, dew, _STEPS), dew]
    return [dew, *_inside(dew, level, _STEPS)]


def _dew_point(wet: Callable[[float], bool], low: float, high: float) -> float:
    """The temperature between `low` (wet) and `high` (dry) at which water begins to condense."""
    for _ in range(_HALVINGS):
        middle = 0.5 * (low + high)
        low, high = (middle, high) if wet(middle) else (low, middle)
    return high


def _inside(start: float, end: float, steps: int) -> list[float]:
    return [float(t) for t in np.linspace(start, end, steps + 1)[1:-1]]


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

"""Heat given off or needed by a stream that is brought to another temperature.

SI throughout: heat [W], temperature [K], pressure [Pa].  The heat is that of a reversible path at
the outlet's pressure: every duty carries its exact enthalpy and its entropy-mean temperature.
Where water or oil condenses or boils on the way the heat is not spread evenly over the
temperatures, so the path is cut where that begins and into even steps from there on.  A gas whose
heat capacity changes with temperature stays one duty and carries the curve of its heat.
"""

from __future__ import annotations

from collections.abc import Callable
from itertools import pairwise
from typing import NamedTuple

from chainflow.equipment.base import Caution, Site
from chainflow.equipment.heat_needs import Duty
from chainflow.equipment.ports import Part, mean_temperature
from chainflow.thermo.dew import dew_temperature, oil_dew_temperature
from chainflow.thermo.phases import any_liquid
from chainflow.thermo.species import LOWEST_TEMPERATURE
from chainflow.thermo.streams import DISSOLVED, Stream
from chainflow.thermo.water import saturation_temperature

_STEPS = 6  # even steps in temperature where part of the stream is liquid water
GAS_STEPS = 4  # of the curve of a gas: a chord is off by 1 K over 600 K
_HALVINGS = 45  # of the temperatures between which oil begins to condense, to round-off
_TRACE = 1e-9  # of the flow: liquid at a dew point found to round-off
_AROUND_BOILING = 1e-9  # relative distance from the temperature at which pure water boils
_DATA_SPREAD = 0.01  # latent heat / latent entropy is the boiling temperature to 0.5 % at 30 bar
_NO_HEAT = 1e-9  # relative to R T per mol


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
    shaped, between = is_shaped(site), []
    if shaped:
        first = inlet.at_pressure(pressure, dissolved)
        between = [cut.temperature for cut in path_cuts(first, level, dissolved)]
    if min(start, level) < site.ambient < max(start, level):  # below it heat is another thing
        between = sorted({*between, site.ambient}, reverse=start > level)
    levels = [start, *between, level]
    inside = [Stream.at(matter, flows, t, pressure, dissolved) for t in between]
    if not shaped:  # how much heat it is, and nothing else
        enthalpies = [float(state.enthalpy) for state in (inlet, *inside, outlet)]
        heats = [after - before for before, after in pairwise(enthalpies)]
        pairs = zip(heats, pairwise(levels), strict=True)
        return [Duty.between(purpose, part, *ends) for part, ends in pairs]
    duties = []
    path = [_State.of(stream) for stream in (first, *inside, outlet)]
    for before, after, ends in zip(path, path[1:], pairwise(levels), strict=False):
        curve = _curve(before, after, *ends)
        duties.append(Duty(purpose, *_part(before, after, *ends), curve=curve))
    return duties


def is_shaped(site: Site) -> bool:
    """Return whether it is asked how heat is spread over its temperatures."""
    return site.detail or (site.shaped and "heat" in site.inlets | site.outlets)


class _State(NamedTuple):
    """A stream on its path, and its entropy [W/K], which two parts of the path ask for."""

    stream: Stream
    entropy: float

    @classmethod
    def of(cls, stream: Stream) -> _State:
        return cls(stream, float(stream.entropy))


def _part(before: _State, after: _State, start: float, end: float) -> Part:
    """The heat from one state to the next, its ends and its entropy-mean temperature."""
    heat = float(after.stream.enthalpy) - float(before.stream.enthalpy)
    entropy = after.entropy - before.entropy
    mean = mean_temperature(start, end)
    if heat * entropy > 0.0:
        ends = (start, end, float(before.stream.temperature))
        least, most = min(ends) * (1.0 - _DATA_SPREAD), max(ends) * (1.0 + _DATA_SPREAD)
        mean = min(max(heat / entropy, least), most)
    return heat, start, end, mean


def _curve(before: _State, after: _State, start: float, end: float) -> tuple[Part, ...]:
    """The parts of the heat of a gas between two states; none where it is no gas all the way."""
    if (
        not (_is_gas(before.stream) and _is_gas(after.stream))
        or min(start, end) < LOWEST_TEMPERATURE
    ):
        return ()
    step = (end - start) / GAS_STEPS
    levels = [*(start + k * step for k in range(GAS_STEPS)), end]
    first, pressure = before.stream, after.stream.pressure
    inside = [Stream.gaseous(first.matter, first.flows, t, pressure) for t in levels[1:-1]]
    path = [before, *map(_State.of, inside), after]
    parts = tuple(_part(path[i], path[i + 1], levels[i], levels[i + 1]) for i in range(GAS_STEPS))
    signs = {part[0] > 0.0 for part in parts}  # a let-down that cools more than a step warms
    return parts if len(signs) == 1 else ()


def _is_gas(stream: Stream) -> bool:
    liquid = float(stream.water.sum()) + float(stream.liquid.sum())
    return liquid <= _TRACE * float(stream.total)


class Cut(NamedTuple):
    """A temperature [K] at which a path is cut, and how it moves with the path's start and dew."""

    temperature: float
    by_start: float = 0.0
    by_dew: float = 0.0
    liquid: str = ""  # water or oil, at a dew point of that


def path_cuts(first: Stream, level: float, dissolved: tuple[str, ...]) -> list[Cut]:
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
        return [Cut(t, by_start=1.0 - share) for t, share in _inside(start, level)]
    if matter.water is not None and float(flows[matter.water]) == float(first.total):
        return [Cut(t) for t in _around_boiling(start, level, saturation_temperature(pressure))]
    water = dew_temperature(matter, flows, pressure, dissolved) or 0.0
    oil = oil_dew_temperature(matter, flows, pressure) or 0.0
    dew, low, high = max(water, oil), min(start, level), max(start, level)
    liquid = "oil" if dew == oil else "water"
    if not low < dew < high:  # it is wet where it is hot
        dew, liquid = _dew_point(wet, *((start, level) if wet_start else (level, start))), ""
    at_dew = Cut(dew, by_dew=1.0, liquid=liquid)
    if wet_start:
        return [*(Cut(t, 1.0 - k, k) for t, k in _inside(start, dew)), at_dew]
    return [at_dew, *(Cut(t, 0.0, 1.0 - k) for t, k in _inside(dew, level))]


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


def _inside(start: float, end: float) -> list[tuple[float, float]]:
    """Temperatures between two that part the way into even steps, with their shares of it."""
    step = (end - start) / _STEPS
    return [(start + k * step, k / _STEPS) for k in range(1, _STEPS)]


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

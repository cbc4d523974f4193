"""Heat given off or needed by a stream that is brought to another temperature.

SI throughout: heat [W], temperature [K], pressure [Pa].  The heat is that of a reversible path at
the outlet's pressure: every duty carries its exact enthalpy and its entropy-mean temperature.
Where water or oil condenses or boils on the way the heat is not spread evenly over the
temperatures, so the path is cut where that begins and several times from there on.  A gas whose
heat capacity changes with temperature stays one duty and carries the curve of its heat.
"""

from __future__ import annotations

from itertools import pairwise
from typing import NamedTuple

from chainflow.equipment.base import Caution, Site
from chainflow.equipment.heat_needs import Duty
from chainflow.equipment.path_cuts import Way, find_way
from chainflow.equipment.ports import Part, mean_temperature
from chainflow.thermo.species import LOWEST_TEMPERATURE
from chainflow.thermo.streams import DISSOLVED, Stream

GAS_STEPS = 4  # of the curve of a gas: a chord is off by 1 K over 600 K
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
    shaped, way, first = is_shaped(site), Way(), inlet
    if shaped:
        first = inlet.at_pressure(pressure, dissolved)
        way = find_way(first, level, dissolved)
    between = [cut.temperature for cut in way.cuts]
    if min(start, level) < site.ambient < max(start, level):  # below it heat is another thing
        between = sorted({*between, site.ambient}, reverse=start > level)
    levels = [start, *between, level]
    if not shaped:  # how much heat it is, and nothing else
        inside = [Stream.at(inlet.matter, inlet.flows, t, pressure, dissolved) for t in between]
        enthalpies = [float(state.enthalpy) for state in (inlet, *inside, outlet)]
        heats = [after - before for before, after in pairwise(enthalpies)]
        pairs = zip(heats, pairwise(levels), strict=True)
        return [Duty.between(purpose, part, *ends) for part, ends in pairs]
    duties = []
    states = [first, *(way.state(first, t, dissolved) for t in between), outlet]
    path = [_State.of(stream) for stream in states]
    for before, after, ends in zip(path, path[1:], pairwise(levels), strict=False):
        curve = _curve(before, after, *ends) if min(ends) >= way.dry_from else ()
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
    """The parts of the heat of a gas between two states; none below its data."""
    if min(start, end) < LOWEST_TEMPERATURE:
        return ()
    step = (end - start) / GAS_STEPS
    levels = [*(start + k * step for k in range(GAS_STEPS)), end]
    first, pressure = before.stream, after.stream.pressure
    inside = [Stream.gaseous(first.matter, first.flows, t, pressure) for t in levels[1:-1]]
    path = [before, *map(_State.of, inside), after]
    parts = tuple(_part(path[i], path[i + 1], levels[i], levels[i + 1]) for i in range(GAS_STEPS))
    signs = {part[0] > 0.0 for part in parts}  # a let-down that cools more than a step warms
    return parts if len(signs) == 1 else ()


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

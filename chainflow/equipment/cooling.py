"""Heat given off or needed by a stream that is brought to another temperature.

SI throughout: heat [W], temperature [K], pressure [Pa].  Where part of the stream condenses the
heat is not spread evenly, so it is split into segments; together they carry the exact enthalpy.
"""

from __future__ import annotations

import numpy as np

from chainflow.equipment.base import Caution, Site
from chainflow.equipment.heat_needs import Duty
from chainflow.thermo.streams import Stream

_SEGMENTS = 6  # even steps in temperature where a phase appears on the way
_NO_HEAT = 1e-9  # relative to R T per mol


def cooling_duties(
    purpose: str, inlet: Stream, level: float, pressure: float, heat: float, site: Site
) -> list[Duty]:
    """Duties that bring `inlet` to the temperature `level` at `pressure`, adding up to `heat`."""
    start = float(inlet.temperature)
    wanted = site.detail or "heat" in site.outlets or "heat" in site.inlets
    if not wanted or heat == 0.0 or not _condenses(inlet, level, pressure):
        return [Duty.between(purpose, heat, start, level)]
    steps = np.linspace(start, level, _SEGMENTS + 1)
    path = [float(Stream.at(inlet.matter, inlet.flows, t, pressure).enthalpy) for t in steps[1:-1]]
    ends = [float(inlet.enthalpy), *path, float(inlet.enthalpy) + heat]
    return [
        Duty.between(purpose, after - before, float(t0), float(t1))
        for before, after, t0, t1 in zip(ends, ends[1:], steps, steps[1:], strict=False)
    ]


def _condenses(inlet: Stream, level: float, pressure: float) -> bool:
    """Whether the liquid water of the stream changes between its state and `level`."""
    if inlet.matter.water is None or float(inlet.total) == 0.0:
        return False
    after = Stream.at(inlet.matter, inlet.flows, level, pressure)
    return bool(abs(after.water.sum() - inlet.water.sum()) > 1e-12 * inlet.total)


def wrong_way(what: str, heat: float, total: float, *, cools: bool) -> tuple[Caution, ...]:
    """A caution for a cooler that has to heat, or a heater that has to cool."""
    if (heat if cools else -heat) <= _NO_HEAT * total * 2500.0:
        return ()
    does, instead = ("cool", "heat") if cools else ("heat", "cool")
    text = f"this {what} is there to {does} but has to {instead} with {abs(heat) / 1e3:.4g} kW: look at its temperature and feed"
    return (Caution("works-the-wrong-way", text),)

"""Slopes in closed form of the heat that a stream gives off or needs on its way to a temperature.

SI throughout: heat [W], temperature [K], pressure [Pa]; slopes by ``[n_1..n_C, H]`` of the inlet.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np

from chainflow.equipment.base import Array, Outcome, Site
from chainflow.equipment.cooling import is_shaped
from chainflow.equipment.heat_needs import Duty
from chainflow.equipment.path_cuts import Way, find_way
from chainflow.equipment.ports import MOST_PARTS, Part
from chainflow.thermo.dew import dew_slopes, oil_dew_slopes
from chainflow.thermo.stream_slopes import enthalpy_slopes, entropy_slopes, temperature_slopes
from chainflow.thermo.streams import DISSOLVED, Stream

_ASKED = np.array([[-1.0], [1.0], [1.0], [1.0]])  # heat asked for is negative heat given off
_TRACE = 1e-12  # of the flow
_SAME = 1e-9  # relative: a mean that is heat over entropy and no limit


def add_heat_slopes(
    blocks: dict[str, Array],
    inlet: Stream,
    outlet_row: Array,
    site: Site,
    outcome: Outcome,
    at: tuple[float, float],
    dissolved: tuple[str, ...] = DISSOLVED,
) -> dict[str, dict[str, Array]]:
    """Add what the linked `heat` or `power` port carries to the slopes; {} if it is not known.

    `outlet_row` holds the slopes of the enthalpy that leaves by ``[n_1..n_C, H]`` of the inlet,
    `at` the temperature [K] and pressure [Pa] of the outlet.
    """
    if not (site.inlets & {"heat", "power"} or "heat" in site.outlets):
        return {"inlet": blocks}
    if not is_shaped(site):
        power = _power_row(inlet, outlet_row, site, outcome, at, dissolved)
        return {"inlet": blocks | ({"drawn:power": power} if "power" in site.inlets else {})}
    carried = [duty for duty in outcome.duties if duty.met_by in ("heat", "power")]
    none = np.zeros((4, len(outlet_row)))
    parts: list[Array] = []
    if carried:
        path = _Path.of(inlet, outlet_row, site, at, dissolved)
        if path is None:
            return {}
        found = [rows for duty in carried for rows in path.part_rows(duty)]
        parts = [rows for rows in found if rows is not None and np.isfinite(rows).all()]
        if len(parts) < len(found) or len(found) > MOST_PARTS:
            return {}
    signs = {(duty.heat < 0.0, duty.met_by) for duty in carried}
    if len(signs) > 1:
        return {}
    ((given, met_by),) = signs or {(False, "")}
    parts = parts or [none]
    if "power" in site.inlets:
        whole = -np.sum([rows[:1] for rows in parts], axis=0)
        blocks["drawn:power"] = whole if met_by == "power" else none[:1]
    if "heat" in site.inlets:
        blocks["drawn:heat"] = none if given else np.vstack([rows * _ASKED for rows in parts])
    if "heat" in site.outlets:
        blocks["heat"] = np.vstack(parts) if given else none
    return {"inlet": blocks}


def _power_row(
    inlet: Stream,
    outlet_row: Array,
    site: Site,
    outcome: Outcome,
    at: tuple[float, float],
    dissolved: tuple[str, ...],
) -> Array:
    """Slopes of the power that meets the heat of a path, where nobody asks for its shape."""
    level, pressure = at
    row = np.zeros((1, len(outlet_row)))
    for duty in outcome.duties:
        if duty.met_by == "power":
            for end, sign in ((duty.end, 1.0), (duty.start, -1.0)):
                if end == level:
                    row += sign * outlet_row
                elif end == float(inlet.temperature):
                    row[0, -1] += sign
                else:
                    state = Stream.at(inlet.matter, inlet.flows, site.ambient, pressure, dissolved)
                    row[0, :-1] += sign * enthalpy_slopes(state, dissolved)[0]
    return row


def carried_at_levels(
    rates: dict[str, Array],
    power: Array,
    site: Site,
    outcome: Outcome,
    moving: dict[str, Array] | None = None,
) -> dict[str, Array] | None:
    """Slopes of what the linked `heat` and `power` ports carry for duties at one temperature each.

    `rates` holds the slopes of each duty's heat by its purpose, `power` those of power that is
    drawn whatever the heat needs, `moving` those of the temperatures that are not fixed.  None
    where a duty was parted, or where nothing passes a port and its temperature may move.
    """
    purposes = [duty.purpose for duty in outcome.duties]
    if len(set(purposes)) < len(purposes):
        return None
    moving = moving or {}
    called = [d.purpose for d in outcome.duties if d.met_by == "heat" and d.heat > 0.0]
    given = [d.purpose for d in outcome.duties if d.met_by == "heat" and d.heat < 0.0]
    drawn = power + sum(rates[d.purpose] for d in outcome.duties if d.met_by == "power")
    carried = {"drawn:power": drawn[None, :]}
    ports = (
        ("drawn:heat", "heat" in site.inlets, called, 1.0),
        ("heat", "heat" in site.outlets, given, -1.0),
    )
    for port, linked, passing, sign in ports:
        if linked and not passing and moving:
            return None
        if linked:
            rows = [_at_a_level(sign * rates[name], moving.get(name)) for name in passing]
            carried[port] = np.vstack(rows or [np.zeros((4, len(power)))])
    return carried


def _at_a_level(rate: Array, level: Array | None) -> Array:
    """Slopes ``[rate, start, end, mean]`` of heat at one temperature."""
    still = np.zeros(len(rate)) if level is None else level
    return np.vstack([rate, still, still, still])


class _End(NamedTuple):
    """One end of a part of the heat: its entropy [W/K], and its slopes by the inlet."""

    content: float
    temperature: Array
    enthalpy: Array
    entropy: Array


@dataclass(frozen=True, slots=True)
class _Path:
    """The way of a stream to the outlet's temperature, at the outlet's pressure."""

    first: Stream  # the inlet at the outlet's pressure
    way: Way
    dissolved: tuple[str, ...]
    moves: dict[float, Array]  # slopes of the temperatures between which duties lie
    ends: dict[float, _End]  # those that are known

    @staticmethod
    def of(
        inlet: Stream,
        outlet_row: Array,
        site: Site,
        at: tuple[float, float],
        dissolved: tuple[str, ...],
    ) -> _Path | None:
        """The path of a stream.

        None where the dew point was only searched for, and where all is liquid at the start: an
        absent gas would bring a phase with it, whose slopes are not those without it.
        """
        level, pressure = at
        first = inlet.at_pressure(pressure, dissolved)
        way = find_way(first, level, dissolved)
        by_dew = any(cut.by_dew for cut in way.cuts)
        if not way.dew_of or (by_dew and _may_bring_gas(first)):
            return None
        moves = {site.ambient: np.zeros(len(outlet_row))} | _moves(first, way, dissolved)
        path = _Path(first, way, dissolved, moves, {})
        path.ends[float(inlet.temperature)] = _inlet_end(inlet, first, dissolved)
        last = path.end(level, np.zeros(len(outlet_row)))
        path.ends[level] = last._replace(enthalpy=outlet_row)
        return path

    def at(self, level: float) -> _End | None:
        """One of the ends of the duties; None for a temperature that is not on the path."""
        if level not in self.ends:
            if level not in self.moves:
                return None
            self.ends[level] = self.end(level, self.moves[level])
        return self.ends[level]

    def end(self, level: float, moves: Array) -> _End:
        """The state at a temperature that moves."""
        return _end(self.way.state(self.first, level, self.dissolved), moves, self.dissolved)

    def part_rows(self, duty: Duty) -> Iterator[Array | None]:
        """Slopes of each part of heat given off, ``[rate, start, end, mean]``.

        None for a part whose mean was set by a limit: it is heat over entropy elsewhere, the
        entropy being that of the stream at the outlet's pressure before less after.
        """
        before, last = self.at(duty.start), self.at(duty.end)
        if before is None or last is None:
            yield None
            return
        first, stream = before, self.first
        parts = duty.curve or ((duty.heat, duty.start, duty.end, duty.mean),)
        for number, part in enumerate(parts, start=1):
            after = last
            if number < len(parts):
                share = number / len(parts)
                moves = (1.0 - share) * first.temperature + share * last.temperature
                gas = Stream.gaseous(stream.matter, stream.flows, part[2], stream.pressure)
                after = _end(gas, moves, self.dissolved)
            yield _rows(part, before, after)
            before = after


def _may_bring_gas(stream: Stream) -> bool:
    """Whether there is no gas, and something absent that would be one."""
    trace = _TRACE * float(stream.total)
    return bool(float(stream.gas.sum()) < trace and (stream.flows < trace).any())


def _moves(first: Stream, way: Way, dissolved: tuple[str, ...]) -> dict[float, Array]:
    """Slopes of the temperatures at which a path is cut."""
    began = np.append(*temperature_slopes(first, dissolved))
    dew, rest, water = np.zeros(len(began)), np.ones(len(began)), np.zeros(len(began))
    rest[-1] = 0.0
    if first.matter.water is not None:
        rest[first.matter.water], water[first.matter.water] = 0.0, 1.0
    if any(cut.by_dew for cut in way.cuts):
        at = (first.matter, first.flows, way.dry_from, float(first.pressure))
        dew[:-1] = oil_dew_slopes(*at) if way.dew_of == "oil" else dew_slopes(*at, dissolved)
    ways = np.vstack([began, dew, water, rest])
    return {cut.temperature: np.array(cut[1:]) @ ways for cut in way.cuts}


def _rows(part: Part, before: _End, after: _End) -> Array | None:
    """Slopes of one part of heat given off; None if a limit set its mean."""
    heat, _, _, level = part
    entropy = before.content - after.content
    if entropy == 0.0 or abs(-heat / entropy - level) > _SAME * level:
        return None
    rate = before.enthalpy - after.enthalpy
    mean = (rate - level * (before.entropy - after.entropy)) / entropy
    return np.vstack([rate, before.temperature, after.temperature, mean])


def _inlet_end(inlet: Stream, first: Stream, dissolved: tuple[str, ...]) -> _End:
    """The inlet, let down to the outlet's pressure where its entropy counts."""
    by_flow, by_level = entropy_slopes(first, dissolved)
    to_flow, to_enthalpy = temperature_slopes(first, dissolved)
    temperature = np.append(*temperature_slopes(inlet))
    enthalpy = np.zeros(len(temperature))
    enthalpy[-1] = 1.0
    entropy = np.append(by_flow + by_level * to_flow, by_level * to_enthalpy)
    return _End(float(first.entropy), temperature, enthalpy, entropy)


def _end(stream: Stream, moves: Array, dissolved: tuple[str, ...]) -> _End:
    """A state at a temperature that moves."""
    by_flow, capacity = enthalpy_slopes(stream, dissolved)
    entropy_by_flow, by_level = entropy_slopes(stream, dissolved)
    enthalpy = np.append(by_flow, 0.0)
    entropy = np.append(entropy_by_flow, 0.0)
    if moves.any():
        enthalpy += capacity * moves
        entropy += by_level * moves
    return _End(float(stream.entropy), moves, enthalpy, entropy)

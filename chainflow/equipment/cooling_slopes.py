"""Slopes in closed form of the heat that a stream gives off or needs on its way to a temperature.

SI throughout: heat [W], temperature [K], pressure [Pa]; slopes by ``[n_1..n_C, H]`` of the inlet.
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import NamedTuple

import numpy as np

from chainflow.equipment.base import Array, Outcome, Site
from chainflow.equipment.heat_needs import Duty
from chainflow.equipment.ports import Part
from chainflow.thermo.streams import (
    Stream,
    enthalpy_slopes,
    entropy_slopes,
    temperature_slopes,
)

_ASKED = np.array([[-1.0], [1.0], [1.0], [1.0]])  # heat asked for is negative heat given off
_SAME = 1e-9  # relative: a mean that is heat over entropy and no limit


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
    parts: list[Array] = [none]
    if carried:
        found = list(_part_rows(inlet, outlet_row, carried[0], at))
        parts = [rows for rows in found if rows is not None]
        if len(parts) < len(found):
            return {}
    given = bool(carried) and carried[0].heat < 0.0
    if "power" in site.inlets:
        by_power = bool(carried) and carried[0].met_by == "power"
        whole = -np.sum([rows[:1] for rows in parts], axis=0)
        blocks["drawn:power"] = whole if by_power else none[:1]
    if "heat" in site.inlets:
        blocks["drawn:heat"] = none if given else np.vstack([rows * _ASKED for rows in parts])
    if "heat" in site.outlets:
        blocks["heat"] = np.vstack(parts) if given else none
    return {"inlet": blocks}


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
    """One end of a part of the heat: its state, and its slopes by the inlet."""

    stream: Stream
    temperature: Array
    enthalpy: Array
    entropy: Array


def _part_rows(
    inlet: Stream, outlet_row: Array, duty: Duty, at: tuple[float, float]
) -> Iterator[Array | None]:
    """Slopes of each part of heat given off, ``[rate, start, end, mean]``.

    None for a part whose mean was set by a limit: it is heat over entropy elsewhere, the entropy
    being that of the stream at the outlet's pressure before less after.
    """
    level, pressure = at
    own = duty.start == float(inlet.temperature)
    first = _inlet_end(inlet, pressure) if own else _fixed_end(inlet, duty.start, pressure)
    last = _fixed_end(inlet, duty.end, pressure)
    if duty.end == level:
        last = last._replace(enthalpy=outlet_row)
    before = first
    for number, part in enumerate(duty.curve or ((duty.heat, duty.start, duty.end, duty.mean),)):
        share = (number + 1) / max(len(duty.curve), 1)
        after = last
        if share < 1.0:
            moves = (1.0 - share) * first.temperature + share * last.temperature
            after = _inner_end(inlet, part[2], pressure, moves)
        yield _rows(part, before, after)
        before = after


def _rows(part: Part, before: _End, after: _End) -> Array | None:
    """Slopes of one part of heat given off; None if a limit set its mean."""
    heat, _, _, level = part
    entropy = float(before.stream.entropy) - float(after.stream.entropy)
    if entropy == 0.0 or abs(-heat / entropy - level) > _SAME * level:
        return None
    rate = before.enthalpy - after.enthalpy
    mean = (rate - level * (before.entropy - after.entropy)) / entropy
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


def _inner_end(inlet: Stream, level: float, pressure: float, moves: Array) -> _End:
    """The same flows as a gas at a temperature that moves with the two ends of its curve."""
    stream = Stream.gaseous(inlet.matter, inlet.flows, level, pressure)
    by_flow, capacity = enthalpy_slopes(stream)
    entropy_by_flow, by_level = entropy_slopes(stream)
    enthalpy = np.append(by_flow, 0.0) + capacity * moves
    entropy = np.append(entropy_by_flow, 0.0) + by_level * moves
    return _End(stream, moves, enthalpy, entropy)

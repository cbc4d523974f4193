"""Which numbers among the settings can be moved a little, and in which directions?

A number that has to add up to one with others of which none is `rest`, and one that is held, cannot
be moved alone; one at an end of its range only moves inwards.  Whole numbers do not move a little.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace

from pydantic import ValidationError

from chainflow.basis.names import suggest
from chainflow.equipment.base import Equipment
from chainflow.equipment.setting_numbers import inside, keys_inside, number_of
from chainflow.flowsheet.addresses import AddressError, SettingAddress, parse_setting
from chainflow.flowsheet.network import Flowsheet


@dataclass(frozen=True, slots=True)
class Lever:
    """One number of the file that can be moved: a setting, or a knob and all that it sets."""

    name: str  # the address of the setting, or the name of the knob
    settings: tuple[SettingAddress, ...]
    holds: tuple[int, ...] = ()  # places of the holds whose wanted value it sets
    value: float = 0.0  # SI
    unit: str = "1"
    difference: bool = False  # a temperature difference
    elsewhere: tuple[str, ...] = ()  # where it stands besides, out of reach


def levers(flowsheet: Flowsheet) -> tuple[Lever, ...]:
    """Return every knob that sets numbers, then every number that no knob sets, in file order."""
    found = [lever for name in flowsheet.knob_places if (lever := _knob(flowsheet, name))]
    taken = {(s.piece, s.path) for lever in found for s in lever.settings}
    alone = [
        _setting(flowsheet, setting)
        for setting in movable_settings(flowsheet)
        if (setting.piece, setting.path) not in taken
    ]
    return (*found, *alone)


def lever(flowsheet: Flowsheet, name: str) -> Lever:
    """Return the knob or setting of that name; AddressError if there is none."""
    if name in flowsheet.knob_places:
        found = _knob(flowsheet, name)
        if found is None:
            raise AddressError(f"knob '{name}' sets no number that can be moved")
        return found
    if "." not in name:
        known = [*flowsheet.knob_places, *flowsheet.equipment]
        raise AddressError(f"there is no knob '{name}'{suggest(name, known)}")
    return _setting(flowsheet, parse_setting(name, flowsheet.equipment))


def _setting(flowsheet: Flowsheet, setting: SettingAddress) -> Lever:
    value = flowsheet.equipment[setting.piece].setting(setting.path)
    name, difference = address_of(setting), setting.difference
    return Lever(name, (setting,), value=value, unit=setting.unit, difference=difference)


def _knob(flowsheet: Flowsheet, name: str) -> Lever | None:
    known = {address_of(setting): setting for setting in movable_settings(flowsheet)}
    places = flowsheet.knob_places[name]
    settings = tuple(known[place] for place in places if place in known)
    wanted = {f"holds.{number}.at": number for number in range(len(flowsheet.holds))}
    holds = tuple(wanted[place] for place in places if place in wanted)
    elsewhere = tuple(p for p in places if p not in known and p not in wanted)
    if settings:
        first = _setting(flowsheet, settings[0])
        return replace(first, name=name, settings=settings, holds=holds, elsewhere=elsewhere)
    if holds:
        hold = flowsheet.holds[holds[0]]
        return Lever(name, (), holds, hold.at, hold.unit, hold.difference, elsewhere)
    return None


def movable_settings(flowsheet: Flowsheet) -> tuple[SettingAddress, ...]:
    """Return every number among the settings, in file order; held settings are left out."""
    held = {(hold.piece, hold.path) for hold in flowsheet.holds}
    return tuple(
        setting
        for name, piece in flowsheet.equipment.items()
        for setting in _numbers(name, piece)
        if (name, setting.path) not in held
    )


def address_of(setting: SettingAddress) -> str:
    """Return the address of a setting as it is written."""
    return ".".join((setting.piece, *setting.path))


def _numbers(name: str, piece: Equipment) -> Iterator[SettingAddress]:
    for field in type(piece).model_fields:
        yield from _below(name, piece, (field,), getattr(piece, field))


def _below(
    name: str, piece: Equipment, path: tuple[str, ...], value: object
) -> Iterator[SettingAddress]:
    number = number_of(value)
    if isinstance(number, float):
        unit = piece.setting_unit(path)
        if unit is not None:
            yield SettingAddress(name, path, unit, piece.setting_is_difference(path))
    elif number is value:
        for key in keys_inside(value):
            yield from _below(name, piece, (*path, key), inside(value, key))


def moved(flowsheet: Flowsheet, lever: Lever, by: float) -> Flowsheet:
    """Return the flowsheet with all that a lever sets moved by some amount (SI)."""
    pieces, holds = dict(flowsheet.equipment), list(flowsheet.holds)
    for setting in lever.settings:
        piece = pieces[setting.piece]
        number = piece.setting(setting.path) + by
        pieces[setting.piece] = piece.with_setting(setting.path, number)
    for place in lever.holds:
        holds[place] = replace(holds[place], at=holds[place].at + by)
    return replace(flowsheet, equipment=pieces, holds=tuple(holds))


def is_allowed(flowsheet: Flowsheet, lever: Lever, by: float) -> bool:
    """Whether all equipment still takes its settings when the lever is moved."""
    changed = moved(flowsheet, lever, by)
    return all(
        _valid(changed.equipment[name], flowsheet)
        for name in dict.fromkeys(setting.piece for setting in lever.settings)
        if _valid(flowsheet.equipment[name], flowsheet)  # else it needs more to be checked
    )


def _valid(piece: Equipment, flowsheet: Flowsheet) -> bool:
    given = {name: getattr(piece, name) for name in type(piece).model_fields}
    try:
        type(piece).model_validate(given)
    except ValidationError:
        return False
    return not any(True for _ in piece.setting_faults(flowsheet.matter))

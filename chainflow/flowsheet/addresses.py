"""Addresses: one way to name any setting or result, the same everywhere.

``name.setting`` (and ``name.setting.key``); ``name.port.flow``, ``.flow.CH4``, ``.mass_flow``,
``.fraction.CO2``, ``.dry_fraction.CH4``, ``.temperature``, ``.pressure``, ``.ratio.H2/CO2``,
``.rate``; ``name.duty.heat``, ``name.duty.power``; ``name.<own result>``.  Values are SI.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Literal

from chainflow.basis.names import shorten, suggest
from chainflow.equipment.base import Equipment, Outcome
from chainflow.equipment.ports import Flow, Heat, rate_of
from chainflow.equipment.setting_numbers import inside, keys_inside, number_of
from chainflow.thermo.streams import Stream

_LONGEST = 200  # characters of an address
PROPERTY_UNITS = {
    "flow": "mol/s",
    "mass_flow": "kg/s",
    "fraction": "1",
    "dry_fraction": "1",
    "temperature": "K",
    "pressure": "Pa",
    "ratio": "1",
    "rate": "W",
}
_WITH_COMPONENT = ("fraction", "dry_fraction")
_RESULT_UNITS = {  # the first end that fits counts: longer ones stand before what they end in
    "_mol_s": "mol/s",
    "_kg_s": "kg/s",
    "_J_kg": "J/kg",
    "_J_mol": "J/mol",
    "_J_m3": "J/m3",
    "_J_m2": "J/m2",
    "_W_m2": "W/m2",
    "_mol_m2_s": "mol/(m2*s)",
    "_m3_s": "m3/s",
    "_kg_m3": "kg/m3",
    "_J": "J",
    "_kg": "kg",
    "_m3": "m3",
    "_W_K": "W/K",
    "_Pa": "Pa",
    "_K": "K",
    "_W": "W",
    "_A_m2": "A/m2",
    "_S_m2": "S/m2",
    "_m2": "m2",
    "_A": "A",
    "_V": "V",
    "_rad": "rad",
    "_s": "s",
}
_DIFFERENCES = ("approach_K", "difference_K")


class AddressError(ValueError):
    """An address that names nothing; the text says what was found and what there is."""


@dataclass(frozen=True, slots=True)
class ResultAddress:
    """A result of one piece of equipment."""

    piece: str
    where: Literal["outlet", "inlet", "duty", "own"]
    name: str  # port, "heat"/"power", or the result's full name
    prop: str = ""
    argument: str = ""
    unit: str = "1"

    @property
    def difference(self) -> bool:
        """Whether it is a temperature difference."""
        return self.where == "own" and is_difference(self.name)


@dataclass(frozen=True, slots=True)
class SettingAddress:
    """A number among the settings of one piece of equipment."""

    piece: str
    path: tuple[str, ...]
    unit: str
    difference: bool = False  # a temperature difference


def is_difference(name: str) -> bool:
    """Whether a result is a temperature difference, by the end of its name."""
    return name.endswith(_DIFFERENCES)


def unit_of_result(name: str) -> str:
    """SI unit of a result by the end of its name."""
    return next((unit for end, unit in _RESULT_UNITS.items() if name.endswith(end)), "1")


def short_name(name: str) -> str:
    """A result's name without its unit: ``net_mol_s`` is ``net``."""
    end = next((end for end in _RESULT_UNITS if name.endswith(end)), "")
    return name[: len(name) - len(end)]


def parse_setting(address: str, equipment: Mapping[str, Equipment]) -> SettingAddress:
    """Find the number among the settings that an address names."""
    words = _words(address)
    piece = _piece(words, address, equipment)
    fields = type(piece).model_fields
    if len(words) < 2 or words[1] not in fields:
        word = words[1] if len(words) > 1 else ""
        raise AddressError(
            f"'{address}': {words[0]} ({piece.kind}) has no setting '{word}'{suggest(word, fields)}"
        )
    path = tuple(words[1:])
    unit = piece.setting_unit(path)
    value: object = getattr(piece, path[0])
    for place, key in enumerate(path[1:], start=2):
        known = keys_inside(value)
        if key not in known:
            above = ".".join(words[:place])
            raise AddressError(f"'{address}': there is no '{key}' in {above}{suggest(key, known)}")
        value = inside(value, key)
    number = number_of(value)
    if unit is None or isinstance(number, bool) or not isinstance(number, int | float):
        raise AddressError(f"'{address}' {_no_number(number)}")
    return SettingAddress(words[0], path, unit, piece.setting_is_difference(path))


def _no_number(value: object) -> str:
    known = keys_inside(value)
    if known:
        return f"is no number, name one entry of it: {', '.join(known)}"
    if value is None:
        return "is not set: give it a value to start from"
    return f"is {value!r} and no number that can be moved"


def parse_result(
    address: str, equipment: Mapping[str, Equipment], components: tuple[str, ...]
) -> ResultAddress:
    """Find the result that an address names."""
    words = _words(address)
    piece = _piece(words, address, equipment)
    if len(words) < 2:
        raise AddressError(
            f"'{address}' names no result, wanted {words[0]}.port.property or {words[0]}.result"
        )
    if words[1] == "duty":
        if len(words) != 3 or words[2] not in ("heat", "power"):
            raise AddressError(f"'{address}': wanted {words[0]}.duty.heat or {words[0]}.duty.power")
        return ResultAddress(words[0], "duty", words[2], unit="W")
    if len(words) == 2:
        return _own(words[0], words[1], piece, address)
    outlet, inlet = piece.port(words[1], inlet=False), piece.port(words[1], inlet=True)
    if outlet is None and inlet is None:
        ports = [p.name for p in piece.port_list() if not p.any_name]
        raise AddressError(
            f"'{address}': {words[0]} ({piece.kind}) has no port '{words[1]}'"
            f"{suggest(words[1], ports)}"
        )
    unit = _check_property(words, address, components)
    named_inlet = inlet is not None and any(
        p.name == words[1] and p.is_inlet for p in piece.port_list()
    )
    named_outlet = outlet is not None and any(
        p.name == words[1] and not p.is_inlet for p in piece.port_list()
    )
    where: Literal["outlet", "inlet"] = (
        "inlet" if (named_inlet and not named_outlet) or outlet is None else "outlet"
    )
    return ResultAddress(words[0], where, words[1], words[2], ".".join(words[3:]), unit)


def _words(address: str) -> list[str]:
    if len(address) > _LONGEST or not address.isprintable():
        raise AddressError(f"{shorten(address)} is no address, wanted words joined by dots")
    return address.split(".")


def _piece(words: list[str], address: str, equipment: Mapping[str, Equipment]) -> Equipment:
    piece = equipment.get(words[0])
    if piece is None and words[0] == "plant":
        raise AddressError(f"'{address}': wanted equipment, one of its ports or a store")
    if piece is None:
        raise AddressError(
            f"'{address}': there is no equipment '{words[0]}'{suggest(words[0], equipment)}"
        )
    return piece


def _own(name: str, result: str, piece: Equipment, address: str) -> ResultAddress:
    for full in piece.gives:
        if result in (full, short_name(full)):
            return ResultAddress(name, "own", full, unit=unit_of_result(full))
    known = _known_results(piece)
    listed = (
        f"; it has {', '.join(known)}"
        if known
        else "; a port's property has three words, as in stack.hydrogen.flow"
    )
    raise AddressError(
        f"'{address}': {name} ({piece.kind}) has no result '{result}'"
        f"{suggest(result, known)}{listed}"
    )


def _known_results(piece: Equipment) -> list[str]:
    """Results without their unit, or with it where two would have one name."""
    short = [short_name(full) for full in piece.gives]
    return [
        full if short.count(one) > 1 else one for full, one in zip(piece.gives, short, strict=True)
    ]


def _check_property(words: list[str], address: str, components: tuple[str, ...]) -> str:
    prop, rest = words[2], words[3:]
    if prop not in PROPERTY_UNITS:
        raise AddressError(
            f"'{address}': a port has no '{prop}'{suggest(prop, PROPERTY_UNITS)}; "
            f"it has {', '.join(PROPERTY_UNITS)}"
        )
    names = ".".join(rest).split("/") if rest else []
    for name in names:
        if name not in components:
            raise AddressError(
                f"'{address}': there is no component '{name}'{suggest(name, components)}"
            )
    wanted = 2 if prop == "ratio" else 1 if prop in _WITH_COMPONENT else None
    if wanted is not None and len(names) != wanted:
        example = "ratio.H2/CO2" if prop == "ratio" else f"{prop}.CO2"
        raise AddressError(f"'{address}': wanted {words[0]}.{words[1]}.{example}")
    if wanted is None and names and (prop != "flow" or len(names) > 1):
        raise AddressError(f"'{address}': '{prop}' takes nothing behind it")
    return PROPERTY_UNITS[prop]


def property_of(flow: Flow, prop: str, argument: str) -> float:
    """A property of what passes a port, in SI; raises AddressError if it has none such."""
    if isinstance(flow, Stream):
        return _of_stream(flow, prop, argument)
    if prop == "rate":
        return rate_of(flow)
    if prop == "temperature" and isinstance(flow, Heat):
        return flow.mean
    carried = "heat" if isinstance(flow, Heat) else "power or light"
    raise AddressError(f"this port carries {carried}: it has 'rate', not '{prop}'")


def _of_stream(stream: Stream, prop: str, argument: str) -> float:
    if prop == "flow":
        return float(stream.flow(argument) if argument else stream.total)
    if prop == "ratio":
        first, second = argument.split("/")
        below = float(stream.flow(second))
        return float(stream.flow(first)) / below if below > 0.0 else float("inf")
    if prop == "fraction":
        return float(stream.fraction(argument))
    if prop == "dry_fraction":
        return float(stream.dry_fraction(argument))
    if prop == "rate":
        raise AddressError("this port carries matter: it has 'flow' and 'mass_flow', not 'rate'")
    return float(getattr(stream, prop))


def of_outcome(outcome: Outcome, where: str, name: str) -> float:
    """A duty or an own result of equipment, in SI."""
    if where == "duty":
        return float(outcome.heat if name == "heat" else outcome.power)
    return float(outcome.results.get(name, 0.0))


@dataclass(frozen=True, slots=True)
class HeldResult:
    """A duty or an own result of equipment that a hold looks at."""

    where: str
    name: str

    def of(self, outcome: Outcome) -> float:
        """Its value, in SI."""
        return of_outcome(outcome, self.where, self.name)

    @property
    def label(self) -> str:
        """What the slopes of the equipment call it."""
        return f"{self.where}:{self.name}"

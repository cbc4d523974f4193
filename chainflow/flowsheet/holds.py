"""Holds as written: `{hold: result, at: value, by: setting, within: [low, high]}`.

A hold moves one number among the settings until one result has a value; here it is aimed, so that
only what exists and has the right unit is left for the solver.
"""

from __future__ import annotations

from collections.abc import Mapping as AnyMapping

from pydantic import ValidationError

from chainflow.basis.faults import Fault, Place
from chainflow.basis.names import shorten, suggest
from chainflow.basis.quantities import QuantityFault, parse
from chainflow.equipment.base import Equipment
from chainflow.flowsheet.addresses import (
    AddressError,
    ResultAddress,
    SettingAddress,
    parse_result,
    parse_setting,
)
from chainflow.flowsheet.messages import complaints
from chainflow.flowsheet.network import Hold
from chainflow.flowsheet.tree import Mapping, Node, Sequence, Text, place_at

_KEYS = ("hold", "at", "by", "within")
_FORM = "{hold: result, at: value, by: setting, within: [low, high]}"
_PRESSURES = ("pressure", "pressure_drop")


class HoldReader:
    """Reads the holds of one flowsheet; what is wrong goes into `faults`."""

    def __init__(
        self,
        pieces: AnyMapping[str, Equipment],
        broken: frozenset[str],
        components: tuple[str, ...],
        faults: list[Fault],
    ) -> None:
        self.pieces, self.broken = pieces, broken  # broken: equipment with faults of its own
        self.components, self.faults = components, faults

    def read(self, node: Node | None) -> tuple[Hold, ...]:
        """All holds of the list under `holds`."""
        if node is None or (isinstance(node, Text) and node.value is None):
            return ()
        if not isinstance(node, Sequence):
            self._fault("wrong-value", f"wanted a list of {_FORM}", node.place)
            return ()
        found = [self._hold(item) for item in node.items]
        holds = tuple(hold for hold in found if hold is not None)
        self._refuse_shared_settings(holds)
        return holds

    def _fault(self, code: str, text: str, place: Place | None) -> None:
        self.faults.append(Fault(code, f"holds: {text}").located(place))

    def _refuse_shared_settings(self, holds: tuple[Hold, ...]) -> None:
        seen: set[str] = set()
        for hold in holds:
            if hold.by in seen:
                text = f"two holds move '{hold.by}': each needs a setting of its own"
                self._fault("two-holds", text, hold.place)
            seen.add(hold.by)

    def _hold(self, item: Node) -> Hold | None:
        if not isinstance(item, Mapping):
            self._fault("bad-hold", f"wanted {_FORM}", item.place)
            return None
        for key, (place, _) in item.entries.items():
            if key not in _KEYS:
                text = f"there is no {shorten(key)}{suggest(key, _KEYS)} in a hold"
                self._fault("unknown-setting", f"{text}; it has {', '.join(_KEYS)}", place)
        for key in _KEYS:
            if key not in item.entries:
                self._fault("missing-setting", f"'{key}' is missing, wanted {_FORM}", item.place)
        return self._aimed(item) if set(item.entries) == set(_KEYS) else None

    def _aimed(self, item: Mapping) -> Hold | None:
        words = self._words(item)
        if words is None or {words[key].split(".")[0] for key in ("hold", "by")} & self.broken:
            return None
        result, setting = self._result(words["hold"], item), self._setting(words["by"], item)
        if result is None or setting is None:
            return None
        at = self._value("at", item.get("at"), result)
        ends = self._ends(item, setting)
        if at is None or ends is None:
            return None
        return Hold(
            text=words["hold"],
            at=at,
            unit=result.unit,
            by=words["by"],
            piece=setting.piece,
            path=setting.path,
            low=ends[0],
            high=ends[1],
            by_unit=setting.unit,
            place=item.place,
            difference=result.difference,
            by_difference=setting.difference,
        )

    def _words(self, item: Mapping) -> dict[str, str] | None:
        words = {}
        for key in ("hold", "at", "by"):
            node = item.get(key)
            if not isinstance(node, Text) or not node.value:
                self._fault("bad-hold", f"{key}: wanted a text, as in {_FORM}", item.place)
                return None
            words[key] = node.value
        return words

    def _result(self, address: str, item: Mapping) -> ResultAddress | None:
        try:
            return parse_result(address, self.pieces, self.components)
        except AddressError as problem:
            self._fault("unknown-address", str(problem), place_at(item, ("hold",)))
            return None

    def _setting(self, address: str, item: Mapping) -> SettingAddress | None:
        place = place_at(item, ("by",))
        try:
            setting = parse_setting(address, self.pieces)
        except AddressError as problem:
            self._fault("unknown-address", str(problem), place)
            return None
        if setting.path[0] in _PRESSURES:
            text = f"'{address}' is a pressure, and pressures are settled before anything is solved"
            self._fault("bad-hold", f"{text}: hold by another setting", place)
            return None
        return setting

    def _ends(self, item: Mapping, setting: SettingAddress) -> tuple[float, float] | None:
        within = item.get("within")
        if not isinstance(within, Sequence) or len(within.items) != 2:
            text = "within: wanted two values, as in [250 degC, 450 degC]"
            self._fault("bad-hold", text, within.place if within is not None else item.place)
            return None
        low, high = (self._value("within", node, setting) for node in within.items)
        if low is None or high is None:
            return None
        for end, node in ((low, within.items[0]), (high, within.items[1])):
            if trouble := self._trouble_at(end, setting):
                self._fault("bad-hold", f"within: at this end {trouble}", node.place)
                return None
        if not low < high:
            text = "within: the first value is not below the second: turn them round"
            self._fault("bad-hold", text, within.place)
            return None
        return low, high

    def _trouble_at(self, end: float, setting: SettingAddress) -> str:
        """What is wrong with the equipment whose setting is at an end of its range."""
        piece = self.pieces[setting.piece].with_setting(setting.path, end)
        given = {name: getattr(piece, name) for name in type(piece).model_fields}
        try:
            type(piece).model_validate(given)
        except ValidationError as problem:
            return next(complaints(problem, type(piece), setting.piece)).text
        return ""

    def _value(
        self, key: str, node: Node | None, of: ResultAddress | SettingAddress
    ) -> float | None:
        if not isinstance(node, Text) or node.value is None:
            self._fault("bad-hold", f"{key}: wanted a value", node.place if node else None)
            return None
        try:
            above = 0.0 if of.unit == "K" and not of.difference else None
            return parse(node.value, of.unit, gt=above, difference=of.difference)
        except QuantityFault as problem:
            self._fault("wrong-quantity", f"{key}: {problem}", node.place)
            return None

"""Lines as text, `water.draw -> feed -> stack.water`, and the ports they join.

A chain is cut into single lines; a port that is left out is the kind's main port.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from itertools import pairwise

from chainflow.basis.faults import Fault, Place
from chainflow.basis.names import NAME_PATTERN, name_trouble, shorten, suggest
from chainflow.equipment.base import Equipment
from chainflow.equipment.ports import Port

_END = re.compile(rf"({NAME_PATTERN})(?:\.({NAME_PATTERN}))?")
_ARROW = "->"
_EXAMPLE = "stack.hydrogen -> dry"


@dataclass(frozen=True, slots=True)
class Joint:
    """One line as it is written: names, ports that may be left out, and the place."""

    source: str
    outlet: str | None
    target: str
    inlet: str | None
    place: Place | None


@dataclass(frozen=True, slots=True)
class JoinedPorts:
    """A line whose ports are known."""

    source: str
    outlet: Port
    target: str
    inlet: Port
    place: Place | None

    @property
    def text(self) -> str:
        """The line with both ports written out."""
        return f"{self.source}.{self.outlet.name} -> {self.target}.{self.inlet.name}"


def cut_chain(text: str, place: Place | None, faults: list[Fault]) -> Iterator[Joint]:
    """Cut one entry under `lines` into its single lines."""
    ends = []
    for part in text.split(_ARROW):
        match = _END.fullmatch(part.strip())
        if match is None:
            faults.append(
                Fault("bad-line", f"lines: {_unreadable(part.strip(), text)}").located(place)
            )
            return
        ends.append((match[1], match[2]))
    if len(ends) < 2:
        say = f"lines: {shorten(text)} joins nothing: wanted 'from -> to', as in {_EXAMPLE}"
        faults.append(Fault("bad-line", say).located(place))
        return
    for number, ((source, outlet), (target, inlet)) in enumerate(pairwise(ends)):
        # a port named in the middle of a chain is where the chain enters
        yield Joint(source, outlet if number == 0 else None, target, inlet, place)


def _unreadable(part: str, text: str) -> str:
    wanted = f"wanted equipment or equipment.port, as in {_EXAMPLE}"
    if _ARROW not in text:
        return f"{shorten(text)} has no '{_ARROW}': wanted 'from -> to', as in {_EXAMPLE}"
    if not part:
        return f"an end is missing at an arrow of {shorten(text, 80)}: {wanted}"
    return f"cannot read {shorten(part)} in {shorten(text, 80)}: {wanted}"


def join(
    joint: Joint,
    equipment: Mapping[str, Equipment],
    broken: frozenset[str],
    faults: list[Fault],
) -> JoinedPorts | None:
    """Find the two ports of a line; faults say what is not there.

    Equipment in `broken` has faults of its own, so that its ports are not known.
    """
    outlet = inlet = None
    if joint.source not in broken:
        outlet = _find(joint.source, joint.outlet, False, equipment, joint.place, faults)
    if joint.target not in broken:
        inlet = _find(joint.target, joint.inlet, True, equipment, joint.place, faults)
    if outlet is None or inlet is None:
        return None
    return JoinedPorts(joint.source, outlet, joint.target, inlet, joint.place)


def _find(
    name: str,
    port: str | None,
    inlet: bool,
    equipment: Mapping[str, Equipment],
    place: Place | None,
    faults: list[Fault],
) -> Port | None:
    piece = equipment.get(name)
    if piece is None:
        say = f"lines: there is no equipment '{name}'{suggest(name, equipment)}"
        faults.append(Fault("unknown-equipment", say).located(place))
        return None
    found = piece.main_port(inlet=inlet) if port is None else piece.port(port, inlet=inlet)
    if found is not None:
        own = port is None or port in [p.name for p in piece.port_list()]
        trouble = "" if own else name_trouble(found.name)
        if trouble:
            faults.append(Fault("bad-name", f"lines: {name}: {trouble}").located(place))
        return found
    say = f"lines: '{name}' ({piece.kind}) {_not_there(piece, port, inlet)}"
    faults.append(Fault("unknown-port", say).located(place))
    return None


def _not_there(piece: Equipment, port: str | None, inlet: bool) -> str:
    """What is said of a port that a piece of equipment does not have."""
    side, other_side = ("inlet", "outlet") if inlet else ("outlet", "inlet")
    known = [p.name for p in piece.port_list() if p.is_inlet == inlet and not p.any_name]
    listed = ", ".join(known) or "none"
    if port is None:
        say = f"main {side}, name one: {listed}" if known else f"{side}, turn the line round"
        own = " or a name of your own" if piece.port("any", inlet=inlet) else ""
        return f"has no {say}{own}"
    other = piece.port(port, inlet=not inlet)
    named = port in [p.name for p in piece.port_list()]
    turned = f"; '{port}' is an {other_side}" if other and not other.any_name and named else ""
    return f"has no {side} '{port}'{suggest(port, known)}{turned}; its {side}s: {listed}"

"""Lines as text, `water.draw -> feed -> stack.water`, and the ports they join.

A chain is cut into single lines; a port that is left out is the kind's main port.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass

from chainflow.basis.faults import Fault, Place
from chainflow.basis.names import NAME_PATTERN, suggest
from chainflow.equipment.base import Equipment
from chainflow.equipment.ports import Port

_END = re.compile(rf"({NAME_PATTERN})(?:\.({NAME_PATTERN}))?")
_ARROW = "->"


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
        return f"{self.source}.{self.outlet.name} -> {self.target}.{self.inlet.name}"


def cut_chain(text: str, place: Place | None, faults: list[Fault]) -> Iterator[Joint]:
    """Cut one entry under `lines` into its single lines."""
    ends = []
    for part in text.split(_ARROW):
        match = _END.fullmatch(part.strip())
        if match is None:
            found = part.strip() or "nothing"
            say = f"lines: cannot read '{found}' in '{text}', wanted equipment or equipment.port, as in stack.hydrogen -> dry"
            faults.append(Fault("bad-line", say).located(place))
            return
        ends.append((match[1], match[2]))
    if len(ends) < 2:
        faults.append(
            Fault("bad-line", f"lines: '{text}' joins nothing, wanted 'from -> to'").located(place)
        )
        return
    for number, ((source, outlet), (target, inlet)) in enumerate(zip(ends, ends[1:], strict=False)):
        # a port named in the middle of a chain is where the chain enters
        yield Joint(source, outlet if number == 0 else None, target, inlet, place)


def join(
    joint: Joint, equipment: Mapping[str, Equipment], faults: list[Fault]
) -> JoinedPorts | None:
    """Find the two ports of a line; faults say what is not there."""
    outlet = _find(joint.source, joint.outlet, False, equipment, joint.place, faults)
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
    side = "inlet" if inlet else "outlet"
    if piece is None:
        say = f"lines: there is no equipment '{name}'{suggest(name, equipment)}"
        faults.append(Fault("unknown-equipment", say).located(place))
        return None
    found = piece.main_port(inlet=inlet) if port is None else piece.port(port, inlet=inlet)
    if found is not None:
        return found
    known = [p.name for p in piece.port_list() if p.is_inlet == inlet and not p.any_name]
    listed = ", ".join(known) or "none"
    if port is None:
        say = f"lines: '{name}' ({piece.kind}) has no main {side}, name one: {listed}"
        if piece.port("any", inlet=inlet) is not None:
            say += " or a name of your own"
    else:
        other = piece.port(port, inlet=not inlet)
        turned = (
            f"; '{port}' is an {'outlet' if inlet else 'inlet'}"
            if other is not None
            and not other.any_name
            and port in [p.name for p in piece.port_list()]
            else ""
        )
        say = f"lines: '{name}' ({piece.kind}) has no {side} '{port}'{suggest(port, known)}{turned}; it has {listed}"
    faults.append(Fault("unknown-port", say).located(place))
    return None

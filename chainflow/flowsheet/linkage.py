"""Does every port that needs a line have one, and does every piece take part?

A port that may stay without a line is no fault; where there is no steady state it may be why.
"""

from __future__ import annotations

from collections.abc import Callable, Container, Mapping, Sequence

from chainflow.basis.faults import Place
from chainflow.equipment.base import Equipment
from chainflow.equipment.ports import Port
from chainflow.flowsheet.lines import JoinedPorts
from chainflow.flowsheet.network import Flowsheet, Hold

LINE_FAULTS = ("bad-line", "unknown-port", "unknown-equipment")
Say = Callable[[str, str, Place | None], None]


class Linkage:
    """What the lines of one file leave unlinked.

    Parameters
    ----------
    joined : the lines that could be read.
    fault, remark : take a code, a sentence and its place.
    spot : the place of a piece's entry, or of one of its settings.
    """

    def __init__(
        self,
        pieces: Mapping[str, Equipment],
        joined: Sequence[JoinedPorts],
        fault: Say,
        remark: Say,
        spot: Callable[[str, tuple[str, ...]], Place | None],
    ) -> None:
        self.pieces, self.joined = pieces, joined
        self.fault, self.remark, self.spot = fault, remark, spot
        self.touched = {name for line in joined for name in (line.source, line.target)}

    def missing_lines(self) -> None:
        """A required inlet without a line is a fault, an outlet without one a remark."""
        ends = {(line.target, line.inlet.name) for line in self.joined}
        starts = {(line.source, line.outlet.name) for line in self.joined}
        for name, piece in self.pieces.items():
            if name not in self.touched:
                continue
            for port in piece.port_list():
                linked = (name, port.name) in (ends if port.is_inlet else starts)
                if not (port.optional or port.any_name or linked):
                    self._unlinked(name, port)

    def _unlinked(self, name: str, port: Port) -> None:
        if port.is_inlet:
            self.fault(
                "missing-line",
                f"{name}: no line arrives at '{name}.{port.name}' ({port.means}): "
                f"write '- ... -> {name}.{port.name}' under lines",
                self.spot(name, ()),
            )
        else:
            self.remark(
                "unlinked-outlet",
                f"{name}: '{name}.{port.name}' is not linked, what comes there leaves the plant",
                self.spot(name, ()),
            )

    def unmoved(self, holds: Sequence[Hold], used: Container[str]) -> None:
        """A hold that moves a setting of equipment that takes no part is a fault."""
        for hold in holds:
            if hold.piece in self.pieces and hold.piece not in used:
                text = f"{hold.text}: no line touches {hold.piece}, whose setting is to be moved"
                self.fault("bad-hold", f"{text}: link it, or take the hold out", hold.place)

    def idle(self, used: Container[str]) -> None:
        """Equipment that no line touches is remarked."""
        for name in self.pieces:
            if name not in used:
                text = f"{name}: no line touches it, it takes no part"
                self.remark("unused-equipment", text, self.spot(name, ()))


def open_outlets(flowsheet: Flowsheet) -> list[str]:
    """Return the outlets for matter that no line leaves, as ``wash.clean``."""
    return [
        f"{name}.{port.name}"
        for name, piece in flowsheet.equipment.items()
        for port in piece.port_list()
        if port.content == "material" and not port.is_inlet and not port.any_name
        if not flowsheet.line_from(name, port.name)
    ]

"""Which equipment has to know another's settings, and can it?

Equipment knows nothing of the graph. Where a piece works by the settings of another (a photovoltaic
field that hangs on a stack without a converter), it names it, and gets it here, as it stands in the
file. So a line has to run straight from the one to the other, and no hold may move the other.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence

from chainflow.basis.faults import Place
from chainflow.basis.names import shorten, suggest
from chainflow.equipment.base import Equipment
from chainflow.flowsheet.network import Hold, Line

Path = tuple[str, ...]


class Sight:
    """Lets pieces see those they name."""

    def __init__(
        self,
        pieces: Mapping[str, Equipment],
        lines: Sequence[Line],
        holds: Sequence[Hold],
        broken: frozenset[str],
        fault: Callable[[str, str, Place | None], None],
        spot: Callable[[str, Path], Place | None],
    ) -> None:
        self.pieces, self.lines, self.holds = pieces, lines, holds
        self.broken = broken  # pieces with faults of their own: nothing is said of them here
        self.fault, self.spot = fault, spot

    def seeing(self) -> dict[str, Equipment]:
        """Return all pieces, those that name others with them in sight; faults are noted."""
        return {name: self._seeing(name, piece) for name, piece in self.pieces.items()}

    def _seeing(self, name: str, piece: Equipment) -> Equipment:
        seen: dict[str, Equipment] = {}
        for path, other, outlet in piece.sees():
            if other in self.broken:
                return piece
            code, trouble = self._trouble(name, piece, other, outlet)
            if trouble:
                self.fault(code, f"{name}: {'.'.join(path)}: {trouble}", self.spot(name, path))
                return piece
            seen[other] = self.pieces[other]
        return piece.seeing(seen) if seen else piece

    def _trouble(self, name: str, piece: Equipment, other: str, outlet: str) -> tuple[str, str]:
        """Code and sentence of what is wrong; both empty if nothing is."""
        if other not in self.pieces:
            hint = suggest(other, self.pieces)
            return "unknown-equipment", f"there is no equipment {shorten(other)}{hint}"
        trouble = piece.trouble_seeing(other, self.pieces[other])
        if trouble:
            return "wrong-setting", trouble
        from_here = [li for li in self.lines if (li.source, li.outlet) == (name, outlet)]
        inlets = {li.inlet for li in from_here if li.target == other}
        there = [li for li in self.lines if li.target == other and li.inlet in inlets]
        if not (len(from_here) == len(there) == 1):
            return "bad-line", (
                f"wanted one line straight from '{name}.{outlet}' to '{other}' and no other there"
            )
        moved = next((hold for hold in self.holds if hold.piece == other), None)
        if moved is not None:
            return "bad-hold", f"a hold moves '{moved.by}', but {name} takes it as it stands"
        return "", ""

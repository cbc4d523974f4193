"""The flowsheet as data: equipment joined by lines, with the places where they were written.

Everything here is immutable and has been checked; nothing has been solved.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from chainflow.basis.faults import Fault, Place
from chainflow.equipment.base import Equipment
from chainflow.flowsheet.blocks import Blocks
from chainflow.thermo.components import Matter
from chainflow.thermo.exergy import Environment


@dataclass(frozen=True, slots=True)
class Line:
    """One line from an outlet to an inlet."""

    number: int  # order in the file, from 0
    source: str  # equipment
    outlet: str
    target: str
    inlet: str
    content: str  # "material", "power", "heat", "light"
    called: bool  # the receiver sets the amount
    place: Place | None = None

    @property
    def start(self) -> str:
        """The sending port as an address."""
        return f"{self.source}.{self.outlet}"

    @property
    def end(self) -> str:
        """The receiving port as an address."""
        return f"{self.target}.{self.inlet}"


@dataclass(frozen=True, slots=True)
class Hold:
    """Move one setting until one result has a value (SI)."""

    text: str  # the address that is held, as written
    at: float
    unit: str  # SI unit of the held result
    by: str  # the address of the setting, as written
    piece: str  # equipment whose setting moves
    path: tuple[str, ...]  # its path
    low: float
    high: float
    by_unit: str
    place: Place | None = None
    difference: bool = False  # the result is a temperature difference
    by_difference: bool = False  # the setting is one


@dataclass(frozen=True, slots=True)
class Flowsheet:
    """A checked flowsheet."""

    title: str
    basis: str  # "LHV" or "HHV": what is reported, never what is computed
    ambient: float  # [K]
    components: tuple[str, ...]
    equipment: Mapping[str, Equipment]  # in file order, pieces without any line left out
    lines: tuple[Line, ...]
    holds: tuple[Hold, ...] = ()
    knobs: Mapping[str, str] = field(default_factory=dict)  # values as text, overrides applied
    remarks: tuple[Fault, ...] = ()  # what is odd but no fault
    sha256: str = ""
    path: str = ""
    approach: float = 10.0  # of the heat account: least difference between heats that meet [K]
    blocks: Blocks = field(default_factory=Blocks)  # how the answer is accounted for
    knob_places: Mapping[str, tuple[str, ...]] = field(default_factory=dict)  # where each acts

    _at: Mapping[tuple[str, ...], tuple[Line, ...]] = field(init=False, repr=False, compare=False)

    def __post_init__(self) -> None:
        """Sort the lines once by the equipment and ports they touch."""
        at: dict[tuple[str, ...], list[Line]] = {}
        for line in self.lines:
            for key in (
                ("into", line.target),
                ("out of", line.source),
                ("into", line.target, line.inlet),
                ("out of", line.source, line.outlet),
            ):
                at.setdefault(key, []).append(line)
        object.__setattr__(self, "_at", {key: tuple(lines) for key, lines in at.items()})

    @property
    def environment(self) -> Environment:
        """The surroundings that exergy is counted against."""
        return self.blocks.environment

    @property
    def matter(self) -> Matter:
        """The matter of the flowsheet's components."""
        return Matter.of(self.components)

    def into(self, name: str) -> tuple[Line, ...]:
        """Lines that arrive at a piece of equipment, in file order."""
        return self._at.get(("into", name), ())

    def out_of(self, name: str) -> tuple[Line, ...]:
        """Lines that leave a piece of equipment, in file order."""
        return self._at.get(("out of", name), ())

    def line_from(self, name: str, outlet: str) -> tuple[Line, ...]:
        """Lines at one outlet."""
        return self._at.get(("out of", name, outlet), ())

    def line_into(self, name: str, inlet: str) -> tuple[Line, ...]:
        """Lines at one inlet."""
        return self._at.get(("into", name, inlet), ())

    def calls_through(self, name: str) -> bool:
        """Whether a call passes through this equipment (its main inlet then asks)."""
        piece = self.equipment[name]
        return piece.through and any(
            line.called and line.content == "material" for line in self.into(name)
        )


__all__ = ["Flowsheet", "Hold", "Line"]

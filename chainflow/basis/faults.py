"""How does chainflow say that something is wrong, and where?

A ``Fault`` is one clear sentence with a code and, where it came from a file, a place (line and
column, both counted from 1). Faults are collected and raised together. The exceptions map onto
the exit codes of the command line: faults in a file 1, wrong usage 2, no steady state 3, a file
that cannot be read or written 4. All of them survive pickling, so studies can run in processes.
"""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace
from typing import Any, ClassVar, NamedTuple


class Place(NamedTuple):
    """A spot in a file; line and column are counted from 1."""

    line: int
    column: int

    def __str__(self) -> str:
        return f"{self.line}:{self.column}"


@dataclass(frozen=True, slots=True)
class Fault:
    """One thing that is wrong: a stable code, one sentence, and the place if there is one."""

    code: str
    text: str
    line: int | None = None
    column: int | None = None

    def located(self, place: Place | None) -> "Fault":
        """Return the same fault at a place; a place that is already known is kept."""
        if place is None or self.line is not None:
            return self
        return replace(self, line=place.line, column=place.column)

    @property
    def place(self) -> Place | None:
        """The place, or None if the fault has none."""
        return None if self.line is None else Place(self.line, self.column or 1)

    def __str__(self) -> str:
        return self.text if self.place is None else f"{self.place}: {self.text}"


def _by_place(fault: Fault) -> tuple[int, int, int]:
    """Order by line and column; faults without a place come last."""
    place = fault.place
    return (1, 0, 0) if place is None else (0, place.line, place.column)


class ChainflowError(Exception):
    """Root of everything chainflow raises on purpose; ``exit_code`` is what the command returns."""

    exit_code: ClassVar[int] = 70


class FlowsheetFault(ChainflowError, ValueError):
    """The file is wrong (exit 1). Holds every fault that was found, sorted by place."""

    exit_code = 1

    def __init__(self, faults: Iterable[Fault] | Fault) -> None:
        found = (faults,) if isinstance(faults, Fault) else tuple(faults)
        if not found:
            raise ValueError("a FlowsheetFault needs at least one fault")
        self.faults: tuple[Fault, ...] = tuple(sorted(dict.fromkeys(found), key=_by_place))
        super().__init__(self.faults)

    def __str__(self) -> str:
        return "\n".join(str(fault) for fault in self.faults)


class UsageFault(ChainflowError, ValueError):
    """Wrong usage: a knob, address or option that does not exist (exit 2)."""

    exit_code = 2


class NotSolved(ChainflowError, RuntimeError):
    """No steady state, a shortage, or no convergence (exit 3).

    ``code`` is stable for programs, ``text`` one sentence for people, ``details`` whatever numbers
    and names belong to it (plain data, SI).
    """

    exit_code = 3

    def __init__(self, code: str, text: str, details: Mapping[str, Any] | None = None) -> None:
        self.code = code
        self.text = text
        self.details: dict[str, Any] = dict(details or {})
        super().__init__(code, text, self.details)

    def __str__(self) -> str:
        return self.text


class FileFault(ChainflowError, OSError):
    """A file cannot be read or written (exit 4)."""

    exit_code = 4

    def __init__(self, text: str) -> None:
        self.text = text
        super().__init__(text)

    def __str__(self) -> str:
        return self.text

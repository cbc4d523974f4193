"""A solved flowsheet: every stream, every outcome, and how far the balances close.

SI throughout.  A solution is data; the accounts, tables and drawings are functions of it.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from chainflow.basis.faults import Fault
from chainflow.equipment.base import Equipment, Outcome
from chainflow.equipment.ports import Feeds, Flow
from chainflow.flowsheet.network import Flowsheet


@dataclass(frozen=True, slots=True)
class SolvedStream:
    """What leaves one outlet port: an entry for each outlet that is linked or carries something."""

    tag: int  # in flow order, from 1
    source: str
    outlet: str
    targets: tuple[str, ...]  # "equipment.inlet" for each line; empty if it leaves the plant
    content: str
    flow: Flow

    @property
    def key(self) -> str:
        """Its name in tables: the sending port."""
        return f"{self.source}.{self.outlet}"


@dataclass(frozen=True, slots=True)
class Balance:
    """Largest relative error of a balance over all equipment and the plant, by throughput."""

    elements: float
    energy: float
    by_equipment: Mapping[str, tuple[float, float]] = field(default_factory=dict)


@dataclass(frozen=True, slots=True)
class HoldResult:
    """What a hold wanted and where it ended (SI)."""

    hold: str
    wanted: float
    reached: float
    unit: str
    by: str
    value: float
    by_unit: str
    difference: bool = False  # the result is a temperature difference
    by_difference: bool = False  # the setting is one


@dataclass(frozen=True, slots=True, eq=False, weakref_slot=True)
class Solution:
    """One steady state of a flowsheet; equal only to itself, so that accounts can be kept by it."""

    flowsheet: Flowsheet
    outcomes: Mapping[str, Outcome]  # by equipment, in file order
    feeds: Mapping[str, Feeds]  # flows as they arrive at each inlet, called lines at their amount
    streams: tuple[SolvedStream, ...]  # in tag order
    balance: Balance
    passes: int
    equipment_runs: int
    holds: tuple[HoldResult, ...] = ()
    remarks: tuple[Fault, ...] = ()
    error_estimate: float = 0.0  # the last Newton step, relative
    pieces: Mapping[str, Equipment] = field(default_factory=dict)  # with choices and held settings
    values: Mapping[str, Flow] = field(default_factory=dict)  # of the solver's variables

    def stream(self, key: str) -> SolvedStream:
        """The stream that leaves the port `key` ("stack.hydrogen"); KeyError if there is none."""
        for stream in self.streams:
            if stream.key == key:
                return stream
        raise KeyError(key)

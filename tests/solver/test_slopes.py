"""Every derivative of a pass agrees with differences on the same step."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import pytest

from chainflow.equipment.ports import Flow, Heat
from chainflow.flowsheet.building import read_flowsheet, read_text
from chainflow.flowsheet.network import Flowsheet
from chainflow.solver import nodes
from chainflow.solver.nodes import EquipmentStep, Step, Values
from chainflow.solver.solve import Prepared
from chainflow.solver.variables import HEAT_NUMBERS
from chainflow.thermo.streams import Stream
from tests.solver.small_plants import methane_loop

SHIPPED = sorted((Path(__file__).parents[2] / "flowsheets").glob("*.yaml"))
ROUND_OFF = 1e-6
AGREES = 1e-4  # relative, at one of the steps
NOTHING = 1e-10  # of what is written, for all of what is read: a slope of round-off
SOLVER_STEP = 1e-6  # of a stream's total, or of a number
STEPS = (1.0, 0.1, 0.01)  # of the solver's own, which may leave a branch close to saturation
BEYOND = 20.0  # steps into a phase that appears
TRACE = 1e-9  # of a stream: less is no phase


@dataclass
class Compared:
    """The closed forms of one step by one variable, around the values of a pass."""

    step: Step
    key: str
    values: Values

    def __post_init__(self) -> None:
        self.variable = self.step.variables[self.key]
        self.written = self.step.run(self.values)
        self.packed = {
            name: self.step.variables[name].pack(flow) for name, flow in self.written.items()
        }
        self.closed = self.step.closed_forms(self.values).get(self.key)
        outcome = self.step.outcome if isinstance(self.step, EquipmentStep) else None
        inside = () if outcome is None else outcome.outlets.values()
        self.shapes = [shape(flow) for flow in (*self.written.values(), *inside)]
        self.numbers = self.variable.pack(self.values[self.key])
        self.columns = self.variable.size
        value = self.values[self.key]
        if isinstance(value, Heat):
            self.columns = HEAT_NUMBERS * len(value.pieces)
        elif isinstance(value, Stream) and float(value.total) == 0.0:
            self.columns = 0  # differences take no step where nothing flows

    def moved(self, column: int, length: float) -> Values:
        """The values with one number moved."""
        numbers = self.numbers.copy()
        numbers[column] += length
        value = self.values[self.key]
        guess = float(value.temperature) if isinstance(value, Stream) else None
        return {**self.values, self.key: self.variable.unpack(numbers, self.step.matter, guess)}

    def ways(self, column: int) -> Iterator[dict[str, np.ndarray]]:
        """Differences by one number, forward, backward and central, at ever smaller steps."""
        whole = nodes.step_of(self.variable, self.numbers, column)
        is_flow = self.variable.form == "matter" and column < self.variable.size - 1
        for size in STEPS:
            lengths = [whole * size, -whole * size]
            if is_flow and self.numbers[column] < whole * size:
                lengths.pop()
            found = []
            for length in lengths:
                made = self.step.run(self.moved(column, length))
                found.append(
                    {
                        name: (self.step.variables[name].pack(made[name]) - before) / length
                        for name, before in self.packed.items()
                    }
                )
                yield found[-1]
            if len(found) == 2:
                yield {name: 0.5 * (found[0][name] + found[1][name]) for name in self.written}

    def errors(self, column: int) -> dict[str, float]:
        """The error of one column of each block, every row relative to its largest number."""
        assert self.closed is not None
        least = dict.fromkeys(self.written, np.inf)
        unit = nodes.step_of(self.variable, self.numbers, column) / SOLVER_STEP
        for way in self.ways(column):
            for name, by_difference in way.items():
                size = (len(by_difference), self.variable.size)
                block = np.abs(self.closed.get((name, self.key), np.zeros(size)))
                given = self.closed.get((name, self.key), np.zeros(size))[:, column]
                rows = np.maximum(block.max(axis=1), np.abs(by_difference))
                rows = rows + ROUND_OFF * rows.max(initial=0.0)  # species that hardly are there
                rows = rows + NOTHING * np.abs(self.packed[name]) / unit
                error = np.abs(given - by_difference) / np.where(rows > 0.0, rows, 1.0)
                least[name] = min(least[name], float(error.max(initial=0.0)))
            if max(least.values()) < AGREES:
                break
        return least

    def beyond(self, name: str, column: int) -> float:
        """The error of a column where the phase that it brings is there; infinite if none is.

        An absent component of which 1e-15 mol condense, or boil out of water, has a branch too
        narrow for any difference.
        """
        far = BEYOND * nodes.step_of(self.variable, self.numbers, column)
        there = Compared(self.step, self.key, self.moved(column, far))
        if there.shapes == self.shapes:
            return np.inf
        return 0.0 if there.closed is None else there.errors(column)[name]


def shape(flow: Flow) -> tuple[object, ...]:
    """Which phases a stream has, or how many parts heat comes in."""
    if isinstance(flow, Stream):
        parts = (flow.gas, flow.water, flow.liquid)
        return tuple(float(part.sum()) > TRACE * float(flow.total) for part in parts)
    return (len(flow.pieces),) if isinstance(flow, Heat) else ()


def compared(flowsheet: Flowsheet) -> list[tuple[str, str, str, float]]:
    """The worst column of each block."""
    prepared = Prepared(flowsheet)
    values = prepared.close().values
    found = []
    for step in (*prepared.order.before, *prepared.order.loop, *prepared.order.after):
        step.run(values)
        for key in step.closed_forms(values):
            here = Compared(step, key, values)
            worst = dict.fromkeys(here.written, 0.0)
            for column in range(here.columns):
                for name, error in here.errors(column).items():
                    if error >= AGREES:
                        error = here.beyond(name, column)
                    worst[name] = max(worst[name], error)
            step.run(values)
            found += [(step.name, name, key, error) for name, error in worst.items()]
    return found


@pytest.mark.parametrize("path", SHIPPED, ids=lambda p: p.stem)
def test_closed_forms_of_shipped_flowsheets_agree_with_differences(path: Path) -> None:
    worst = max(compared(read_flowsheet(path)), key=lambda row: row[-1])
    assert worst[-1] < AGREES, worst


def test_closed_forms_of_a_small_loop_agree_with_differences() -> None:
    rows = compared(read_text(methane_loop()))
    assert len(rows) > 20  # not vacuous
    worst = max(rows, key=lambda row: row[-1])
    assert worst[-1] < AGREES, worst

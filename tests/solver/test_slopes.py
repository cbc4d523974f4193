"""Every derivative of a pass agrees with differences on the same step."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from chainflow.equipment.ports import Heat
from chainflow.flowsheet.building import read_flowsheet, read_text
from chainflow.flowsheet.network import Flowsheet
from chainflow.solver import nodes
from chainflow.solver.nodes import Blocks, Step, Values
from chainflow.solver.solve import Prepared
from chainflow.solver.variables import Variable
from chainflow.thermo.streams import Stream
from tests.solver.small_plants import methane_loop

SHIPPED = sorted((Path(__file__).parents[2] / "flowsheets").glob("*.yaml"))
ROUND_OFF = 1e-6
AGREES = 1e-4  # with a step of 1e-6, relative


def differences(step: Step, key: str, values: Values, written: Values, sign: float) -> Blocks:
    """One-sided differences, forward or backward."""
    forward = nodes.step_of

    def step_of(variable: Variable, base: np.ndarray, column: int) -> float:
        size = forward(variable, base, column)
        is_flow = variable.form == "matter" and column < variable.size - 1
        return size if is_flow and base[column] < size else sign * size

    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(nodes, "step_of", step_of)
        found = step.differences(key, values, written)
    step.run(values)
    return found


def column_errors(closed: np.ndarray, by_difference: np.ndarray) -> np.ndarray:
    """Error of each column, every row relative to its largest number."""
    rows = np.maximum(np.abs(by_difference), np.abs(closed)).max(axis=1, keepdims=True)
    size = rows + ROUND_OFF * rows.max(initial=0.0)  # species that hardly are there
    error: np.ndarray = np.abs(closed - by_difference) / np.where(size > 0.0, size, 1.0)
    return error.max(axis=0)


def compared(flowsheet: Flowsheet) -> list[tuple[str, str, str, float]]:
    """The worst column of each block; at a kink one side has to agree."""
    prepared = Prepared(flowsheet)
    values = prepared.close().values
    found = []
    for step in (*prepared.order.before, *prepared.order.loop, *prepared.order.after):
        written = step.run(values)
        for key, blocks in step.closed_forms(values).items():
            value = values[key]
            if isinstance(value, Stream) and float(value.total) == 0.0:
                continue  # differences take no step where nothing flows
            sides = [differences(step, key, values, written, sign) for sign in (1.0, -1.0)]
            for name, _ in sides[0]:
                closed = blocks.get((name, key), np.zeros_like(sides[0][name, key]))
                ways = [side[name, key] for side in sides]
                ways.append(0.5 * (ways[0] + ways[1]))  # central where there is no kink
                errors = np.min([column_errors(closed, way) for way in ways], axis=0)
                if isinstance(written[name], Heat):  # a trace that condenses makes new parts
                    parts = 4 * len(written[name].pieces)
                    errors = errors[~sides[0][name, key][parts:].any(axis=0)]
                found.append((step.name, name, key, float(errors.max(initial=0.0))))
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

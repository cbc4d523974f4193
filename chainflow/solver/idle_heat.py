"""Heat that no loop waits for is looked at once, after the loops are closed.

Finding how heat is spread over its temperatures takes more than finding how much it is.  Where a
line of heat leads to nothing that is iterated (a network that is not short, whose rest nobody
uses), a twin of the step writes it afterwards, and the step itself leaves the shape out.
"""

from __future__ import annotations

from dataclasses import replace

from chainflow.solver.nodes import EquipmentStep, Step
from chainflow.solver.order import information_graph, loops_of
from chainflow.solver.program import Program


def part_idle_heat(program: Program) -> None:
    """Give every step that is iterated a twin for the heat that is not."""
    if all(variable.form != "heat" for variable in program.variables.values()):
        return
    needed = _needed(program)
    steps: list[Step] = []
    for step in program.steps:
        idle = [
            key
            for key in step.writes
            if program.variables[key].form == "heat" and key not in needed
        ]
        if isinstance(step, EquipmentStep) and idle and set(step.writes) & needed:
            steps.append(_twin(step, idle))
            _leave_out(step, idle)
        steps.append(step)
    program.steps = steps


def _needed(program: Program) -> set[str]:
    """Variables in loops, results that are held, and all that these come from."""
    graph = information_graph(program)
    waiting = [key for members in loops_of(graph) for key in members]
    waiting += [result for _, _, result in program.holds]
    found = set(waiting)
    while waiting:
        before = [key for key in graph.predecessors(waiting.pop()) if key not in found]
        found.update(before)
        waiting += before
    return found


def _twin(step: EquipmentStep, idle: list[str]) -> EquipmentStep:
    return replace(
        step,
        outlets={port: key for port, key in step.outlets.items() if key in idle},
        drawn={port: key for port, key in step.drawn.items() if key in idle},
        results={},
        writes=tuple(idle),
        twin=step,
        _spots={},
    )


def _leave_out(step: EquipmentStep, idle: list[str]) -> None:
    assert step.site is not None
    step.outlets = {port: key for port, key in step.outlets.items() if key not in idle}
    step.drawn = {port: key for port, key in step.drawn.items() if key not in idle}
    step.writes = tuple(key for key in step.writes if key not in idle)
    if all(step.variables[key].form != "heat" for key in step.writes):
        step.site = replace(step.site, shaped=False)

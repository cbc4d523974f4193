"""Steady-state balances of sun-to-fuel chains: one flowsheet file in, one closed balance out.

    >>> import chainflow
    >>> answer = chainflow.solve("flowsheets/methane-store.yaml")
    >>> answer["reactor.product.fraction.CH4"]
    >>> answer.streams_table()

SI throughout. Nothing heavy is imported until it is needed.
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping, Sequence
    from pathlib import Path

    from chainflow.basis.faults import (
        ChainflowError,
        Fault,
        FileFault,
        FlowsheetFault,
        NotSolved,
        UsageFault,
    )
    from chainflow.equipment.base import Equipment
    from chainflow.flowsheet.network import Flowsheet
    from chainflow.report.answer import Answer
    from chainflow.studies.sensitivities import Sensitivities
    from chainflow.thermo.components import Matter
    from chainflow.thermo.streams import Stream

__version__ = "0.1.0"

_FROM = {
    "Answer": "chainflow.report.answer",
    "ChainflowError": "chainflow.basis.faults",
    "Equipment": "chainflow.equipment.base",
    "Fault": "chainflow.basis.faults",
    "FileFault": "chainflow.basis.faults",
    "Flowsheet": "chainflow.flowsheet.network",
    "FlowsheetFault": "chainflow.basis.faults",
    "Matter": "chainflow.thermo.components",
    "NotSolved": "chainflow.basis.faults",
    "Sensitivities": "chainflow.studies.sensitivities",
    "Stream": "chainflow.thermo.streams",
    "UsageFault": "chainflow.basis.faults",
}

__all__ = [
    "Answer",
    "ChainflowError",
    "Equipment",
    "Fault",
    "FileFault",
    "Flowsheet",
    "FlowsheetFault",
    "Matter",
    "NotSolved",
    "Sensitivities",
    "Stream",
    "UsageFault",
    "__version__",
    "read",
    "sensitivities",
    "solve",
]


def read(path: str | Path, set: Mapping[str, str] | None = None) -> Flowsheet:  # noqa: A002 - as --set
    """Return the checked flowsheet of a file.

    Parameters
    ----------
    path : a flowsheet file.
    set : values of knobs or settings that replace those in the file, as text with units:
        ``{"sun": "600 W/m2", "reactor.temperature": "300 degC"}``.

    Raises `FlowsheetFault` with every fault found, `UsageFault` for a wrong name in `set`, and
    `FileFault` if the file cannot be read.
    """
    from chainflow.flowsheet.building import read_flowsheet

    return read_flowsheet(path, dict(set or {}))


def solve(flowsheet: Flowsheet | str | Path, set: Mapping[str, str] | None = None) -> Answer:  # noqa: A002 - as --set
    """Return the steady state of a flowsheet, or of a flowsheet file.

    `set` is taken with a file only; see `read`. Raises `NotSolved` if there is no steady state.
    """
    from chainflow.flowsheet.network import Flowsheet
    from chainflow.report.answer import Answer
    from chainflow.solver.solve import solve_flowsheet

    if isinstance(flowsheet, Flowsheet):
        if set:
            from chainflow.basis.faults import UsageFault

            raise UsageFault("'set' changes what is read from a file: give it to read() instead")
        return Answer(solve_flowsheet(flowsheet))
    return Answer(solve_flowsheet(read(flowsheet, set)))


def sensitivities(
    answer: Answer, of: str | Sequence[str], by: Iterable[str] | None = None
) -> Sensitivities:
    """Return how results of a solved flowsheet move with its settings and knobs, holds kept.

    Parameters
    ----------
    answer : what `solve` returned; nothing is solved again.
    of : address or addresses of results, ``"plant.efficiency.overall.LHV"``.
    by : names of knobs and addresses of settings, ``["field", "press.efficiency"]``; all of them
        if left out.

    ``.table()`` makes a pandas table; ``["plant.efficiency.overall.LHV", "field"]`` reads one.
    """
    from chainflow.studies.sensitivities import sensitivities as found

    return found(answer.solution, of, by)


def __getattr__(name: str) -> Any:
    """Import the public classes when they are first used."""
    if name not in _FROM:
        raise AttributeError(f"module 'chainflow' has no attribute {name!r}")
    return getattr(import_module(_FROM[name]), name)


def __dir__() -> list[str]:
    return sorted(__all__)

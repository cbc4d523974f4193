"""The answer as plain data for programs: the JSON document.

SI throughout; names end in their unit; `None` (null) stands for what has no value, never NaN.
`document` is for a solved flowsheet, `faults_document` for a file that is wrong, and
`problem_document` for a flowsheet that has no answer.
"""

from __future__ import annotations

import hashlib
import json
import math
from collections.abc import Iterable, Mapping
from pathlib import Path
from typing import TYPE_CHECKING, Any

from chainflow.accounts.exergy import exergy_destroyed
from chainflow.accounts.hazards import CLOSING_SENTENCE, Remark, cautions, idealisations
from chainflow.accounts.plant import plant_account
from chainflow.accounts.worth import of_material
from chainflow.basis.faults import Fault, NotSolved
from chainflow.equipment.base import Outcome
from chainflow.equipment.heat_needs import Duty
from chainflow.equipment.ports import Heat, Light
from chainflow.flowsheet.network import Flowsheet
from chainflow.solver.solution import HoldResult, Solution, SolvedStream
from chainflow.thermo.exergy import STANDARD_ENVIRONMENT, Environment
from chainflow.thermo.streams import Stream

if TYPE_CHECKING:
    from chainflow.studies.why import Why

FORMAT = 1
Document = dict[str, Any]


def document(solution: Solution, reasons: Why | None = None) -> Document:
    """Return everything about a solution as plain data, with the reasons if there are any."""
    destroyed = exergy_destroyed(solution)
    found = _head(_sheet(solution.flowsheet)) | {
        "solved": True,
        "passes": solution.passes,
        "equipment_runs": solution.equipment_runs,
        "error_estimate": solution.error_estimate,
        "balance": {"elements": solution.balance.elements, "energy": solution.balance.energy},
        "problem": None,
        "faults": [],
        "streams": {
            s.key: stream_entry(s, solution.flowsheet.environment) for s in solution.streams
        },
        "equipment": {
            name: _equipment_entry(
                solution.flowsheet.equipment[name].kind, outcome, destroyed[name]
            )
            for name, outcome in solution.outcomes.items()
        },
        "holds": [_hold_entry(hold) for hold in solution.holds],
        "plant": plant_account(solution).as_data(),
        "idealisations": [_remark_entry(remark) for remark in idealisations(solution)],
        "cautions": [_remark_entry(remark) for remark in cautions(solution)],
        "remarks": [fault_entry(fault) for fault in solution.remarks],
        "sources": sources(solution.flowsheet),
        "notice": CLOSING_SENTENCE,
    }
    if reasons is not None:
        found["why"] = reasons.as_data()
    return clean(found)


def faults_document(path: Path | str, faults: Iterable[Fault]) -> Document:
    """Return the document of a file that is wrong."""
    return clean(
        _head(_unread(path))
        | {"solved": False, "problem": None, "faults": [fault_entry(fault) for fault in faults]}
    )


def problem_document(path: Path | str, problem: Exception, flowsheet: Flowsheet | None) -> Document:
    """Return the document of a flowsheet that has no answer."""
    entry: Document = {"code": "outside-the-data", "text": str(problem), "details": {}}
    if isinstance(problem, NotSolved):
        entry |= {"code": problem.code, "details": problem.details}
    sheet = _unread(path) if flowsheet is None else _sheet(flowsheet)
    return clean(_head(sheet) | {"solved": False, "problem": entry, "faults": []})


def to_json(found: Document) -> str:
    """Return the text of a document, one line at the end; NaN cannot get in."""
    return json.dumps(found, indent=1, allow_nan=False) + "\n"


def _head(sheet: Document) -> Document:
    from chainflow import __version__

    return {"format": FORMAT, "version": __version__, "flowsheet": sheet}


def _sheet(flowsheet: Flowsheet) -> Document:
    return {
        "title": flowsheet.title,
        "basis": flowsheet.basis,
        "sha256": flowsheet.sha256,
        "knobs": dict(flowsheet.knobs),
    }


def _unread(path: Path | str) -> Document:
    """Return what is known of a file that could not be understood."""
    return {"title": None, "basis": None, "sha256": _digest(Path(path))}


def _digest(path: Path) -> str | None:
    """Return the SHA-256 of a regular file; a pipe cannot be read twice."""
    try:
        return hashlib.sha256(path.read_bytes()).hexdigest() if path.is_file() else None
    except OSError:
        return None


def stream_entry(stream: SolvedStream, environment: Environment = STANDARD_ENVIRONMENT) -> Document:
    """Return one stream: where it goes and what it is."""
    targets = stream.targets
    to = None if not targets else targets[0] if len(targets) == 1 else list(targets)
    entry = {"tag": stream.tag, "to": to, "content": stream.content}
    flow = stream.flow
    if isinstance(flow, Stream):
        return entry | _material_entry(flow, environment)
    if isinstance(flow, Heat):
        return entry | {"rate_W": flow.rate, "from_K": flow.start, "to_K": flow.end}
    if isinstance(flow, Light):
        return entry | _light_entry(flow)
    return entry | {"rate_W": flow}


def _light_entry(light: Light) -> Document:
    names = ("rate_W", "irradiance_W_m2", "direct", "air_K", "wind_m_s")
    return dict(zip(names, light.numbers, strict=True))


def _material_entry(stream: Stream, environment: Environment) -> Document:
    worth = of_material(stream, environment)
    return {
        "temperature_K": stream.temperature,
        "pressure_Pa": stream.pressure,
        "flow_mol_s": dict(zip(stream.matter.components, stream.flows.tolist(), strict=True)),
        "total_mol_s": stream.total,
        "mass_kg_s": stream.mass_flow,
        "phases_mol_s": stream.phase_totals,
        "enthalpy_W": stream.enthalpy,
        "lhv_W": worth.lhv,
        "hhv_W": worth.hhv,
        "exergy_W": worth.exergy,
    }


def _equipment_entry(kind: str, outcome: Outcome, destroyed: float) -> Document:
    return {
        "kind": kind,
        "heat_W": outcome.heat,
        "power_W": outcome.power,
        "exergy_destroyed_W": destroyed,
        "duties": [_duty_entry(duty) for duty in outcome.duties],
        "results": dict(outcome.results),
    }


def _duty_entry(duty: Duty) -> Document:
    return {
        "purpose": duty.purpose,
        "heat_W": duty.heat,
        "from_K": duty.start,
        "to_K": duty.end,
        "met_by": duty.met_by,
    }


def _hold_entry(hold: HoldResult) -> Document:
    return {
        "hold": hold.hold,
        "wanted": hold.wanted,
        "reached": hold.reached,
        "hold_unit": hold.unit,
        "by": hold.by,
        "value": hold.value,
        "unit": hold.by_unit,
    }


def _remark_entry(remark: Remark) -> Document:
    entry: Document = {"code": remark.code, "equipment": remark.equipment, "text": remark.text}
    return entry if remark.minimum_work is None else entry | {"minimum_work_W": remark.minimum_work}


def fault_entry(fault: Fault) -> Document:
    """Return one fault or remark as data."""
    return {"code": fault.code, "line": fault.line, "column": fault.column, "text": fault.text}


def sources(flowsheet: Flowsheet) -> list[str]:
    """Return what the kinds in use are taken from, each source once, in file order."""
    named = (source for piece in flowsheet.equipment.values() for source in piece.sources)
    return list(dict.fromkeys(named))


def clean(value: Any) -> Any:
    """Return plain data: numpy numbers as numbers, NaN and infinity as None, no negative zero."""
    if isinstance(value, Mapping):
        return {str(key): clean(one) for key, one in value.items()}
    if isinstance(value, list | tuple | set | frozenset):
        return [clean(one) for one in value]
    if value is None or isinstance(value, str | bool | int):
        return value
    if hasattr(value, "tolist"):
        return clean(value.tolist())
    if isinstance(value, float):
        return value + 0.0 if math.isfinite(value) else None
    return str(value)

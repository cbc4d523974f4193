"""The files that a command writes: refused before any work is done, or written whole."""

from __future__ import annotations

import sys
from pathlib import Path
from typing import TYPE_CHECKING

from chainflow.basis.faults import ChainflowError, FlowsheetFault, UsageFault
from chainflow.report.writing import check_directory, check_writable, write_all, write_whole

if TYPE_CHECKING:
    from chainflow.flowsheet.network import Flowsheet
    from chainflow.solver.solution import Solution
    from chainflow.studies.why import Why

STDOUT = "-"


def check_outputs(file: Path, json: str | None, csv: Path | None) -> None:
    """Refuse what cannot be written before any work is done."""
    if json is not None and json != STDOUT:
        if Path(json).resolve() == file.resolve():
            raise UsageFault(f"--json {json} is the flowsheet itself: name another file")
        check_writable(Path(json))
    if csv is not None:
        check_directory(csv)


def write_answer(
    solution: Solution, json: str | None, csv: Path | None, reasons: Why | None = None
) -> None:
    """Write the files that are asked for; all texts are made before the first is written."""
    text = None
    if json is not None:
        from chainflow.report.document import document, to_json

        text = to_json(document(solution, reasons))
    if csv is not None:
        from chainflow.report.csv_files import csv_texts

        write_all(csv, csv_texts(solution))
    if json is not None and text is not None:
        write_json(text, json)


def write_json(text: str, json: str) -> None:
    """Write a document to a path, or to stdout for '-'; raises `FileFault`."""
    if json == STDOUT:
        sys.stdout.write(text)
        return
    write_whole(Path(json), text)


def write_failure(
    file: Path, problem: ChainflowError, flowsheet: Flowsheet | None, json: str
) -> None:
    """Write what is wrong with a file, or why it has no steady state, as a document."""
    from chainflow.report.document import faults_document, problem_document, to_json

    if isinstance(problem, FlowsheetFault):
        found = faults_document(file, problem.faults)
    else:
        found = problem_document(file, problem, flowsheet)
    write_json(to_json(found), json)

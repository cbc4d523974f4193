"""A solved flowsheet as Python users see it: addresses, tables, the document and the printed text.

SI throughout. An `Answer` wraps the solver's `Solution`; everything else is worked out when asked.
"""

from __future__ import annotations

import io
from functools import cached_property
from pathlib import Path
from typing import TYPE_CHECKING, Any

from chainflow.accounts.plant import PlantAccount, plant_account, plant_value
from chainflow.flowsheet.network import Flowsheet
from chainflow.report.document import document, to_json
from chainflow.solver.solution import Solution

if TYPE_CHECKING:
    import pandas as pd

PLANT = "plant."


class Answer:
    """One steady state of a flowsheet and all that is said about it."""

    def __init__(self, solution: Solution) -> None:
        self.solution = solution

    @property
    def flowsheet(self) -> Flowsheet:
        """The flowsheet that was solved."""
        return self.solution.flowsheet

    @cached_property
    def plant(self) -> PlantAccount:
        """The accounts of the whole plant: what is bought, sold and lost."""
        return plant_account(self.solution)

    def __getitem__(self, address: str) -> float:
        """Return the value at an address in SI, ``answer["reactor.product.fraction.CH4"]``.

        ``plant.`` addresses follow the document: ``answer["plant.efficiency.overall.LHV"]``.
        """
        if address.startswith(PLANT):
            return plant_value(self.plant.as_data(), address.removeprefix(PLANT))
        from chainflow.solver.lookup import value_at

        return value_at(self.solution, address)

    def streams_table(self) -> pd.DataFrame:
        """Return all streams as a pandas table; see `chainflow.report.tables`."""
        from chainflow.report.tables import streams_table

        return streams_table(self.solution)

    def equipment_table(self) -> pd.DataFrame:
        """Return all equipment as a pandas table."""
        from chainflow.report.tables import equipment_table

        return equipment_table(self.solution)

    def duties_table(self) -> pd.DataFrame:
        """Return all heat duties as a pandas table."""
        from chainflow.report.tables import duties_table

        return duties_table(self.solution)

    def document(self) -> dict[str, Any]:
        """Return everything as plain data, as the JSON document has it."""
        return document(self.solution)

    def text(self) -> str:
        """Return what the command line prints."""
        from chainflow.report.printed import print_answer

        out = io.StringIO()
        print_answer(self.solution, out)
        return out.getvalue()

    def write_json(self, path: Path | str) -> None:
        """Write the document to a file, whole or not at all."""
        from chainflow.report.writing import write_whole

        write_whole(Path(path), to_json(self.document()))

    def write_csv(self, directory: Path | str) -> None:
        """Write streams, equipment, duties and plant as CSV files into a directory."""
        from chainflow.report.csv_files import csv_texts
        from chainflow.report.writing import write_all

        write_all(Path(directory), csv_texts(self.solution))

    def __repr__(self) -> str:
        title = self.flowsheet.title or "untitled"
        return f"<Answer of {title!r}: {len(self.solution.streams)} streams>"

    __str__ = text

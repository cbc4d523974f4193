"""The answer as pandas tables, SI throughout; names of columns end in their unit.

pandas is imported only when a table is made.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from chainflow.accounts.exergy import exergy_destroyed
from chainflow.report.document import stream_entry
from chainflow.solver.solution import Solution

if TYPE_CHECKING:
    import pandas as pd


def streams_table(solution: Solution) -> pd.DataFrame:
    """Return one row for each stream, by ``name.port`` of the sender, in tag order.

    Columns as in the JSON document; the flow of each component is ``H2_mol_s`` and so on, of each
    phase ``gas_mol_s``. What a stream does not have is NaN.
    """
    import pandas as pd

    rows = {
        stream.key: _flat(stream_entry(stream, solution.flowsheet.environment))
        for stream in solution.streams
    }
    table = pd.DataFrame.from_dict(rows, orient="index")
    table.index.name = "stream"
    return table


def _flat(entry: dict[str, Any]) -> dict[str, Any]:
    row: dict[str, Any] = {}
    for key, value in entry.items():
        if key in ("flow_mol_s", "phases_mol_s"):
            row |= {f"{name}_mol_s": amount for name, amount in value.items()}
        else:
            row[key] = ", ".join(value) if isinstance(value, list) else value
    return row


def equipment_table(solution: Solution) -> pd.DataFrame:
    """Return one row for each piece of equipment: kind, heat, power, exergy destroyed, results."""
    import pandas as pd

    destroyed = exergy_destroyed(solution)
    rows = {
        name: {
            "kind": solution.flowsheet.equipment[name].kind,
            "heat_W": outcome.heat,
            "power_W": outcome.power,
            "exergy_destroyed_W": destroyed[name],
            **outcome.results,
        }
        for name, outcome in solution.outcomes.items()
    }
    table = pd.DataFrame.from_dict(rows, orient="index")
    table.index.name = "equipment"
    return table


def duties_table(solution: Solution) -> pd.DataFrame:
    """Return one row for each duty: equipment, purpose, heat, temperatures and how it is met."""
    import pandas as pd

    rows = [
        (name, duty.purpose, duty.heat, duty.start, duty.end, duty.met_by)
        for name, outcome in solution.outcomes.items()
        for duty in outcome.duties
    ]
    columns = ["equipment", "purpose", "heat_W", "from_K", "to_K", "met_by"]
    return pd.DataFrame(rows, columns=columns)

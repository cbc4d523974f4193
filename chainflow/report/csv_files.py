"""The answer as four CSV files for spreadsheets: streams, equipment, duties, plant.

SI throughout, full precision, one header line, `.` as decimal point, `,` between. An empty cell is
what has no value. From plant.csv alone the overall efficiency can be worked out again: it is the
sum of the rows `useful` over the sum of the rows `input`, on each basis.
"""

from __future__ import annotations

import csv
import io
from collections.abc import Iterable, Iterator, Mapping, Sequence
from typing import Any

from chainflow.accounts.costs import CostAccount
from chainflow.accounts.plant import PlantAccount, plant_account
from chainflow.accounts.worth import BASES, Worth, of_heat, of_light, of_material, of_power
from chainflow.equipment.ports import Heat
from chainflow.report.document import document
from chainflow.solver.solution import Solution

_STREAM_COLUMNS = (
    "temperature_K", "pressure_Pa", "total_mol_s", "mass_kg_s", "enthalpy_W", "lhv_W", "hhv_W",
    "exergy_W", "rate_W", "from_K", "to_K",
)  # fmt: skip
_PHASES = ("gas", "water", "liquid")
Row = Sequence[Any]


def csv_texts(solution: Solution) -> dict[str, str]:
    """Return the text of each file by its name."""
    found = document(solution)
    return {
        "streams.csv": _text(_stream_rows(found, solution.flowsheet.components)),
        "equipment.csv": _text(_equipment_rows(found)),
        "duties.csv": _text(_duty_rows(found)),
        "plant.csv": _text(_plant_rows(plant_account(solution))),
    }


def _text(rows: Iterable[Row]) -> str:
    out = io.StringIO()
    csv.writer(out, lineterminator="\n").writerows(rows)
    return out.getvalue()


def _stream_rows(found: Mapping[str, Any], components: Sequence[str]) -> Iterator[Row]:
    phases = [f"{phase}_mol_s" for phase in _PHASES]
    flows = [f"{name}_mol_s" for name in components]
    yield ["tag", "from", "to", "content", *_STREAM_COLUMNS, *phases, *flows]
    for key, stream in found["streams"].items():
        to = stream["to"]
        where = [
            stream["tag"],
            key,
            " ".join(to) if isinstance(to, list) else to,
            stream["content"],
        ]
        values = [stream.get(column) for column in _STREAM_COLUMNS]
        by_phase = [stream.get("phases_mol_s", {}).get(phase) for phase in _PHASES]
        yield [
            *where,
            *values,
            *by_phase,
            *(stream.get("flow_mol_s", {}).get(c) for c in components),
        ]


def _equipment_rows(found: Mapping[str, Any]) -> Iterator[Row]:
    yield ["equipment", "kind", "result", "value"]
    for name, entry in found["equipment"].items():
        totals = {key: entry[key] for key in ("heat_W", "power_W", "exergy_destroyed_W")}
        for result, value in (totals | entry["results"]).items():
            yield [name, entry["kind"], result, value]


def _duty_rows(found: Mapping[str, Any]) -> Iterator[Row]:
    yield ["equipment", "purpose", "heat_W", "from_K", "to_K", "met_by"]
    for name, entry in found["equipment"].items():
        for duty in entry["duties"]:
            yield [name, *duty.values()]


def _plant_rows(account: PlantAccount) -> Iterator[Row]:
    yield ["account", "item", "basis", "value", "unit"]
    for group, item, worth in _energies(account):
        for basis, value in worth.by_basis.items():
            yield [group, item, basis, value, "W"]
    yield ["bought", "cold", "", account.bought.cold_total, "W"]
    found = account.efficiency
    for basis in BASES:
        yield ["efficiency", "overall", basis, found.overall[basis], "1"]
        yield ["efficiency", "sunlight_to_fuel", basis, found.sunlight_to_fuel[basis], "1"]
    yield ["efficiency", "sunlight_share", "", found.sunlight_share, "1"]
    for rung in found.rungs:
        for basis, ratio in rung.ratio.items():
            yield ["rung", f"{rung.start} -> {rung.end}", basis, ratio, "1"]
    for name, share in account.returned.items():
        yield ["returned", name, "", share, "1"]
    for loss in account.losses.losses:
        yield ["loss", f"{loss.where} {loss.cause}", "exergy", loss.exergy, "W"]
    if account.costs is not None:
        yield from _cost_rows(account.costs)


def _cost_rows(costs: CostAccount) -> Iterator[Row]:
    """Yield levelised costs and what each piece costs in a year."""
    for product, values in costs.as_data()["levelised"].items():
        for per, value in values.items():
            yield ["cost", product, per.replace("_", " "), value, costs.currency]
    for name, piece in costs.pieces.items():
        yield ["cost", name, "a year", piece.yearly, costs.currency]


def _energies(account: PlantAccount) -> Iterator[tuple[str, str, Worth]]:
    """Yield all that goes in and all that is useful."""
    bought, sold = account.bought, account.sold
    air = bought.environment
    yield "input", "sunlight", of_light(account.sunlight, air)
    for name, power in bought.power.items():
        yield "input", f"power of {name}", of_power(power)
    for name, duty in bought.heat:
        heat = Heat(duty.heat, duty.start, duty.end, duty.mean)
        yield "input", f"heat of {name}, {duty.purpose}", of_heat(heat, air)
    for name, stream in bought.material.items():
        yield "input", f"material of {name}", of_material(stream, air)
    for name, power in sold.power:
        yield "useful", f"power to {name}", of_power(power)
    for name, heat in sold.heat:
        yield "useful", f"heat to {name}", of_heat(heat, air)
    for name, stream in sold.material:
        yield "useful", f"material to {name}", of_material(stream, air)

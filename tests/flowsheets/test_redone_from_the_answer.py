"""Balances and efficiency of the shipped flowsheets, redone from what the commands write.

Nothing of chainflow is used on the numbers: only the JSON document and the CSV files.
"""

import csv
import io
import json
import re

import pytest

from chainflow.report.csv_files import csv_texts
from chainflow.report.document import document, to_json
from tests.flowsheets.shipped import NAMES, as_data, solved, text_of

WAX = "C40H82"  # what the wax is counted as
NETS = {"switchboard", "heat-network"}  # power and heat pass through them, line by line
BORDER = {"sunlight", "supply", "product", "vent", "grid"}


def answer(name):
    return json.loads(to_json(document(solved(name))))


def receivers(stream):
    to = stream["to"] or []
    return [end.split(".")[0] for end in ([to] if isinstance(to, str) else to)]


def content(stream, kind):
    """Energy [W] that a stream brings into a balance.

    Power and heat are in power_W and heat_W, but for what only hands them on: there the lines tell,
    and power_W is what a heat network turns into heat.
    """
    if kind in NETS:
        return 0.0 if kind == "heat-network" and stream["content"] == "power" else stream["rate_W"]
    if stream["content"] == "material":
        return stream["enthalpy_W"]
    return stream["rate_W"] if stream["content"] == "light" else 0.0


def atoms(stream):
    found = dict.fromkeys("CHNO", 0.0)
    for species, flow in stream.get("flow_mol_s", {}).items():
        formula = WAX if species == "wax" else species
        for element, count in re.findall(r"(Ar|[CHNO])(\d*)", formula):
            found[element] = found.get(element, 0.0) + flow * int(count or 1)
    return found


@pytest.mark.parametrize("name", NAMES)
def test_energy_of_every_piece_of_equipment(name):
    found = answer(name)
    for piece, entry in found["equipment"].items():
        if entry["kind"] in BORDER:
            continue
        kind, streams = entry["kind"], found["streams"]
        entering = [content(s, kind) for s in streams.values() if piece in receivers(s)]
        leaving = [content(s, kind) for key, s in streams.items() if key.split(".")[0] == piece]
        other = [entry["heat_W"], entry["power_W"], entry["results"].get("top_up_enthalpy_W", 0.0)]
        size = sum(map(abs, [*entering, *leaving, *other]))
        assert abs(sum(entering) + sum(other) - sum(leaving)) <= 1e-9 * size, piece
        duties = sum(d["heat_W"] for d in entry["duties"] if d["met_by"] != "power")
        assert duties == pytest.approx(entry["heat_W"], rel=1e-9, abs=1e-6), piece


@pytest.mark.parametrize("name", NAMES)
def test_energy_of_the_plant(name):
    """What comes in and heat from outside, less what leaves and heat to the surroundings."""
    found = answer(name)
    kinds = {piece: entry["kind"] for piece, entry in found["equipment"].items()}
    parts = []
    for key, stream in found["streams"].items():
        value = stream["enthalpy_W"] if stream["content"] == "material" else stream["rate_W"]
        source = kinds[key.split(".")[0]]
        if source in ("supply", "sunlight", "grid"):
            parts.append(value)
        if not stream["to"] or {kinds[piece] for piece in receivers(stream)} & BORDER:
            parts.append(-value)
    for entry in found["equipment"].values():
        parts.append(entry["results"].get("top_up_enthalpy_W", 0.0))
        parts += [d["heat_W"] for d in entry["duties"] if d["met_by"] in ("ambient", "bought")]
    assert abs(sum(parts)) <= 1e-9 * sum(map(abs, parts))


@pytest.mark.parametrize("name", NAMES)
def test_elements_of_the_plant(name):
    """Atoms bought, also by stores that make up what is missing, are atoms that leave."""
    found = answer(name)
    kinds = {piece: entry["kind"] for piece, entry in found["equipment"].items()}
    balance = {}
    for key, stream in found["streams"].items():
        sign = kinds[key.split(".")[0]] == "supply"
        leaves = not stream["to"] or bool({kinds[piece] for piece in receivers(stream)} & BORDER)
        for element, amount in atoms(stream).items():
            balance.setdefault(element, []).append((sign - leaves) * amount)
    for piece, settings in as_data(text_of(name))["equipment"].items():
        if settings["kind"] == "store" and f"-> {piece}.make_up" not in text_of(name):
            made_up = found["equipment"][piece]["results"]["top_up_mol_s"]
            for element, amount in atoms({"flow_mol_s": settings["contents"]}).items():
                balance.setdefault(element, []).append(amount * made_up)
    for element, parts in balance.items():
        assert abs(sum(parts)) <= 1e-9 * max(sum(map(abs, parts)), 1.0), element


def csv_rows(name, file):
    return list(csv.DictReader(io.StringIO(csv_texts(solved(name))[file])))


@pytest.mark.parametrize("basis", ["LHV", "HHV", "exergy"])
@pytest.mark.parametrize("name", NAMES)
def test_overall_efficiency_from_the_csv_alone(name, basis):
    rows = [row for row in csv_rows(name, "plant.csv") if row["basis"] == basis]
    useful = sum(float(row["value"]) for row in rows if row["account"] == "useful")
    entering = sum(float(row["value"]) for row in rows if row["account"] == "input")
    assert useful / entering == pytest.approx(
        answer(name)["plant"]["efficiency"]["overall"][basis], rel=1e-12
    )


@pytest.mark.parametrize("name", NAMES)
def test_overall_efficiency_from_the_stream_table_alone(name):
    """All that the village gets over the light and the fuel bought."""
    got = light = 0.0
    kinds = {piece: entry["kind"] for piece, entry in answer(name)["equipment"].items()}
    for row in csv_rows(name, "streams.csv"):
        if kinds[row["from"].split(".")[0]] == "sunlight":
            light += float(row["rate_W"])
        if kinds[row["from"].split(".")[0]] == "supply":
            light += float(row["lhv_W"])
        if row["to"] in ("village.inlet", "neighbour.inlet"):
            got += float(row["lhv_W"] or row["rate_W"])
    overall = answer(name)["plant"]["efficiency"]["overall"]["LHV"]
    assert got / light == pytest.approx(overall, rel=1e-9)


@pytest.mark.parametrize("name", NAMES)
def test_the_rungs_multiply_to_the_overall_efficiency(name):
    plant = answer(name)["plant"]
    for basis in ("LHV", "HHV", "exergy"):
        product = 1.0
        for rung in plant["rungs"]:
            product *= rung["ratio"][basis]
        assert product == pytest.approx(plant["efficiency"]["overall"][basis], rel=1e-12)

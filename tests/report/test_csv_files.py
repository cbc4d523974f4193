import csv
import io

import pytest

from chainflow.accounts.worth import BASES
from chainflow.report.csv_files import csv_texts
from chainflow.report.document import document
from tests.plants import BOUGHT, CYCLE, HYDROGEN, METHANE, solved


def rows(text, name):
    return list(csv.DictReader(io.StringIO(csv_texts(solved(text))[name])))


def test_four_files():
    assert set(csv_texts(solved(METHANE))) == {
        "streams.csv",
        "equipment.csv",
        "duties.csv",
        "plant.csv",
    }


@pytest.mark.parametrize("text", [HYDROGEN, METHANE, CYCLE, BOUGHT])
@pytest.mark.parametrize("basis", BASES)
def test_overall_efficiency_can_be_worked_out_from_the_plant_file_alone(text, basis):
    found = [row for row in rows(text, "plant.csv") if row["basis"] == basis]
    total = {
        account: sum(float(row["value"]) for row in found if row["account"] == account)
        for account in ("input", "useful")
    }
    (stated,) = (float(row["value"]) for row in found if row["item"] == "overall")
    assert total["useful"] / total["input"] == pytest.approx(stated, rel=1e-12)


def test_overall_efficiency_can_be_worked_out_from_the_streams_file():
    # all that goes in is sunlight, all that is useful goes to the town
    found = rows(METHANE, "streams.csv")
    light = sum(float(r["rate_W"]) for r in found if r["from"] == "sun.light")
    fuel = sum(float(r["lhv_W"]) for r in found if r["to"] == "town.inlet")
    overall = document(solved(METHANE))["plant"]["efficiency"]["overall"]["LHV"]
    assert fuel / light == pytest.approx(overall, rel=1e-12)


def test_streams_keep_full_precision():
    stream = solved(METHANE).stream("stack.hydrogen")
    (row,) = (r for r in rows(METHANE, "streams.csv") if r["from"] == "stack.hydrogen")
    assert float(row["H2_mol_s"]) == float(stream.flow.flow("H2"))
    assert float(row["enthalpy_W"]) == float(stream.flow.enthalpy)
    assert row["rate_W"] == ""


def test_results_and_duties():
    equipment = rows(METHANE, "equipment.csv")
    found = {(r["equipment"], r["result"]): r["value"] for r in equipment}
    water = solved(METHANE).outcomes["water"].results
    assert float(found["water", "top_up_mol_s"]) == water["top_up_mol_s"]
    heat = sum(float(r["heat_W"]) for r in rows(METHANE, "duties.csv") if r["equipment"] == "knock")
    assert heat == pytest.approx(float(found["knock", "heat_W"]), rel=1e-12)

import csv
import json
import math

import pytest

from chainflow.basis.faults import UsageFault
from chainflow.report.answer import Answer
from tests.plants import CYCLE, HYDROGEN, METHANE, solved


@pytest.fixture(scope="module")
def answer():
    return Answer(solved(METHANE))


def test_addresses_of_equipment(answer):
    product = answer.solution.stream("reactor.product").flow
    assert answer["reactor.product.fraction.CH4"] == float(product.fraction("CH4"))
    assert answer["knock.duty.heat"] == answer.solution.outcomes["knock"].heat


def test_addresses_of_the_plant(answer):
    data = answer.document()["plant"]
    assert answer["plant.efficiency.overall.LHV"] == data["efficiency"]["overall"]["LHV"]
    assert answer["plant.bought.power_W"] == 0.0
    bought = data["bought"]["material"]["bought.CO2"]["flow_mol_s"]
    assert answer["plant.bought.material.bought.CO2.flow_mol_s"] == bought
    assert answer["plant.returned.water"] == data["returned"]["water"]


def test_what_has_no_value_is_nan():
    assert math.isnan(Answer(solved(HYDROGEN))["plant.returned.CO2"])


def test_a_wrong_address_is_named_with_a_near_miss(answer):
    with pytest.raises(UsageFault, match="did you mean 'efficiency'"):
        answer["plant.eficiency.overall.LHV"]
    with pytest.raises(UsageFault, match="is no number, name one of: LHV, HHV, exergy"):
        answer["plant.efficiency.overall"]
    with pytest.raises(UsageFault, match="reactor"):
        answer["reacter.product.flow"]


def test_streams_table(answer):
    table = answer.streams_table()
    assert list(table["tag"]) == sorted(table["tag"])
    stream = answer.solution.stream("stack.hydrogen").flow
    assert table.loc["stack.hydrogen", "H2_mol_s"] == float(stream.flow("H2"))
    assert table.loc["sun.light", "rate_W"] == 5.1e6


def test_equipment_and_duties_tables(answer):
    table = answer.equipment_table()
    assert table.loc["reactor", "kind"] == "methanation-reactor"
    heat = answer.duties_table().groupby("equipment")["heat_W"].sum()
    assert heat["knock"] == pytest.approx(table.loc["knock", "heat_W"], rel=1e-12)


def test_text_is_what_is_printed(answer):
    assert answer.text() == str(answer)
    assert "overall efficiency" in answer.text()


def test_files(answer, tmp_path):
    answer.write_json(tmp_path / "a.json")
    assert json.loads((tmp_path / "a.json").read_text()) == answer.document()
    answer.write_csv(tmp_path / "tables")
    with (tmp_path / "tables" / "streams.csv").open() as file:
        assert len(list(csv.DictReader(file))) == len(answer.solution.streams)


def test_repr_is_short():
    assert len(repr(Answer(solved(CYCLE)))) < 100

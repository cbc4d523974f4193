import json
import math

import pytest

import chainflow
from chainflow.basis.faults import Fault, NotSolved
from chainflow.report.document import (
    document,
    faults_document,
    problem_document,
    sources,
    to_json,
)
from tests.plants import BOUGHT, CYCLE, ENGINE_INSIDE, HYDROGEN, METHANE, solved

PLANTS = {
    "hydrogen": HYDROGEN,
    "methane": METHANE,
    "engine inside": ENGINE_INSIDE,
    "cycle": CYCLE,
    "bought": BOUGHT,
}


def numbers(value):
    if isinstance(value, dict):
        value = list(value.values())
    if isinstance(value, list):
        return [number for one in value for number in numbers(one)]
    return [value] if isinstance(value, float) else []


@pytest.mark.parametrize("text", PLANTS.values(), ids=PLANTS)
def test_the_document_survives_json_and_holds_finite_numbers_only(text):
    found = document(solved(text))
    assert json.loads(to_json(found)) == found
    assert all(math.isfinite(number) for number in numbers(found))


def test_the_head():
    solution = solved(METHANE)
    found = document(solution)
    assert found["format"] == 1
    assert found["version"] == chainflow.__version__
    assert found["flowsheet"]["title"] == "Methane with a recycle (invented)"
    assert found["flowsheet"]["basis"] == "HHV"
    assert found["solved"] is True
    assert found["passes"] == solution.passes
    assert found["problem"] is None
    assert found["faults"] == []
    assert set(found["balance"]) == {"elements", "energy"}
    assert max(found["balance"].values()) < 1e-9


def test_a_material_stream():
    solution = solved(METHANE)
    stream = solution.stream("stack.hydrogen")
    found = document(solution)["streams"]["stack.hydrogen"]
    assert found["tag"] == stream.tag
    assert found["to"] == "dryh.inlet"
    assert found["content"] == "material"
    assert found["temperature_K"] == 333.15
    assert found["pressure_Pa"] == 1.2e6
    assert found["total_mol_s"] == pytest.approx(sum(found["flow_mol_s"].values()), rel=1e-14)
    assert sum(found["phases_mol_s"].values()) == pytest.approx(found["total_mol_s"], rel=1e-14)
    assert set(found["phases_mol_s"]) == {"gas", "water", "liquid"}
    # H2 2.016 g/mol and H2O 18.015 g/mol: IUPAC abridged standard atomic weights 2021
    mass = 2.016e-3 * found["flow_mol_s"]["H2"] + 18.015e-3 * found["flow_mol_s"]["H2O"]
    assert found["mass_kg_s"] == pytest.approx(mass, rel=1e-5)
    assert found["hhv_W"] > found["lhv_W"] > 0.0


def test_power_light_and_heat_streams():
    found = document(solved(CYCLE))["streams"]
    assert found["sun.light"] == {
        "tag": 1,
        "to": "field.light",
        "content": "light",
        "rate_W": 5.1e7,
        "irradiance_W_m2": 850.0,
        "direct": 0.9,
        "air_K": 298.15,
        "wind_m_s": 1.0,
    }
    assert found["field.power"]["rate_W"] == pytest.approx(1.02e7, rel=1e-14)
    heat = found["boiler.heat"]
    assert heat["from_K"] == pytest.approx(1673.15, rel=1e-9)
    assert heat["to_K"] == pytest.approx(423.15, rel=1e-9)


def test_what_leaves_the_plant_goes_to_null_and_what_has_no_flow_is_listed():
    found = document(solved(METHANE))["streams"]
    assert found["blower.condensate"]["to"] is None
    still = document(solved(HYDROGEN, sun="0 W/m2"))["streams"]["stack.hydrogen"]
    assert still["total_mol_s"] == 0.0
    assert still["lhv_W"] == 0.0


def test_a_port_with_several_lines_lists_them():
    text = """
equipment:
  net:  {kind: grid}
  gas:  {kind: supply, composition: {CH4: 1}, temperature: 25 degC, pressure: 2 bar, flow: 1 mol/s}
  warm: {kind: heater, temperature: 100 degC}
  press: {kind: compressor, pressure: 6 bar}
  town: {kind: product}
lines:
  - net.power -> press.power
  - net.power -> warm.power
  - gas -> warm -> press -> town
"""
    solution = solved(text)
    found = document(solution)["streams"]["net.power"]
    assert found["to"] == ["press.power", "warm.power"]
    asked = solution.outcomes["press"].power + solution.outcomes["warm"].power
    assert found["rate_W"] == pytest.approx(asked, rel=1e-12)


@pytest.mark.parametrize("text", PLANTS.values(), ids=PLANTS)
def test_energy_of_each_piece_closes_from_the_document_alone(text):
    found = document(solved(text))
    border = {"supply", "product", "vent", "sunlight", "grid"}
    for name, entry in found["equipment"].items():
        if entry["kind"] in border:
            continue
        streams = found["streams"].items()
        arriving = [s for _, s in streams if f"{name}." in str(s["to"])]
        leaving = [s for key, s in streams if key.startswith(f"{name}.")]
        net = entry["heat_W"] + entry["power_W"] + entry["results"].get("top_up_enthalpy_W", 0.0)
        net += sum(s.get("enthalpy_W", 0.0) for s in arriving)
        net -= sum(s.get("enthalpy_W", 0.0) for s in leaving)
        net += sum(s["rate_W"] for s in arriving if s["content"] == "light")
        size = sum(abs(s.get("enthalpy_W", s.get("rate_W"))) for s in [*arriving, *leaving])
        assert abs(net) <= 1e-9 * size, name


@pytest.mark.parametrize("text", PLANTS.values(), ids=PLANTS)
def test_duties_not_met_by_power_add_up_to_the_heat(text):
    for name, entry in document(solved(text))["equipment"].items():
        duties = [d["heat_W"] for d in entry["duties"] if d["met_by"] != "power"]
        size = sum(abs(d["heat_W"]) for d in entry["duties"])
        assert abs(sum(duties) - entry["heat_W"]) <= 1e-12 * size, name
        assert all(
            d["met_by"] in {"power", "heat", "own", "ambient", "bought"} for d in entry["duties"]
        )


def test_the_plant():
    plant = document(solved(METHANE))["plant"]
    assert plant["sunlight_W"] == 5.1e6
    assert plant["bought"]["power_W"] == 0.0
    assert set(plant["bought"]["material"]) == {"water.H2O", "bought.CO2", "bought.N2"}
    carbon = plant["bought"]["material"]["bought.CO2"]
    assert carbon["flow_mol_s"] > 0.0
    assert carbon["lhv_W"] == 0.0
    assert plant["sold"]["material"]["town.CH4"]["lhv_W"] > 0.0
    assert set(plant["efficiency"]) == {"sunlight_to_fuel", "overall"}
    assert set(plant["efficiency"]["overall"]) == {"LHV", "HHV", "exergy"}
    assert plant["sunlight_share"] == 1.0
    assert set(plant["returned"]) == {"water", "CO2"}
    assert [rung["from"] for rung in plant["rungs"]] == ["light", "power", "hydrogen", "fuel made"]


def test_nothing_goes_in_gives_null():
    plant = document(solved(HYDROGEN, sun="0 W/m2"))["plant"]
    assert plant["efficiency"]["overall"] == {"LHV": None, "HHV": None, "exergy": None}
    assert plant["returned"] == {"water": None, "CO2": None}
    assert plant["rungs"] == []


def test_idealisations_carry_their_work():
    found = document(solved(METHANE))
    (entry,) = (i for i in found["idealisations"] if i["code"] == "free-separation")
    results = found["equipment"]["sieve"]["results"]
    assert entry["equipment"] == "sieve"
    assert entry["minimum_work_W"] == results["minimum_work_W"]


def test_a_hold():
    text = """
components: [H2, O2, H2O, CO, CO2, CH4]
equipment:
  gas:   {kind: supply, composition: {H2: 80 %, CO2: rest}, temperature: 25 degC,
           pressure: 10 bar, flow: 1 mol/s}
  react: {kind: methanation-reactor, temperature: 400 degC}
  town:  {kind: product}
lines:
  - gas -> react -> town
holds:
  - {hold: react.product.fraction.CH4, at: 0.25, by: react.temperature, within: [300 degC,
           700 degC]}
"""
    (hold,) = document(solved(text))["holds"]
    assert hold["hold"] == "react.product.fraction.CH4"
    assert hold["wanted"] == 0.25
    assert hold["reached"] == pytest.approx(0.25, rel=1e-8)
    assert hold["by"] == "react.temperature"
    assert 573.15 < hold["value"] < 973.15
    assert hold["unit"] == "K"


def test_sources_are_listed_once():
    found = sources(solved(CYCLE).flowsheet)
    assert found
    assert len(found) == len(set(found))


def test_a_wrong_file(tmp_path):
    path = tmp_path / "wrong.yaml"
    path.write_text("title: x\n")
    found = faults_document(path, [Fault("code", "sentence", 3, 7), Fault("other", "no place")])
    assert found["solved"] is False
    assert found["problem"] is None
    assert found["faults"] == [
        {"code": "code", "line": 3, "column": 7, "text": "sentence"},
        {"code": "other", "line": None, "column": None, "text": "no place"},
    ]
    # SHA-256 of the bytes, worked out with sha256sum of GNU coreutils
    assert found["flowsheet"]["sha256"] == (
        "152f6f6e12c83825d541fc650946a2d479475e3956a864c5df266652fc7a82d7"
    )


def test_no_steady_state(tmp_path):
    flowsheet = solved(HYDROGEN).flowsheet
    problem = NotSolved("short", "3 kW are missing", {"missing_W": 3e3, "nan": float("nan")})
    found = problem_document(tmp_path / "x.yaml", problem, flowsheet)
    assert found["solved"] is False
    assert found["faults"] == []
    assert found["problem"] == {
        "code": "short",
        "text": "3 kW are missing",
        "details": {"missing_W": 3e3, "nan": None},
    }
    assert found["flowsheet"]["title"] == flowsheet.title


def test_titles_with_any_text_are_valid_json():
    title = 'back\\slash "quote" \x07 \u202e tab\t umlaut \u00e4'
    assert json.loads(to_json({"title": title, "lone": "\ud800"}))["title"] == title

"""Where the exergy goes: the sum closes, and the parts are what a hand calculation gives."""

import pytest

from chainflow.accounts.exergy import exergy_destroyed
from chainflow.accounts.losses import loss_map
from chainflow.accounts.plant import plant_account, plant_value
from chainflow.thermo.exergy import Environment
from tests.flowsheets.shipped import FOLDER, solved_text
from tests.plants import BOUGHT, CYCLE, ENGINE_INSIDE, HYDROGEN, METHANE, solved

PLANTS = {
    "hydrogen": HYDROGEN,
    "methane": METHANE,
    "engine inside": ENGINE_INSIDE,
    "cycle": CYCLE,
    "bought": BOUGHT,
}
SHIPPED = {path.stem: path.read_text(encoding="utf-8") for path in sorted(FOLDER.glob("*.yaml"))}
HILLS = "{temperature: 5 degC, pressure: 0.85 bar, carbon_dioxide: 430 ppm, humidity: 80 %}"
DESERT = "{temperature: 42 degC, humidity: 10 %}"
CLOSURE = 1e-9


def elsewhere(text, surroundings):
    return f"{text}\nenvironment: {surroundings}\n"


@pytest.mark.parametrize("text", PLANTS.values(), ids=PLANTS)
@pytest.mark.parametrize("surroundings", ["{}", HILLS, DESERT])
def test_the_sum_closes(text, surroundings):
    found = loss_map(solved(elsewhere(text, surroundings)))
    assert found.closure < CLOSURE
    assert found.entering_total > 0.0


@pytest.mark.parametrize("text", SHIPPED.values(), ids=SHIPPED)
def test_the_sum_closes_for_every_shipped_flowsheet(text):
    found = loss_map(solved_text(text))
    assert found.closure < CLOSURE
    # nothing shipped makes exergy from nothing; 1e-6 is how far two data sets of one gas differ
    assert min(loss.exergy for loss in found.losses) > -1e-6 * found.entering_total


def test_the_closure_notices_what_is_missing():
    found = loss_map(solved(METHANE))
    largest = found.losses[0]
    short = type(found)(found.entering, found.products, found.losses[1:], found.fuel_lhv)
    assert short.closure == pytest.approx(largest.exergy / found.entering_total, rel=1e-9)


def test_largest_first():
    exergies = [loss.exergy for loss in loss_map(solved(CYCLE)).losses]
    assert exergies == sorted(exergies, reverse=True)


def test_a_field_and_a_heat_engine_by_hand():
    # light 51 MW with exergy factor 0.9312 (Petela 1964), power 10.2 MW
    found = loss_map(solved(CYCLE))
    field = next(loss for loss in found.losses if loss.where == "field")
    assert field.cause == "destroyed"
    assert field.exergy / 1e6 == pytest.approx(51 * 0.9312 - 10.2, abs=0.003)
    assert found.share_of_sunlight(field.exergy) == pytest.approx(1 - 0.2 / 0.9312, rel=1e-4)
    assert found.per_fuel(found.fuel_lhv) == 1.0


def test_heat_to_the_ambient_is_thrown_away_with_carnot():
    solution = solved(METHANE)
    reactor = solution.outcomes["reactor"]
    heat = [d for d in reactor.duties if d.met_by == "ambient" and d.heat < 0]
    by_hand = sum(-d.heat * (1 - 298.15 / d.mean) for d in heat)
    losses = {(x.where, x.cause): x.exergy for x in loss_map(solution).losses}
    assert by_hand > 1e3
    assert losses["reactor", "heat"] == pytest.approx(by_hand, rel=1e-12)
    both = losses["reactor", "heat"] + losses["reactor", "destroyed"]
    assert both == pytest.approx(exergy_destroyed(solution)["reactor"], rel=1e-12)


def test_vents_are_thrown_away_by_the_port_that_sends():
    losses = {(x.where, x.cause): x.exergy for x in loss_map(solved(METHANE)).losses}
    purge = solved(METHANE).stream("back.purge").flow
    assert losses["back.purge", "stream"] == pytest.approx(float(purge.exergy()), rel=1e-12)
    assert ("stack.oxygen", "stream") in losses
    assert ("fuel.rest", "stream") not in losses  # goes to town


def test_cold_and_heat_that_are_bought_enter():
    entering = loss_map(solved(BOUGHT)).entering
    assert entering["sunlight"] == 0.0
    assert min(entering[what] for what in ("power", "heat", "cold", "material")) > 0.0


def test_light_that_nobody_takes_is_thrown_away():
    text = """
equipment:
  sun:   {kind: sunlight, irradiance: 1000 W/m2, aperture: 100 m2}
  half:  {kind: splitter, shares: {field: 40 %, ground: rest}}
  field: {kind: pv-field, efficiency: 20 %}
  town:  {kind: product}
lines:
  - sun.light -> half
  - half.field -> field -> town
"""
    found = loss_map(solved(text))
    losses = {(x.where, x.cause): x.exergy for x in found.losses}
    assert losses["half.ground", "light"] == pytest.approx(0.6 * 1e5 * 0.9312, rel=1e-4)
    assert losses["half", "destroyed"] == pytest.approx(0.0, abs=1e-6)
    assert found.closure < CLOSURE


def test_fuel_that_stays_in_its_store_is_kept():
    found = loss_map(solved(HYDROGEN.replace("  - fuel.rest -> town\n", "")))
    losses = {(x.where, x.cause): x.exergy for x in found.losses}
    stays = losses["fuel.rest", "kept"]
    delivered = loss_map(solved(HYDROGEN)).products["town"]
    assert stays == pytest.approx(delivered, rel=1e-9)
    assert found.sums()["kept_W"] == stays
    assert found.closure < CLOSURE


def test_power_into_a_vent_is_thrown_away():
    text = """
equipment:
  sun:   {kind: sunlight, irradiance: 1000 W/m2, aperture: 100 m2}
  field: {kind: pv-field, efficiency: 20 %}
  sky:   {kind: vent}
lines:
  - sun.light -> field -> sky
"""
    found = loss_map(solved(text))
    losses = {(x.where, x.cause): x.exergy for x in found.losses}
    assert losses["field.power", "power"] == pytest.approx(2e4, rel=1e-12)
    assert found.products_total == 0.0
    assert found.closure < CLOSURE


# --- surroundings ----------------------------------------------------------------------------


def test_the_usual_surroundings_are_the_default():
    assert Environment.at() == Environment()
    plain, named = loss_map(solved(METHANE)), loss_map(solved(elsewhere(METHANE, "{}")))
    assert plain == named


def test_surroundings_by_hand():
    # relative humidity 60 % at 10 degC: 1.2282 kPa of saturation (IAPWS-95 table) x 0.6
    found = Environment.at(283.15, 101325.0, 420e-6, 0.6)
    assert found.water == pytest.approx(0.6 * 1228.2, rel=1e-3)
    assert found.carbon_dioxide == pytest.approx(42.56, rel=1e-3)
    assert found.oxygen == 20390.0
    thin = Environment.at(pressure=0.5 * 101325.0)
    assert thin.oxygen == pytest.approx(10195.0, rel=1e-12)
    assert thin.water == pytest.approx(2200.0, rel=1e-12)  # humidity stays


def test_warmer_surroundings_keep_their_relative_humidity():
    # 2.2 kPa of 3.1698 kPa at 25 degC; 7.3849 kPa at 40 degC (IAPWS-95 table)
    found = Environment.at(313.15)
    assert found.water == pytest.approx(2200 / 3169.8 * 7384.9, rel=1e-3)


def test_more_carbon_dioxide_in_the_air_makes_methane_worth_less():
    # exergy of carbon goes with -RT ln(x): 8.314 x 298.15 x ln(430e-6 x 101325 / 33.5) per mol
    from math import log

    usual, now = solved(METHANE), solved(elsewhere(METHANE, "{carbon_dioxide: 430 ppm}"))
    stream = usual.stream("sieve.kept").flow
    carbon = float(stream.flow("CH4") + stream.flow("CO2") + stream.flow("CO"))
    by_hand = 8.31446262 * 298.15 * log(430e-6 * 101325 / 33.5) * carbon
    less = float(stream.exergy()) - float(stream.exergy(now.flowsheet.environment))
    assert less == pytest.approx(by_hand, rel=1e-9)


def test_the_rungs_of_exergy_stand_in_the_same_surroundings():
    usual = plant_account(solved(HYDROGEN)).as_data()
    cold = plant_account(solved(elsewhere(HYDROGEN, "{temperature: 5 degC}"))).as_data()
    # 1 - 4/3 x + 1/3 x^4 with x = 278.15/5778 (Petela 1964): 0.93582
    assert cold["exergy"]["entering_W"]["sunlight"] == pytest.approx(0.93582 * 8e6, rel=1e-5)
    assert cold["efficiency"]["overall"]["LHV"] == usual["efficiency"]["overall"]["LHV"]
    ratio = cold["exergy"]["products_W"] / sum(cold["exergy"]["entering_W"].values())
    assert cold["efficiency"]["overall"]["exergy"] == pytest.approx(ratio, rel=1e-12)


def test_as_data():
    account = plant_account(solved(METHANE))
    data = account.as_data()
    assert data["losses"][0] == {
        "where": "field",
        "cause": "destroyed",
        "exergy_W": account.losses.losses[0].exergy,
        "share_of_sunlight": account.losses.share_of_sunlight(account.losses.losses[0].exergy),
        "kWh_per_kWh_fuel": account.losses.per_fuel(account.losses.losses[0].exergy),
    }
    whole = data["exergy"]
    parts = whole["products_W"] + whole["destroyed_W"] + whole["thrown_away_W"]
    assert parts == pytest.approx(sum(whole["entering_W"].values()), rel=1e-9)
    assert plant_value(data, "exergy.destroyed_W") == whole["destroyed_W"]


def test_nothing_goes_in_in_the_dark():
    found = loss_map(solved(HYDROGEN, sun="0 W/m2"))
    assert found.closure is None
    assert found.share_of_sunlight(1.0) is None
    assert found.per_fuel(1.0) is None

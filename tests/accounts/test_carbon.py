"""Carbon, water and what leaves with fuel in it, by hand."""

import pytest

from chainflow.accounts.deliveries import deliveries
from chainflow.accounts.leaving import purges
from chainflow.accounts.plant import plant_account
from chainflow.accounts.returned import returned
from tests.accounts.test_losses import PLANTS, SHIPPED
from tests.flowsheets.shipped import solved_text
from tests.plants import BOUGHT, CYCLE, ENGINE_INSIDE, HYDROGEN, METHANE, PARTED, solved

ALL = [*PLANTS.values(), *SHIPPED.values()]
IDS = [*PLANTS, *SHIPPED]


def carbon(text):
    return plant_account(solved(text)).carbon


def water(text):
    return plant_account(solved(text)).water


@pytest.mark.parametrize("text", ALL, ids=IDS)
def test_carbon_and_hydrogen_close(text):
    account = plant_account(solved_text(text))
    assert (account.carbon.closure or 0.0) < 1e-9
    assert (account.water.closure or 0.0) < 1e-9
    assert account.carbon.efficiency is None or 0.0 < account.carbon.efficiency <= 1.0


def test_carbon_kept_by_hand():
    solution = solved(METHANE)
    fuel = solution.stream("sieve.kept").flow
    made = float(fuel.flow("CH4") + fuel.flow("CO") + fuel.flow("CO2"))
    bought = float(solution.stream("bought.outlet").flow.flow("CO2"))
    found = carbon(METHANE)
    assert found.fuel_made == pytest.approx(made, rel=1e-12)
    assert found.entering == {"bought": pytest.approx(bought, rel=1e-12)}
    assert found.efficiency == pytest.approx(made / bought, rel=1e-9)


def test_the_chimney_of_a_closed_cycle_is_not_held_against_the_fuel():
    # 2 % leaves at the stack gas, after the fuel has been used
    found = carbon(CYCLE)
    assert found.leaving["capture.stackgas"] == max(found.leaving.values())
    assert found.efficiency > 0.999


def test_carbon_lost_behind_the_reactor_is_lost_once():
    """All carbon is bought, so what is in the methane per what is bought; CO2 is no fuel kept."""
    solution, found = solved(PARTED), carbon(PARTED)
    kept = float(solution.stream("part.kept").flow.flow("CH4"))
    bought = float(solution.stream("carbon.outlet").flow.flow("CO2"))
    assert found.fuel_made == pytest.approx(bought, rel=1e-12)
    assert found.efficiency == pytest.approx(kept / bought, rel=1e-12)


def test_carbon_dioxide_of_power_and_material_by_hand():
    """40 g/kWh of 5 MW and the heater, 20 g a kg bought, 44.01 g a mol of fossil carbon."""
    solution, found = solved(PARTED), carbon(PARTED)
    grid = solution.outcomes["grid"].results["bought_W"]
    carbon_in = solution.stream("carbon.outlet").flow
    by_hand = grid * 0.04 / 3.6e6 + float(carbon_in.mass_flow) * 0.02
    by_hand += float(carbon_in.flow("CO2")) * 44.0095e-3
    assert 5.09e6 < grid < 5.13e6
    assert found.emission("making") == pytest.approx(by_hand, rel=1e-9)


def test_fuel_that_stays_in_its_store_is_neither_lost_nor_purged():
    text = METHANE.replace("  - fuel.rest -> town\n", "")
    solution = solved(text)
    assert carbon(text).efficiency == pytest.approx(carbon(METHANE).efficiency, rel=1e-3)
    assert "fuel.rest" not in {purge.key for purge in purges(solution)}
    assert "fuel.rest" in carbon(text).leaving


def test_nothing_is_known_of_carbon_without_origin():
    found = carbon(METHANE)
    assert found.unknown == ("material of bought",)
    assert found.emission("making") is None
    assert found.as_data()["intensity"] == {"fuel_kg_kWh": None, "power_kg_kWh": None}


def origin(text, word, intensity=""):
    return text.replace(
        "bought:  {kind: supply,", f"bought:  {{kind: supply, origin: {word},{intensity}"
    )


def test_fossil_carbon_counts_in_full_and_air_nothing():
    solution = solved(METHANE)
    bought = float(solution.stream("bought.outlet").flow.flow("CO2"))
    fossil = carbon(origin(METHANE, "fossil"))
    # CO2 44.01 g/mol: IUPAC abridged standard atomic weights 2021
    assert fossil.emission("making") == pytest.approx(bought * 44.01e-3, rel=1e-4)
    fuel = float(solution.stream("fuel.rest").flow.lhv)
    by_hand = bought * 44.01e-3 / fuel * 3.6e6
    assert fossil.as_data()["intensity"]["fuel_kg_kWh"] == pytest.approx(by_hand, rel=1e-4)
    # methane from fossil CO2 carries at least its own carbon: 44.01 g per 802.3 kJ
    assert 0.1975 < by_hand < 0.1975 * 1.05
    for word in ("air", "biogenic"):
        assert carbon(origin(METHANE, word)).emission("making") == 0.0


def test_what_bringing_it_emits_counts_by_mass():
    solution = solved(METHANE)
    mass = float(solution.stream("bought.outlet").flow.mass_flow)
    found = carbon(origin(METHANE, "biogenic", " carbon_intensity: 120 g/kg,"))
    assert found.emission("making") == pytest.approx(0.12 * mass, rel=1e-12)


def test_power_from_a_grid_with_an_intensity():
    text = BOUGHT.replace(
        "equipment:\n", "equipment:\n  net: {kind: grid, carbon_intensity: 40 g/kWh}\n"
    ).replace("lines:\n", "lines:\n  - net.power -> press.power\n  - net.power -> warm.power\n")
    text = text.replace("{kind: supply,", "{kind: supply, origin: fossil,")
    solution = solved(text)
    power = solution.outcomes["net"].results["bought_W"]
    gas = float(solution.stream("gas.outlet").flow.flow("CH4")) * 44.01e-3
    found = plant_account(solution).carbon
    assert found.emission("making") == pytest.approx(gas + power * 0.04 / 3.6e6, rel=1e-4)


def test_power_and_heat_from_nowhere_are_named():
    found = carbon(BOUGHT)
    assert set(found.unknown) == {"power of press", "heat of warm", "material of gas"}


def test_carbon_out_of_the_air_counts_nothing():
    text = METHANE.replace(
        "bought:  {kind: supply, composition: {N2: 0.1 %, CO2: rest}, temperature: 25 degC,\n"
        "           pressure: 12 bar}",
        "bought:  {kind: air-capture, pressure: 12 bar}",
    )
    assert "air-capture" in text
    text = text.replace("- bought -> blend.trim", "- bought.co2 -> blend.trim")
    account = plant_account(solved(text))
    assert account.carbon.entering == {}
    assert account.carbon.from_air > 0.0
    assert account.carbon.closure < 1e-9
    assert all(not what.startswith("material") for what in account.carbon.unknown)


# --- water -----------------------------------------------------------------------------------


def test_stoichiometric_water_of_hydrogen_is_the_water_split():
    solution = solved(HYDROGEN)
    made = solution.outcomes["stack"].results["hydrogen_mol_s"]
    found = water(HYDROGEN)
    assert found.stoichiometric == pytest.approx(made, rel=1e-9)
    assert found.per_stoichiometric == pytest.approx(found.top_up / made, rel=1e-9)


def test_methane_takes_two_waters():
    # CO2 + 4 H2 -> CH4 + 2 H2O and 4 H2O -> 4 H2 + 2 O2: two of four waters come back, two stay
    found = water(METHANE)
    assert found.stoichiometric == pytest.approx(found.consumed / 2, rel=0.02)
    assert 1.0 < found.per_stoichiometric < 1.05
    assert 1 - found.top_up / found.consumed == pytest.approx(returned(solved(METHANE), "H2O"))


def test_water_per_energy_by_hand():
    # 18.015 g/mol of water per mol of hydrogen with 241.8 kJ/mol: 0.2682 kg/kWh
    data = water(HYDROGEN).as_data()
    assert data["top_up_kg_kWh_fuel"] == pytest.approx(
        0.2682 * data["top_up_per_stoichiometric"], rel=1e-3
    )


def test_a_closed_cycle_takes_next_to_none():
    assert water(CYCLE).per_stoichiometric < 0.05


# --- purges ----------------------------------------------------------------------------------


def test_a_purge_and_its_fuel_value():
    solution = solved(METHANE)
    found = purges(solution)
    assert [purge.key for purge in found] == ["back.purge"]
    gas = solution.stream("back.purge").flow
    fuel = float(solution.stream("fuel.rest").flow.lhv)
    assert found[0].share_of_fuel == pytest.approx(float(gas.lhv) / fuel, rel=1e-12)
    (data,) = plant_account(solution).as_data()["purges"]
    assert data["flow_mol_s"]["CH4"] == pytest.approx(float(gas.flow("CH4")), rel=1e-12)
    assert data["lhv_W"] == pytest.approx(float(gas.lhv), rel=1e-12)


def test_fuel_that_stays_in_its_store_is_no_purge():
    text = ENGINE_INSIDE.replace("  - knock.liquid", "  - knock.liquid")
    assert all(purge.key != "h2.rest" for purge in purges(solved(text)))
    assert deliveries(solved(text)).material

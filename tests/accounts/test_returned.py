import pytest

from chainflow.accounts.returned import consumed, returned, topped_up_flow
from tests.plants import BOUGHT, CYCLE, HYDROGEN, METHANE, solved


def test_water_consumed_is_the_reaction_only():
    # one mol of water per mol of hydrogen; the moisture of both gases is not consumed
    solution = solved(HYDROGEN)
    made = solution.outcomes["stack"].results["hydrogen_mol_s"]
    assert consumed(solution, "H2O") == pytest.approx(made, rel=1e-12)


def test_returned_water_by_hand():
    solution = solved(METHANE)
    made = solution.outcomes["stack"].results["hydrogen_mol_s"]
    top_up = solution.outcomes["water"].results["top_up_mol_s"]
    assert returned(solution, "H2O") == pytest.approx(1 - top_up / made, rel=1e-12)


def test_half_the_water_comes_back_from_methanation():
    # CO2 + 4 H2 -> CH4 + 2 H2O: two of the four waters split are made again
    assert returned(solved(METHANE), "H2O") == pytest.approx(0.5, abs=0.02)


def test_once_through_carbon_is_not_returned_and_not_clipped():
    # what is purged and dissolved had to be bought too
    share = returned(solved(METHANE), "CO2")
    assert -0.05 < share < 0.0


def test_a_closed_cycle_returns_what_it_captures():
    # 98 % of the flue is captured; the carbon that is lost is bought through the store's make-up
    solution = solved(CYCLE)
    reactor = (solution.stream(key).flow.flow("CO2") for key in ("blend.outlet", "reactor.product"))
    used = next(reactor) - next(reactor)
    lost = sum(solution.stream("capture.stackgas").flow.flow(name) for name in ("CO2", "CO", "CH4"))
    assert returned(solution, "CO2") == pytest.approx(1 - lost / used, abs=1e-3)
    assert returned(solution, "H2O") > 0.99


def test_a_supply_that_feeds_a_store_is_counted_once():
    solution = solved(CYCLE)
    made_up = float(solution.stream("bought.outlet").flow.total)
    assert topped_up_flow(solution, "CO2") == pytest.approx(made_up, rel=1e-12)


def test_none_if_nothing_is_consumed():
    assert returned(solved(BOUGHT), "H2O") is None
    assert returned(solved(HYDROGEN), "CO2") is None
    assert returned(solved(HYDROGEN, sun="0 W/m2"), "H2O") is None


def test_moisture_of_air_is_no_top_up():
    text = """
components: [H2, O2, N2, H2O]
equipment:
  water: {kind: supply, composition: {H2O: 1}, temperature: 25 degC, pressure: 30 bar}
  stack: {kind: electrolyser, energy_use: 50 kWh/kg, temperature: 60 degC, pressure: 30 bar,
           hydrogen: 1 mol/s}
  air:   {kind: supply, composition: {N2: 78 %, H2O: 2 %, O2: rest}, temperature: 30 degC,
           pressure: 1 bar, flow: 100 mol/s}
  sky:   {kind: vent}
  town:  {kind: product}
lines:
  - water -> stack.water
  - stack.hydrogen -> town
  - air -> sky
"""
    solution = solved(text)
    asked = float(solution.stream("water.outlet").flow.total)
    assert topped_up_flow(solution, "H2O") == pytest.approx(asked, rel=1e-12)
    # the moisture of both gases leaves, so more water is bought than is split
    assert returned(solution, "H2O") == pytest.approx(1 - asked, rel=1e-12)

import pytest

from chainflow.accounts.purchases import purchases
from tests import plants
from tests.plants import BOUGHT, CYCLE, HYDROGEN, METHANE, solved


def test_unlinked_compressor_buys_its_power():
    solution = solved(BOUGHT)
    bought = purchases(solution)
    assert bought.power == {"press": solution.outcomes["press"].power}
    assert bought.power_total > 0.0


def test_linked_power_is_not_bought():
    assert purchases(solved(HYDROGEN)).power == {}


def test_heat_that_nothing_meets_is_bought_and_named():
    solution = solved(BOUGHT)
    ((name, duty),) = purchases(solution).heat
    entering, leaving = solution.stream("press.outlet").flow, solution.stream("warm.outlet").flow
    assert name == "warm"
    assert duty.heat == pytest.approx(leaving.enthalpy - entering.enthalpy, rel=1e-12)


def test_cooling_below_ambient_is_bought_and_the_rest_is_free():
    solution = solved(BOUGHT)
    bought = purchases(solution)
    ((name, duty),) = bought.cold
    assert name == "chill"
    assert (duty.start, duty.end) == pytest.approx((298.15, 253.15), rel=1e-12)
    assert bought.cold_total == -duty.heat > 0.0
    free = [d for d in solution.outcomes["chill"].duties if d.met_by == "ambient"]
    whole = (
        solution.stream("chill.outlet").flow.enthalpy - solution.stream("warm.outlet").flow.enthalpy
    )
    assert sum(d.heat for d in free) + duty.heat == pytest.approx(whole, rel=1e-12)


def test_supplies_are_bought():
    material = purchases(solved(BOUGHT)).material
    assert list(material) == ["gas"]
    assert float(material["gas"].flow("CH4")) == pytest.approx(9.0, rel=1e-12)


def test_a_store_without_make_up_line_buys_its_contents():
    solution = solved(METHANE)
    water = purchases(solution).material["water"]
    assert float(water.total) == solution.outcomes["water"].results["top_up_mol_s"] > 0.0
    assert float(water.fraction("H2O")) == 1.0


def test_a_store_with_make_up_line_buys_nothing_itself():
    bought = purchases(solved(CYCLE)).material
    assert "bought" in bought
    assert "carbon" not in bought


def test_nothing_bought_is_not_listed():
    # a supply that nobody asks: sun 0 leaves everything at rest
    assert purchases(solved(HYDROGEN, sun="0 W/m2")).material == {}


def test_grid_power_is_bought_as_it_is_served():
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
    solution = plants.solved(text)
    bought = purchases(solution)
    asked = solution.outcomes["press"].power + solution.outcomes["warm"].power
    assert bought.power == {"net": pytest.approx(asked, rel=1e-12)}
    assert bought.heat == ()


def test_an_electrolyser_that_calls_without_a_line_buys_its_power():
    text = """
equipment:
  water: {kind: supply, composition: {H2O: 1}, temperature: 25 degC, pressure: 30 bar}
  stack: {kind: electrolyser, energy_use: 50 kWh/kg, temperature: 60 degC, pressure: 30 bar,
           hydrogen: 36 kg/h}
  town:  {kind: product}
lines:
  - water -> stack.water
  - stack.hydrogen -> town
"""
    # 36 kg/h times 50 kWh/kg is 1800 kW
    assert purchases(solved(text)).power == {"stack": pytest.approx(1.8e6, rel=1e-12)}


def test_stated_work_of_a_separator_is_bought_without_a_line():
    text = """
equipment:
  gas:   {kind: supply, composition: {CH4: 50 %, CO2: rest}, temperature: 25 degC,
           pressure: 2 bar, flow: 2 mol/s}
  sieve: {kind: separator, recovery: {CO2: 100 %}, work: 10 kJ/mol}
  town:  {kind: product}
  sky:   {kind: vent}
lines:
  - gas -> sieve -> town
  - sieve.kept -> sky
"""
    # 1 mol/s kept at 10 kJ/mol
    assert purchases(solved(text)).power == {"sieve": pytest.approx(1e4, rel=1e-12)}

from math import prod

import pytest

from chainflow.accounts.efficiency import efficiency
from chainflow.accounts.worth import BASES
from tests.plants import BOUGHT, CYCLE, ENGINE_INSIDE, HYDROGEN, METHANE, solved

PLANTS = {
    "hydrogen": HYDROGEN,
    "methane": METHANE,
    "engine inside": ENGINE_INSIDE,
    "cycle": CYCLE,
    "bought": BOUGHT,
}


@pytest.mark.parametrize("text", PLANTS.values(), ids=PLANTS)
@pytest.mark.parametrize("basis", BASES)
def test_rungs_multiply_to_the_overall_efficiency(text, basis):
    found = efficiency(solved(text))
    assert prod(rung.ratio[basis] for rung in found.rungs) == pytest.approx(
        found.overall[basis], rel=1e-14
    )


@pytest.mark.parametrize("text", PLANTS.values(), ids=PLANTS)
def test_each_rung_starts_where_the_one_before_ends(text):
    rungs = efficiency(solved(text)).rungs
    assert [rung.end for rung in rungs[:-1]] == [rung.start for rung in rungs[1:]]


def names(text, **overrides):
    rungs = efficiency(solved(text, **overrides)).rungs
    return [rungs[0].start, *(rung.end for rung in rungs)]


def test_cuts_of_each_plant():
    chain = ["light", "power", "hydrogen", "fuel made", "fuel kept"]
    assert names(HYDROGEN) == chain
    assert names(METHANE) == chain
    assert names(CYCLE) == [*chain, "power out"]
    assert names(BOUGHT) == ["input", "useful"]


def test_sunlight_to_hydrogen_by_hand():
    # 20 % of the light is power, hydrogen takes 52 kWh/kg and has 33.33 kWh/kg LHV
    # (ISO/TR 15916: 119.9 MJ/kg); the pump and the compressor take power before the stack
    solution = solved(HYDROGEN)
    machines = solution.outcomes["feed"].power + solution.outcomes["press"].power
    power = 0.2 * 8e6
    by_hand = (power - machines) / 8e6 * (119.9 / 3.6) / 52
    found = efficiency(solution)
    assert found.overall["LHV"] == pytest.approx(by_hand, rel=1e-3)
    assert found.sunlight_to_fuel["LHV"] == pytest.approx(found.overall["LHV"], rel=1e-12)
    assert found.sunlight_share == 1.0


def test_field_only_by_hand():
    text = """
equipment:
  sun:   {kind: sunlight, irradiance: 1000 W/m2, aperture: 100 m2}
  field: {kind: pv-field, efficiency: 20 %}
  town:  {kind: product}
lines:
  - sun -> field -> town
"""
    found = efficiency(solved(text))
    assert found.overall["LHV"] == pytest.approx(0.2, rel=1e-14)
    # exergy of sunlight 0.9312: Petela, J. Heat Transfer 86 (1964) 187
    assert found.overall["exergy"] == pytest.approx(0.2 / 0.9312, rel=1e-4)
    assert names(text) == ["light", "power", "power out"]


def test_power_of_a_sun_heated_engine_is_power_made_from_light():
    # 600 kW x 20 % = 120 kW; 400 kW on mirrors drive an engine: both make one cut, so that no
    # rung makes power out of nothing
    text = """
equipment:
  sun:     {kind: sunlight, irradiance: 1000 W/m2, direct: 100 %, aperture: 1000 m2}
  part:    {kind: splitter, shares: {field: 60 %, mirrors: rest}}
  field:   {kind: pv-field, efficiency: 20 %}
  mirrors: {kind: concentrator, temperature: 500 degC}
  warm:    {kind: heat-network}
  engine:  {kind: heat-engine, share_of_carnot: 60 %, sink: 40 degC}
  town:    {kind: product}
lines:
  - sun -> part
  - part.field -> field -> town
  - part.mirrors -> mirrors -> ENGINE -> town
"""
    for way in ("engine", "warm.supply\n  - warm.rest -> engine"):
        plant = solved(text.replace("ENGINE", way))
        first, last = efficiency(plant).rungs
        power = 120e3 - plant.outcomes["engine"].power
        assert (first.end, last.end) == ("power", "power out")
        assert first.ratio["LHV"] == pytest.approx(power / 1e6, rel=1e-12)
        assert last.ratio["LHV"] == pytest.approx(1.0, rel=1e-12)


def test_nothing_goes_in():
    found = efficiency(solved(HYDROGEN, sun="0 W/m2"))
    assert found.overall == {"LHV": None, "HHV": None, "exergy": None}
    assert found.sunlight_share is None
    assert found.rungs == ()


def test_all_that_is_bought_is_an_input():
    solution = solved(BOUGHT)
    found = efficiency(solution)
    given, made = solution.stream("gas.outlet").flow, solution.stream("chill.outlet").flow
    warm = (
        solution.stream("warm.outlet").flow.enthalpy - solution.stream("press.outlet").flow.enthalpy
    )
    entering = given.lhv + solution.outcomes["press"].power + warm
    assert found.overall["LHV"] == pytest.approx(made.lhv / entering, rel=1e-12)
    assert found.sunlight_share == 0.0


def test_nothing_useful_is_an_efficiency_of_zero():
    text = """
equipment:
  sun:   {kind: sunlight, irradiance: 1000 W/m2, aperture: 100 m2}
  field: {kind: pv-field, efficiency: 20 %}
  sky:   {kind: vent}
lines:
  - sun -> field -> sky
"""
    found = efficiency(solved(text))
    assert found.overall["LHV"] == 0.0
    assert found.rungs[-1].end == "useful"


def test_hydrogen_cut_holds_the_lhv_of_what_the_stack_makes():
    solution = solved(METHANE)
    rung = next(r for r in efficiency(solution).rungs if r.end == "hydrogen")
    made = float(solution.stream("stack.hydrogen").flow.lhv)
    assert rung.ratio["LHV"] == pytest.approx(made / (0.2 * 850 * 6000), rel=1e-12)


HEAT_GOES_ROUND = """
equipment:
  sun:   {kind: sunlight, irradiance: 900 W/m2, aperture: 1000 m2}
  dish:  {kind: concentrator, temperature: 500 degC, concentration: 500, optical_efficiency: 80 %}
  first: {kind: heat-network}
  next:  {kind: heat-network}
  wheel: {kind: heat-engine, share_of_carnot: 60 %}
  part:  {kind: splitter, shares: {out: 50 %, round: rest}}
  town:  {kind: product}
lines:
  - sun -> dish
  - dish.heat -> first.supply
  - first.rest -> next.supply
  - next.rest -> part
  - part.round -> first.supply
  - part.out -> wheel.heat
  - wheel.power -> town
"""


def test_heat_of_the_sun_that_goes_round_is_found_to_be_the_suns():
    """Two networks that pass heat on to each other are a loop to search."""
    rungs = efficiency(solved(HEAT_GOES_ROUND)).rungs
    assert [rung.start for rung in rungs] == ["light", "power"]

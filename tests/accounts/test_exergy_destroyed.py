import pytest

from chainflow.accounts.deliveries import deliveries
from chainflow.accounts.exergy import exergy_destroyed
from chainflow.accounts.purchases import purchases
from chainflow.accounts.worth import of_light, of_material
from chainflow.equipment.boundary import Vent
from chainflow.thermo.streams import Stream
from tests.plants import BOUGHT, CYCLE, ENGINE_INSIDE, HYDROGEN, METHANE, solved

PLANTS = {
    "hydrogen": HYDROGEN,
    "methane": METHANE,
    "engine inside": ENGINE_INSIDE,
    "cycle": CYCLE,
    "bought": BOUGHT,
}


@pytest.mark.parametrize("text", PLANTS.values(), ids=PLANTS)
def test_destroyed_exergy_is_what_enters_the_plant_and_does_not_leave(text):
    solution = solved(text)
    pieces = solution.flowsheet.equipment
    light = sum(s.flow.rate for s in solution.streams if s.content == "light")
    bought = purchases(solution)
    cold = sum(duty.heat * (1 - 298.15 / duty.mean) for _, duty in bought.cold)
    entering = of_light(light).exergy + bought.worth.exergy + cold
    lost = [
        stream.flow
        for stream in solution.streams
        if isinstance(stream.flow, Stream)
        and (
            not stream.targets
            or any(isinstance(pieces[t.split(".")[0]], Vent) for t in stream.targets)
        )
    ]
    leaving = deliveries(solution).worth.exergy + sum(of_material(s).exergy for s in lost)
    destroyed = sum(exergy_destroyed(solution).values())
    assert destroyed == pytest.approx(entering - leaving, rel=1e-9)


def test_the_border_destroys_nothing():
    found = exergy_destroyed(solved(METHANE))
    assert [found[name] for name in ("sun", "bought", "town", "flare")] == [0.0] * 4


def test_a_field_by_hand():
    # light 51 MW with exergy factor 0.9312 (Petela 1964), power 10.2 MW
    found = exergy_destroyed(solved(CYCLE))["field"]
    assert found / 1e6 == pytest.approx(51 * 0.9312 - 10.2, abs=0.003)


def test_a_heat_engine_destroys_what_carnot_would_have_given():
    solution = solved(CYCLE)
    heat = solution.stream("boiler.heat").flow
    reversible = heat.rate * (1 - 298.15 / heat.mean)
    power = solution.stream("wheel.power").flow
    assert exergy_destroyed(solution)["wheel"] == pytest.approx(reversible - power, rel=1e-12)


def test_a_free_separation_shows_as_exergy_made_from_nothing():
    solution = solved(METHANE)
    minimum = solution.outcomes["sieve"].results["minimum_work_W"]
    assert exergy_destroyed(solution)["sieve"] < 0.0
    assert minimum > 0.0


def test_real_equipment_destroys_exergy():
    found = exergy_destroyed(solved(CYCLE))
    assert all(value >= -1.0 for value in found.values())
    assert min(found[name] for name in ("stack", "reactor", "burner", "letdown", "rain")) > 1e3


def test_heat_of_a_network_is_carried_at_its_own_temperatures():
    text = """
equipment:
  hot:   {kind: supply, composition: {N2: 1}, temperature: 500 degC, pressure: 1 bar, flow: 2 mol/s}
  cold:  {kind: supply, composition: {N2: 1}, temperature: 25 degC, pressure: 1 bar, flow: 1 mol/s}
  give:  {kind: cooler, temperature: 400 degC}
  bus:   {kind: heat-network}
  need:  {kind: heater, temperature: 150 degC}
  sky:   {kind: vent}
lines:
  - hot -> give -> sky
  - cold -> need -> sky
  - give.heat -> bus.supply
  - bus.need -> need.heat
  - bus.rest -> sky
"""
    solution = solved(text)
    supplied = solution.stream("give.heat").flow
    served, rest = solution.stream("bus.need").flow, solution.stream("bus.rest").flow

    def carnot(heat):
        return heat.rate * (1 - 298.15 / heat.mean)

    by_hand = carnot(supplied) - carnot(served) - carnot(rest)
    found = exergy_destroyed(solution)
    assert found["bus"] == pytest.approx(by_hand, rel=1e-9)
    assert found["bus"] > 0.0

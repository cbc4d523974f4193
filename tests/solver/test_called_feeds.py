"""Plants whose reactors ask for steam, oxygen or leak air, solved as a whole."""

import pytest

from chainflow.flowsheet.building import read_text
from chainflow.solver.lookup import value_at
from chainflow.solver.solve import solve_flowsheet

REFORMING = """
title: Reforming with its own water (invented)
components: [H2, O2, N2, H2O, CO, CO2, CH4]
equipment:
  gas:
    kind: supply
    composition: {CH4: 0.95, CO2: 0.05}
    temperature: 400 degC
    pressure: 20 bar
    flow: 1 mol/s
  air:    {kind: supply, composition: {O2: 1}, temperature: 150 degC, pressure: 20 bar}
  water:  {kind: store, contents: {H2O: 1}, temperature: 25 degC, pressure: 1 bar}
  feed:   {kind: pump, pressure: 20 bar}
  raise:  {kind: heater, temperature: 300 degC}
  former: {kind: reformer, temperature: 950 degC, steam_to_carbon: 1.5, autothermal: true}
  cool:   {kind: condenser, temperature: 30 degC}
  town:   {kind: product}
lines:
  - gas -> former.feed
  - water.draw -> feed -> raise -> former.steam
  - air -> former.oxygen
  - former -> cool -> town
  - cool.liquid -> water.returns
holds:
  - {hold: former.product.ratio.H2/CO, at: 3.0, by: former.steam_to_carbon, within: [1.2, 3.0]}
"""

METHANATION = """
title: Beds with knock-out (invented)
components: [H2, O2, N2, H2O, CO, CO2, CH4]
equipment:
  hydrogen:
    kind: supply
    composition: {H2: 1}
    temperature: 60 degC
    pressure: 20 bar
    flow: 4 mol/s
  carbon:   {kind: store, contents: {CO2: 1}, temperature: 25 degC, pressure: 20 bar}
  blend:    {kind: blend, ratio: {H2: 4, CO2: 1}}
  water:    {kind: store, contents: {H2O: 1}, temperature: 25 degC, pressure: 1 bar}
  beds:
    kind: methanation-reactor
    beds: 3
    bed_limit: 550 degC
    knock_out: 40 degC
    pressure_drop: 0.6 bar
  dry:      {kind: condenser, temperature: 30 degC}
  town:     {kind: product}
lines:
  - hydrogen -> blend.main
  - carbon.draw -> blend.trim
  - blend -> beds -> dry -> town
  - beds.liquid -> water.returns
  - dry.liquid -> water.returns
holds:
  - {hold: beds.upper_wobbe_index, at: 49.5 MJ/m3, by: beds.bed_limit, within: [300 degC, 600 degC]}
"""

FIRING = """
title: Oxy-fuel boiler with a leak (invented)
equipment:
  gas:
    kind: supply
    composition: {CH4: 1}
    temperature: 15 degC
    pressure: 1.1 bar
    flow: 1 mol/s
  oxygen: {kind: supply, composition: {O2: 1}, temperature: 15 degC, pressure: 1.1 bar}
  carbon: {kind: store, contents: {CO2: 1}, temperature: 25 degC, pressure: 1 bar}
  fan:    {kind: compressor, pressure: 1.1 bar, stages: 1}
  air:    {kind: supply, composition: {N2: 0.79, O2: 0.21}, temperature: 15 degC, pressure: 1.1 bar}
  fire:   {kind: burner, excess: 2 %, flue_temperature: 1300 degC, air_leak: 3 %}
  cool:   {kind: condenser, temperature: 30 degC}
lines:
  - gas -> fire.fuel
  - oxygen -> fire.oxidiser
  - air -> fire.leak
  - carbon.draw -> fan -> fire.moderator
  - fire -> cool -> carbon.returns
"""


def solved(text):
    return solve_flowsheet(read_text(text))


@pytest.mark.parametrize("text", [REFORMING, METHANATION, FIRING], ids=["steam", "beds", "leak"])
def test_it_closes(text):
    balance = solved(text).balance
    assert max(balance.elements, balance.energy) < 1e-9


def test_steam_is_called_through_pump_and_heater():
    solution = solved(REFORMING)
    assert value_at(solution, "former.product.ratio.H2/CO") == pytest.approx(3.0, rel=1e-9)
    assert value_at(solution, "former.product.temperature") == pytest.approx(1223.15, abs=1e-5)


def test_a_wobbe_index_can_be_held():
    solution = solved(METHANATION)
    assert value_at(solution, "beds.upper_wobbe_index") == pytest.approx(49.5e6, rel=1e-9)
    assert 573.15 < value_at(solution, "beds.hottest_bed") < 873.15


def test_nitrogen_of_the_leak_gathers_in_the_carbon_dioxide():
    assert value_at(solved(FIRING), "cool.gas.fraction.N2") > 0.2

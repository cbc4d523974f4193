"""Small invented plants for tests of the accounts, the report and the command line.

Each is a flowsheet text; `solved` solves one (once for each set of overrides).
"""

from functools import cache

from chainflow.flowsheet.building import read_text
from chainflow.solver.solution import Solution
from chainflow.solver.solve import solve_flowsheet

HYDROGEN = """
title: Hydrogen by the river (invented)
basis: LHV
components: [H2, O2, H2O]
knobs: {sun: 800 W/m2, keep: 100 bar}
equipment:
  sun:   {kind: sunlight, irradiance: $sun, aperture: 10000 m2}
  field: {kind: pv-field, efficiency: 20 %}
  board: {kind: switchboard}
  water: {kind: store, contents: {H2O: 1}, temperature: 25 degC, pressure: 1 bar}
  feed:  {kind: pump, pressure: 30 bar}
  stack: {kind: electrolyser, energy_use: 52 kWh/kg, temperature: 60 degC, pressure: 30 bar}
  dry:   {kind: condenser, temperature: 30 degC, pressure_drop: 0.2 bar}
  press: {kind: compressor, pressure: $keep, intercool: 35 degC, aftercool: 35 degC}
  fuel:  {kind: store, contents: {H2: 1}, temperature: 25 degC, pressure: $keep}
  town:  {kind: product}
lines:
  - sun.light -> field.light
  - field.power -> board.supply
  - board.feed -> feed.power
  - board.press -> press.power
  - board.rest -> stack.power
  - water.draw -> feed -> stack.water
  - stack.hydrogen -> dry -> press -> fuel.returns
  - fuel.rest -> town
  - dry.liquid -> water.returns
  - press.condensate -> water.returns
"""

METHANE = """
title: Methane with a recycle (invented)
basis: HHV
components: [H2, O2, N2, H2O, CO, CO2, CH4]
equipment:
  sun:     {kind: sunlight, irradiance: 850 W/m2, aperture: 6000 m2}
  field:   {kind: pv-field, efficiency: 20 %}
  board:   {kind: switchboard}
  water:   {kind: store, contents: {H2O: 1}, temperature: 25 degC, pressure: 1 bar}
  feed:    {kind: pump, pressure: 12 bar}
  bought:  {kind: supply, composition: {N2: 0.1 %, CO2: rest}, temperature: 25 degC,
           pressure: 12 bar}
  stack:   {kind: electrolyser, energy_use: 52 kWh/kg, temperature: 60 degC, pressure: 12 bar}
  dryh:    {kind: condenser, temperature: 30 degC, pressure_drop: 0.2 bar}
  blend:   {kind: blend, ratio: {H2: 4, CO2: 1}, let_down: true}
  reactor: {kind: methanation-reactor, temperature: 320 degC}
  knock:   {kind: condenser, temperature: 30 degC, pressure_drop: 0.8 bar}
  sieve:   {kind: separator, recovery: {CH4: 97 %}}
  back:    {kind: splitter, shares: {recycle: rest, purge: 1 %}}
  blower:  {kind: compressor, pressure: 12 bar, stages: 1}
  fuel:    {kind: store, contents: {CH4: 1}, temperature: 25 degC, pressure: 10 bar}
  town:    {kind: product}
  flare:   {kind: vent}
  o2vent:  {kind: vent}
lines:
  - sun.light -> field.light
  - field.power -> board.supply
  - board.feed -> feed.power
  - board.blower -> blower.power
  - board.rest -> stack.power
  - water.draw -> feed -> stack.water
  - stack.hydrogen -> dryh -> blend.main
  - stack.oxygen -> o2vent
  - bought -> blend.trim
  - blend -> reactor -> knock -> sieve -> back
  - back.recycle -> blower -> blend.main
  - back.purge -> flare
  - sieve.kept -> fuel.returns
  - fuel.rest -> town
  - dryh.liquid -> water.returns
  - knock.liquid -> water.returns
"""

# hydrogen that the methane does not need runs an engine for the plant's own switchboard
ENGINE_INSIDE = """
title: Surplus hydrogen back to power (invented)
equipment:
  sun:     {kind: sunlight, irradiance: 850 W/m2, aperture: 60000 m2}
  field:   {kind: pv-field, efficiency: 20 %}
  board:   {kind: switchboard}
  water:   {kind: store, contents: {H2O: 1}, temperature: 25 degC, pressure: 1 bar}
  feed:    {kind: pump, pressure: 12 bar}
  stack:   {kind: electrolyser, energy_use: 52 kWh/kg, temperature: 60 degC, pressure: 12 bar}
  dryh:    {kind: condenser, temperature: 30 degC, pressure_drop: 0.2 bar}
  h2:      {kind: store, contents: {H2: 1}, temperature: 30 degC, pressure: 11 bar}
  co2:     {kind: supply, composition: {CO2: 1}, temperature: 25 degC, pressure: 11 bar,
           flow: 6 mol/s}
  blend:   {kind: blend, ratio: {CO2: 1, H2: 4}}
  reactor: {kind: methanation-reactor, temperature: 320 degC}
  knock:   {kind: condenser, temperature: 30 degC, pressure_drop: 0.5 bar}
  town:    {kind: product}
  letdown: {kind: valve, pressure: 1.2 bar}
  air:     {kind: supply, composition: {N2: 79 %, O2: rest}, temperature: 25 degC,
           pressure: 1.2 bar}
  engine:  {kind: engine, efficiency: 42 %, excess: 100 %, temperature: 120 degC}
  stackgas: {kind: vent}
  o2vent:  {kind: vent}
lines:
  - sun.light -> field.light
  - field.power -> board.supply
  - engine.power -> board.supply
  - board.feed -> feed.power
  - board.rest -> stack.power
  - water.draw -> feed -> stack.water
  - stack.hydrogen -> dryh -> h2.returns
  - stack.oxygen -> o2vent
  - co2 -> blend.main
  - h2.draw -> blend.trim
  - blend -> reactor -> knock -> town
  - h2.rest -> letdown -> engine.fuel
  - air -> engine.oxidiser
  - engine.flue -> stackgas
  - dryh.liquid -> water.returns
  - knock.liquid -> water.returns
"""

# a closed cycle: the flue's CO2 returns to its store, the burner's heat becomes power
CYCLE = """
title: Closed methane cycle (invented)
components: [H2, O2, H2O, CO, CO2, CH4]
equipment:
  sun:     {kind: sunlight, irradiance: 850 W/m2, aperture: 60000 m2}
  field:   {kind: pv-field, efficiency: 20 %}
  board:   {kind: switchboard}
  water:   {kind: store, contents: {H2O: 1}, temperature: 25 degC, pressure: 1 bar}
  feed:    {kind: pump, pressure: 30 bar}
  bought:  {kind: supply, composition: {CO2: 1}, temperature: 25 degC, pressure: 30 bar}
  carbon:  {kind: store, contents: {CO2: 1}, temperature: 25 degC, pressure: 30 bar}
  oxygen:  {kind: store, contents: {O2: 1}, temperature: 25 degC, pressure: 30 bar}
  stack:   {kind: electrolyser, energy_use: 52 kWh/kg, temperature: 60 degC, pressure: 30 bar}
  dryh:    {kind: condenser, temperature: 30 degC}
  blend:   {kind: blend, ratio: {H2: 4, CO2: 1}, let_down: true}
  reactor: {kind: methanation-reactor, temperature: 320 degC}
  knock:   {kind: condenser, temperature: 30 degC, pressure_drop: 0.5 bar}
  fuel:    {kind: store, contents: {CH4: 1}, temperature: 30 degC, pressure: 29 bar}
  letdown: {kind: valve, pressure: 1.2 bar}
  o2down:  {kind: valve, pressure: 1.2 bar}
  moddown: {kind: valve, pressure: 1.2 bar}
  burner:  {kind: burner, excess: 2 %, flue_temperature: 1400 degC, model: complete}
  boiler:  {kind: cooler, temperature: 150 degC, pressure_drop: 0.05 bar}
  wheel:   {kind: heat-engine, share_of_carnot: 60 %}
  rain:    {kind: condenser, temperature: 30 degC, pressure_drop: 0.05 bar}
  capture: {kind: splitter, shares: {back: 98 %, stackgas: rest}}
  co2press: {kind: compressor, pressure: 30 bar, stages: 4, intercool: 30 degC, aftercool: 30 degC}
  town:    {kind: product}
  stackgas: {kind: vent}
lines:
  - sun.light -> field.light
  - field.power -> board.supply
  - board.feed -> feed.power
  - board.co2press -> co2press.power
  - board.rest -> stack.power
  - water.draw -> feed -> stack.water
  - bought -> carbon.make_up
  - stack.hydrogen -> dryh -> blend.main
  - stack.oxygen -> oxygen.returns
  - carbon.draw -> blend.trim
  - blend -> reactor -> knock -> fuel.returns
  - fuel.rest -> letdown -> burner.fuel
  - oxygen.draw -> o2down -> burner.oxidiser
  - carbon.moderate -> moddown -> burner.moderator
  - burner.flue -> boiler -> rain -> capture
  - boiler.heat -> wheel.heat
  - wheel.power -> town
  - capture.back -> co2press -> carbon.returns
  - capture.stackgas -> stackgas
  - dryh.liquid -> water.returns
  - knock.liquid -> water.returns
  - rain.liquid -> water.returns
  - co2press.condensate -> water.returns
"""

# everything that can be bought: power, heat, cold, matter; no sunlight
BOUGHT = """
title: Bought from outside (invented)
components: [H2, N2, H2O, CH4]
equipment:
  gas:   {kind: supply, composition: {CH4: 90 %, N2: rest}, temperature: 25 degC, pressure: 2 bar,
           flow: 10 mol/s}
  press: {kind: compressor, pressure: 6 bar, stages: 1}
  warm:  {kind: heater, temperature: 400 degC}
  chill: {kind: cooler, temperature: -20 degC}
  town:  {kind: product}
lines:
  - gas -> press -> warm -> chill -> town
"""

# Methane of a grid's power; behind the reactor all but most of the methane is thrown away.
PARTED = """
title: Methane of bought power, parted once (invented)
components: [H2, O2, N2, H2O, CO, CO2, CH4]
equipment:
  grid: {kind: grid, carbon_intensity: 40 g/kWh}
  water: {kind: supply, composition: {H2O: 1}, temperature: 25 degC, pressure: 10 bar}
  stack: {kind: electrolyser, energy_use: 50 kWh/kg, temperature: 60 degC, pressure: 10 bar,
          hydrogen: 100 kg/h}
  carbon: {kind: supply, composition: {CO2: 98 %, N2: rest}, temperature: 25 degC,
           pressure: 10 bar, origin: fossil, carbon_intensity: 20 g/kg}
  blend: {kind: blend, ratio: {H2: 4, CO2: 1}}
  warm: {kind: heater, temperature: 250 degC}
  make: {kind: methanation-reactor, temperature: 300 degC}
  dry: {kind: condenser, temperature: 30 degC}
  part: {kind: separator, recovery: {CH4: 95 %}}
  town: {kind: product}
  flare: {kind: vent}
  sky: {kind: vent}
lines:
  - grid.power -> stack.power
  - grid.power -> warm.power
  - water -> stack.water
  - stack.hydrogen -> blend.main
  - stack.oxygen -> sky
  - carbon -> blend.trim
  - blend -> warm -> make -> dry -> part
  - part.kept -> town
  - part.passed -> flare
"""


@cache
def _solved(text: str, overrides: tuple[tuple[str, str], ...]) -> Solution:
    return solve_flowsheet(read_text(text, dict(overrides)))


def solved(text: str, **overrides: str) -> Solution:
    """Return the solution of a flowsheet text; overrides are knobs."""
    return _solved(text, tuple(sorted(overrides.items())))


def one_line(composition: str, temperature: str, pressure: str, components: str) -> Solution:
    """Return the solution of a supply that flows into a vent."""
    return solved(
        f"""
components: [{components}]
equipment:
  gas:  {{kind: supply, composition: {{{composition}}}, temperature: {temperature},
           pressure: {pressure}, flow: 1 mol/s}}
  sky:  {{kind: vent}}
lines:
  - gas -> sky
"""
    )

"""Small plants with heat networks; all invented."""

# Methane from steam electrolysis: what condenses and what the reactor gives off raises the steam.
STEAM_METHANE = """\
title: Methane by steam electrolysis, heat recovered (invented)
components: [H2, O2, N2, H2O, CO, CO2, CH4]
knobs: {hot: 300 degC, gap: 10 K}
equipment:
  sun:        {kind: sunlight, irradiance: 800 W/m2, aperture: 25000 m2}
  field:      {kind: pv-field, efficiency: 20 %}
  board:      {kind: switchboard}
  water:      {kind: store, contents: {H2O: 1}, temperature: 25 degC, pressure: 1 bar}
  feed:       {kind: pump, pressure: 10.5 bar}
  raise:      {kind: heater, temperature: 800 degC, pressure_drop: 0.5 bar}
  stack:
    kind: electrolyser
    model: solid-oxide
    solid_oxide: {conversion: 80 %, thermoneutral: true}
    temperature: 800 degC
    pressure: 10 bar
    rectifier: 97 %
    auxiliaries: 2 %
  o2-cooler:  {kind: cooler, temperature: 40 degC}
  h2-cooler:  {kind: condenser, temperature: 30 degC, pressure_drop: 0.1 bar}
  bought:     {kind: supply, composition: {CO2: 1}, temperature: 25 degC, pressure: 10 bar}
  blend:      {kind: blend, ratio: {H2: 4, CO2: 1}}
  preheat:    {kind: heater, temperature: 250 degC, pressure_drop: 0.2 bar}
  reactor:    {kind: methanation-reactor, temperature: $hot, pressure_drop: 0.3 bar}
  knock:      {kind: condenser, temperature: 30 degC, pressure_drop: 0.1 bar}
  warmth:     {kind: heat-network, approach: $gap}
  membrane:   {kind: separator, recovery: {CH4: 97 %}, work: 20 kJ/mol}
  back:       {kind: splitter, shares: {recycle: rest, purge: 1 %}}
  circulator: {kind: compressor, pressure: 9.9 bar, stages: 1}
  press:      {kind: compressor, pressure: 80 bar, aftercool: 35 degC}
  village:    {kind: product}
lines:
  - sun -> field -> board
  - board.feed -> feed.power
  - board.membrane -> membrane.power
  - board.circulator -> circulator.power
  - board.press -> press.power
  - board.heat -> warmth.shortage
  - board.rest -> stack.power
  - water.draw -> feed -> raise -> stack.water
  - stack.hydrogen -> h2-cooler -> blend.main
  - stack.oxygen -> o2-cooler
  - bought -> blend.trim
  - blend -> preheat -> reactor -> knock -> membrane -> back
  - back.recycle -> circulator -> blend.main
  - membrane.kept -> press -> village
  - o2-cooler.heat -> warmth.supply
  - h2-cooler.heat -> warmth.supply
  - reactor.heat -> warmth.supply
  - knock.heat -> warmth.supply
  - warmth.raise -> raise.heat
  - warmth.preheat -> preheat.heat
  - h2-cooler.liquid -> water.returns
  - knock.liquid -> water.returns
"""

GIVES = ("o2-cooler", "h2-cooler", "reactor", "knock")


def without_recovery(text=STEAM_METHANE):
    """The same plant in which nothing gives its heat to anybody: all heat is electric."""
    lines = text.splitlines(keepends=True)
    return (
        "".join(line for line in lines if not line.endswith(".heat -> warmth.supply\n"))
        .replace("  - warmth.raise", "  - idle.heat -> warmth.supply\n  - warmth.raise")
        .replace(
            "lines:\n",
            "  none:  {kind: supply, composition: {N2: 1}, temperature: 30 degC, pressure: 1 bar,"
            " flow: 1 mmol/s}\n"
            "  idle:  {kind: cooler, temperature: 28 degC}\n"
            "lines:\n  - none -> idle\n",
        )
    )


# Heat of a hot gas for a cold one, what is missing from a second network, what is left to an engine
# that helps to drive the plant.
TWO_NETWORKS = """\
components: [H2, O2, N2, H2O, CO2]
knobs: {warm: 450 degC}
equipment:
  grid:    {kind: grid}
  board:   {kind: switchboard}
  flue:
    kind: supply
    composition: {N2: 80 %, H2O: rest}
    temperature: 400 degC
    pressure: 2 bar
    flow: 5 mol/s
  cool:    {kind: cooler, temperature: 40 degC}
  fire:
    kind: supply
    composition: {N2: 1}
    temperature: 900 degC
    pressure: 2 bar
    flow: 9 mol/s
  chill:   {kind: cooler, temperature: 300 degC}
  cold:
    kind: supply
    composition: {N2: 60 %, H2O: rest}
    temperature: 150 degC
    pressure: 4 bar
    flow: 4 mol/s
  warm:    {kind: heater, temperature: $warm}
  press:   {kind: compressor, pressure: 8 bar, stages: 1}
  low:     {kind: heat-network}
  high:    {kind: heat-network}
  wheel:   {kind: heat-engine, share_of_carnot: 50 %}
  town:    {kind: product}
lines:
  - flue -> cool
  - fire -> chill
  - cold -> warm -> press -> town
  - cool.heat -> low.supply
  - chill.heat -> high.supply
  - low.warm -> warm.heat
  - high.help -> low.shortage
  - low.rest -> wheel.heat
  - wheel.power -> board.supply
  - grid.power -> board.shortage
  - board.press -> press.power
  - board.rest -> grid.surplus
"""

# Two gases give heat off, two need it; what is missing is electric.  Heat capacity flows stand as
# 2 : 4 : 3 : 2.6, as in Linnhoff and Flower, AIChE J. 24 (1978) 633, and so does the pinch.
TWO_HEATERS = """\
title: Two heaters and two coolers on one network (invented)
components: [N2]
equipment:
  sun:   {kind: sunlight, irradiance: 800 W/m2, aperture: 5000 m2}
  field: {kind: pv-field, efficiency: 20 %}
  board: {kind: switchboard}
  h1: {kind: supply, composition: {N2: 1}, temperature: 180 degC, pressure: 1.2 bar, flow: 10 mol/s}
  h2: {kind: supply, composition: {N2: 1}, temperature: 150 degC, pressure: 1.2 bar, flow: 20 mol/s}
  c1: {kind: supply, composition: {N2: 1}, temperature: 60 degC, pressure: 1.2 bar, flow: 15 mol/s}
  c2: {kind: supply, composition: {N2: 1}, temperature: 30 degC, pressure: 1.2 bar, flow: 13 mol/s}
  k1: {kind: cooler, temperature: 40 degC}
  k2: {kind: cooler, temperature: 40 degC}
  w1: {kind: heater, temperature: 180 degC}
  w2: {kind: heater, temperature: 130 degC}
  net: {kind: heat-network}
  out: {kind: vent}
  town: {kind: product}
lines:
  - sun -> field -> board.supply
  - board.heat -> net.shortage
  - board.rest -> town
  - h1 -> k1 -> out
  - h2 -> k2 -> out
  - c1 -> w1 -> out
  - c2 -> w2 -> out
  - k1.heat -> net.supply
  - k2.heat -> net.supply
  - net.one -> w1.heat
  - net.two -> w2.heat
"""

"""Small flowsheets for the solver's tests, as text; all scenarios are invented."""

from __future__ import annotations

SHARED = """
  sun:     {kind: sunlight, irradiance: 800 W/m2, aperture: 10000 m2}
  field:   {kind: pv-field, efficiency: 20 %}
  board:   {kind: switchboard}
  water:   {kind: store, contents: {H2O: 1}, temperature: 25 degC, pressure: 1 bar}
  feed:    {kind: pump, pressure: 20 bar}
  stack:   {kind: electrolyser, energy_use: 50 kWh/kg, temperature: 60 degC, pressure: 20 bar}
  dry:     {kind: condenser, temperature: 30 degC}
"""

SHARED_LINES = """
  - sun.light -> field.light
  - field.power -> board.supply
  - board.feed -> feed.power
  - board.rest -> stack.power
  - water.draw -> feed -> stack.water
  - dry.liquid -> water.returns
"""


def methane_loop(
    *,
    purge: str = "1 %",
    inert: str = "0.1 %",
    recycle: bool = True,
    holds: str = "",
    extra: str = "",
) -> str:
    """Hydrogen and bought CO2 to methane, unconverted gas back, a purge."""
    return f"""
title: Methane loop (invented)
components: [H2, O2, N2, H2O, CO, CO2, CH4]
equipment:{SHARED}
  bought:
    kind: supply
    composition: {{N2: {inert}, CO2: rest}}
    temperature: 25 degC
    pressure: 20 bar
  blend:   {{kind: blend, ratio: {{H2: 4, CO2: 1}}, let_down: true}}
  reactor: {{kind: methanation-reactor, temperature: 320 degC}}
  knock:   {{kind: condenser, temperature: 30 degC, pressure_drop: 0.5 bar}}
  sieve:   {{kind: separator, recovery: {{CH4: 97 %}}}}
  back:    {{kind: splitter, shares: {{recycle: rest, purge: {purge}}}}}
  blower:  {{kind: compressor, pressure: 20 bar, stages: 1}}
  fuel:    {{kind: product}}
  flare:   {{kind: vent}}
{extra}
lines:{SHARED_LINES}
  - board.blower -> blower.power
  - stack.hydrogen -> dry -> blend.main
  - bought -> blend.trim
  - blend -> reactor -> knock -> sieve -> back
  - back.recycle -> blower -> {"blend.main" if recycle else "flare"}
  - back.purge -> flare
  - sieve.kept -> fuel
  - knock.liquid -> water.returns
{holds}
"""


def hydrogen_plant(*, equipment: str = "", lines: str = "", holds: str = "") -> str:
    """Hydrogen from sunlight, to be continued by `lines`."""
    return f"""
title: Hydrogen plant (invented)
equipment:{SHARED}{equipment}
lines:{SHARED_LINES}{lines}
{holds}
"""


OUTER_LOOP = [
    "  outer: {kind: splitter, shares: {back: 30 %, on: rest}}",
    "  first: {kind: mixer}",
    "  lift: {kind: compressor, pressure: 10 bar, stages: 1}",
]
OUTER_LINES = ["  - outer.back -> lift -> first", "  - outer.on -> end"]


def chain_of_loops(count: int, *, joined: bool = False) -> str:
    """Many mixers with a recycle each, one after the other; with an outer recycle if joined."""
    pieces = [
        (
            "  start: {kind: supply, composition: {H2: 75 %, CO2: rest}, temperature: 25 degC, "
            "pressure: 10 bar, flow: 10 mol/s}"
        ),
        "  end: {kind: product}",
    ]
    lines = []
    before = "start"
    for i in range(count):
        pieces += [
            f"  m{i}: {{kind: mixer}}",
            f"  h{i}: {{kind: cooler, temperature: {40 + i % 7} degC, pressure_drop: 0.001 bar}}",
            f"  s{i}: {{kind: splitter, shares: {{back: {20 + i % 50} %, on: rest}}}}",
            f"  c{i}: {{kind: compressor, pressure: 10 bar, stages: 1}}",
        ]
        lines += [
            f"  - {before} -> m{i}",
            f"  - m{i} -> h{i} -> s{i}",
            f"  - s{i}.back -> c{i} -> m{i}",
        ]
        before = f"s{i}.on"
    if joined:
        pieces += OUTER_LOOP
        lines[0] = "  - start -> first"
        lines += ["  - first -> m0", f"  - {before} -> outer", *OUTER_LINES]
    else:
        lines.append(f"  - {before} -> end")
    head = ["title: Loops (invented)", "components: [H2, CO2, H2O]"]
    return "\n".join([*head, "equipment:", *pieces, "lines:", *lines])


def wet_gas_loop(*, purge: str, water: str, kept: str) -> str:
    """Hydrogen round a membrane; its water hardly gets out before it condenses."""
    return f"""
title: Wet gas round a membrane (invented)
components: [H2, H2O]
equipment:
  made:
    kind: supply
    composition: {{H2O: {water}, H2: rest}}
    temperature: 40 degC
    pressure: 5 bar
    flow: 10 mol/s
  meet:   {{kind: mixer}}
  sieve:  {{kind: separator, recovery: {{H2: {kept}}}}}
  knock:  {{kind: condenser, temperature: 30 degC, pressure_drop: 0.1 bar}}
  back:   {{kind: splitter, shares: {{onward: rest, purge: {purge}}}}}
  blower: {{kind: compressor, pressure: 5 bar, stages: 1}}
  used:   {{kind: product}}
  drain:  {{kind: vent}}
  flare:  {{kind: vent}}
lines:
  - made -> meet -> sieve
  - sieve.kept -> used
  - sieve.passed -> knock -> back
  - knock.liquid -> drain
  - back.onward -> blower -> meet
  - back.purge -> flare
"""

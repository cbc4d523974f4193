"""Plants joined at random: solved and balanced, or refused with a named reason.

Every required inlet gets a line, so that most of them get past the reader and the pressure pass.
All pressures are the same, or few would.  They make no sense as plants; that is the point.
"""

from hypothesis import given, settings
from hypothesis import strategies as st

from tests.flowsheet.test_fuzz import answer, check

GAS = "temperature: 25 degC, pressure: 12 bar"
FRESH = "{H2: 75 %, CO2: 24 %, N2: rest}"
PIECES = {
    "gas": f"{{kind: supply, composition: {FRESH}, flow: 5 mol/s, {GAS}}}",
    "wet": f"{{kind: supply, composition: {{H2O: 1}}, {GAS}}}",
    "air": f"{{kind: supply, composition: {{N2: 79 %, O2: rest}}, {GAS}}}",
    "mix": "{kind: mixer, let_down: true}",
    "split": "{kind: splitter, shares: {a: 30 %, b: rest}}",
    "tank": f"{{kind: store, contents: {{CO2: 1}}, {GAS}}}",
    "well": f"{{kind: store, contents: {{H2O: 1}}, {GAS}}}",
    "pure": f"{{kind: store, contents: {{CO2: 1}}, pure: true, {GAS}}}",
    "blend": "{kind: blend, ratio: {H2: 4, CO2: 1}, let_down: true}",
    "react": "{kind: methanation-reactor, temperature: 320 degC}",
    "shift": "{kind: shift-reactor, temperature: 900 degC}",
    "dry": "{kind: condenser, temperature: 30 degC}",
    "press": "{kind: compressor, pressure: 12 bar}",
    "feed": "{kind: pump, pressure: 12 bar}",
    "valve": "{kind: valve, pressure: 12 bar}",
    "expand": "{kind: expander, pressure: 12 bar}",
    "warm": "{kind: heater, temperature: 90 degC}",
    "cool": "{kind: cooler, temperature: 40 degC}",
    "sieve": "{kind: separator, recovery: {CH4: 90 %}}",
    "fire": "{kind: burner, excess: 10 %}",
    "engine": "{kind: engine, efficiency: 40 % LHV, temperature: 120 degC}",
    "stack": "{kind: electrolyser, energy_use: 52 kWh/kg, temperature: 60 degC, pressure: 12 bar}",
    "sun": "{kind: sunlight, irradiance: 800 W/m2, aperture: 9000 m2}",
    "field": "{kind: pv-field, efficiency: 20 %}",
    "board": "{kind: switchboard}",
    "grid": "{kind: grid}",
    "web": "{kind: heat-network}",
    "wheel": "{kind: heat-engine, share_of_carnot: 50 %}",
    "town": "{kind: product}",
}
TAKERS = (
    "mix",
    "split",
    "tank",
    "well",
    "pure",
    "blend",
    "react",
    "shift",
    "dry",
    "press",
    "feed",
    "valve",
    "expand",
    "warm",
    "cool",
    "sieve",
    "fire",
    "engine",
)
CALLS = {"blend": "trim", "fire": "oxidiser", "engine": "oxidiser", "stack": "water"}
OUTLETS = {
    "split": ("split.a", "split.b"),
    "tank": ("tank.rest",),
    "well": ("well.rest",),
    "pure": ("pure.rest",),
    "dry": ("dry", "dry.liquid"),
    "sieve": ("sieve", "sieve.kept"),
    "engine": ("engine.flue",),
    "stack": ("stack", "stack.oxygen"),
}
POWERED = ("press", "feed", "warm", "shift", "react", "sieve")
GIVES_HEAT = ("react", "cool", "fire", "engine", "stack", "dry", "press")
NEEDS_HEAT = ("warm", "shift")


def joined(random):
    """The text of a plant whose lines are drawn by `random`."""
    names = ["gas", *random.sample([*TAKERS, "stack"], random.randint(2, 9))]
    outlets = [outlet for name in names for outlet in OUTLETS.get(name, (name,))]
    inlets = [name for name in names if name in TAKERS] + ["mix"] * ("mix" in names)
    random.shuffle(outlets)
    random.shuffle(inlets)
    lines = [f"{outlets.pop()} -> {inlet}" for inlet in inlets if outlets]
    for name in names:
        if name in CALLS:
            server = random.choice(("tank", "well", "pure", "wet", "air"))
            draw = server if server in ("wet", "air") else f"{server}.for-{name}"
            lines.append(f"{draw} -> {name}.{CALLS[name]}")
    lines += [f"{outlet} -> town" for outlet in outlets if random.random() < 0.6]
    lines += ["sun -> field -> board", "board.rest -> stack"] if "stack" in names else []
    source = "board" if "stack" in names else "grid"
    lines += [*_power(random, names, source), *_heat(random, names)]
    random.shuffle(lines)
    pieces = "".join(f"  {name}: {text}\n" for name, text in PIECES.items())
    return f"equipment:\n{pieces}lines:\n" + "".join(f"  - {line}\n" for line in lines)


def _power(random, names, source):
    for name in POWERED:
        if name in names and random.random() < 0.4:
            yield (
                f"{source}.for-{name} -> {name}.power"
                if source == "board"
                else f"grid -> {name}.power"
            )


def _heat(random, names):
    giving = [name for name in GIVES_HEAT if name in names and random.random() < 0.4]
    if not giving:
        return
    yield from (f"{name}.heat -> web" for name in giving)
    yield from ("web.rest -> wheel", "wheel -> town")
    yield from (f"web.for-{name} -> {name}.heat" for name in NEEDS_HEAT if name in names)


@settings(max_examples=100)
@given(st.randoms(use_true_random=False))
def test_any_net_is_solved_or_refused_for_a_reason(random):
    check(answer(joined(random)))


def test_some_of_them_solve():
    """Or the test above would say little."""
    from random import Random

    found = [answer(joined(Random(number))) for number in range(60)]
    assert sum(not isinstance(answer_, str) for answer_ in found) >= 3
    assert len({answer_ for answer_ in found if isinstance(answer_, str)}) >= 4

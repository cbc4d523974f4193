"""Whole small files, spoilt at random: read and solved, or refused with a named reason.

Derandomised (see `conftest.py`): the same files on every run.  Anything but the three refusals, a
number that is not finite, or an unbalanced answer is a fault of ours.
"""

import math
import re

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from chainflow.basis.faults import FlowsheetFault, NotSolved, UsageFault
from chainflow.equipment.ports import rate_of
from chainflow.flowsheet.building import read_text
from chainflow.solver.solve import solve_flowsheet
from chainflow.thermo.streams import Stream

PLANTS = (
    """\
knobs: {hot: 320 degC}
components: [H2, N2, H2O, CO, CO2, CH4]
equipment:
  gas: {kind: supply, composition: {H2: 80 %, CO2: rest},
        temperature: 25 degC, pressure: 12 bar, flow: 5 mol/s}
  mix: {kind: mixer}
  reactor: {kind: methanation-reactor, temperature: $hot}
  dry: {kind: condenser, temperature: 30 degC}
  split: {kind: splitter, shares: {recycle: 80 %, out: rest}}
  town: {kind: product}
lines:
  - gas -> mix -> reactor -> dry -> split
  - split.recycle -> mix
  - split.out -> town
""",
    """\
equipment:
  sun: {kind: sunlight, irradiance: 850 W/m2, aperture: 600 m2}
  field: {kind: pv-field, efficiency: 20 %}
  board: {kind: switchboard}
  tank: {kind: store, contents: {H2O: 1}, temperature: 25 degC, pressure: 1 bar}
  feed: {kind: pump, pressure: 30 bar}
  stack: {kind: electrolyser, energy_use: 52 kWh/kg, temperature: 60 degC, pressure: 30 bar}
  dry: {kind: condenser, temperature: 30 degC}
  press: {kind: compressor, pressure: 200 bar, aftercool: 30 degC}
  town: {kind: product}
lines:
  - sun -> field -> board
  - board.feed -> feed.power
  - board.press -> press.power
  - board.rest -> stack
  - tank.draw -> feed -> stack.water
  - stack -> dry -> press -> town
  - dry.liquid -> tank.returns
""",
    """\
components: [H2, O2, N2, H2O, CO, CO2, CH4]
equipment:
  fuel: {kind: supply, composition: {CH4: 1}, temperature: 25 degC, pressure: 1.2 bar,
         flow: 1 mol/s}
  air: {kind: supply, composition: {N2: 79 %, O2: rest}, temperature: 25 degC, pressure: 1.2 bar}
  fire: {kind: burner, excess: 10 %}
  boiler: {kind: cooler, temperature: 150 degC}
  wheel: {kind: heat-engine, share_of_carnot: 60 %}
  flues: {kind: splitter, shares: {back: 30 %, out: rest}}
  town: {kind: product}
lines:
  - fuel -> fire
  - air -> fire.oxidiser
  - fire -> boiler -> flues
  - flues.back -> fire.moderator
  - flues.out -> town
  - boiler.heat -> wheel
  - wheel -> town
holds:
  - {hold: fire.flue.temperature, at: 1400 degC, by: flues.shares.back, within: [1 %, 90 %]}
""",
)
WORD = re.compile(r"[A-Za-z0-9_.%$/-]+")
NUMBER = re.compile(r"(?<![A-Za-z0-9.])\d+(?:\.\d+)?(?= |,|\})")
SPARE = (
    "0",
    "1",
    "-1",
    "1e300",
    "1e-300",
    "0 %",
    "100 %",
    "50 %",
    "rest",
    "true",
    "null",
    "[]",
    "{}",
    "$hot",
    "30 bar",
    "0.01 bar",
    "1e6 bar",
    "25 degC",
    "-250 degC",
    "3000 degC",
    "1 mol/s",
    "0 mol/s",
    "1e12 mol/s",
    "kind",
    "mixer",
    "splitter",
    "vent",
    "store",
    "H2O",
    "O2",
    "He",
    "power",
    "heat",
    "liquid",
    "outlet",
    "inlet",
    "returns",
    "draw",
    "->",
    ":",
    "- ",
    "#",
    "&a",
    "*a",
    "'",
    "flow",
    "temperature",
    "auto",
    "9" * 400,
)


def answer(text, overrides=None):
    """What comes of a text: a solution, or the name of its refusal."""
    try:
        return solve_flowsheet(read_text(text, overrides))
    except FlowsheetFault as problem:
        assert all(fault.text.isprintable() and len(fault.text) < 1200 for fault in problem.faults)
        assert all(fault.line is None or fault.line >= 1 for fault in problem.faults)
        return "fault"
    except UsageFault as problem:
        assert str(problem).isprintable()
        return "usage"
    except NotSolved as problem:
        assert problem.code
        assert str(problem).isprintable()
        return problem.code


def check(found):
    """An answer is finite and balanced."""
    if isinstance(found, str):
        return
    assert found.balance.elements <= 1e-9
    assert found.balance.energy <= 1e-9
    for stream in found.streams:
        flow = stream.flow
        if isinstance(flow, Stream):
            assert (flow.flows >= 0.0).all()
            numbers = [flow.enthalpy, flow.temperature, flow.total]
        else:
            numbers = [rate_of(flow)]
        assert all(math.isfinite(number) for number in numbers)


@pytest.mark.parametrize("plant", PLANTS)
def test_the_plants_solve_as_they_are(plant):
    found = answer(plant)
    assert not isinstance(found, str)
    check(found)


@st.composite
def spoilt(draw):
    """A plant in which a few words are others, swapped or gone."""
    text = draw(st.sampled_from(PLANTS))
    for _ in range(draw(st.integers(1, 3))):
        words = list(WORD.finditer(text))
        if not words:
            break
        place = draw(st.sampled_from(words))
        other = draw(
            st.sampled_from([word[0] for word in words]) | st.sampled_from(SPARE) | st.just("")
        )
        text = text[: place.start()] + other + text[place.end() :]
    return text


@settings(max_examples=120)
@given(spoilt())
def test_a_spoilt_word(text):
    check(answer(text))


@st.composite
def other_numbers(draw):
    """A plant in which a few numbers are much smaller, larger, zero or negative."""
    text = draw(st.sampled_from(PLANTS))
    for _ in range(draw(st.integers(1, 3))):
        number = draw(st.sampled_from(list(NUMBER.finditer(text))))
        factor = draw(st.sampled_from((0.0, 0.01, 0.3, 0.7, 1.2, 2.0, 5.0, 20.0, 300.0, -1.0)))
        text = f"{text[: number.start()]}{factor * float(number[0]):.6g}{text[number.end() :]}"
    return text


@settings(max_examples=100)
@given(other_numbers())
def test_other_numbers(text):
    check(answer(text))


@st.composite
def shuffled_lines(draw):
    """A plant whose rows are dropped, doubled or moved."""
    rows = draw(st.sampled_from(PLANTS)).splitlines()
    for _ in range(draw(st.integers(1, 3))):
        at = draw(st.integers(0, len(rows) - 1))
        row = rows.pop(at)
        copies = draw(st.integers(0, 2))
        to = draw(st.integers(0, len(rows)))
        rows[to:to] = [row] * copies
        if not rows:
            break
    return "\n".join(rows) + "\n"


@settings(max_examples=100)
@given(shuffled_lines())
def test_rows_dropped_doubled_or_moved(text):
    check(answer(text))


@settings(max_examples=100)
@given(st.text(max_size=200))
def test_any_text_is_refused(text):
    assert answer(text) == "fault"


@settings(max_examples=120)
@given(
    st.sampled_from(
        [
            "hot",
            "gas.flow",
            "gas.composition.H2",
            "reactor.temperature",
            "split.shares.recycle",
            "dry.temperature",
            "gas.pressure",
            "dry.pressure_drop",
            "reactor.approach",
            "gas.kind",
            "x",
            "x.y",
            "reactor",
            "gas.",
        ]
    ),
    st.sampled_from(SPARE) | st.text(max_size=12),
)
def test_any_set(address, text):
    check(answer(PLANTS[0], {address: text}))

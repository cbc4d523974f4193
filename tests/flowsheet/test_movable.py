"""Which numbers of a file can be moved, and where its knobs act."""

import pytest

from chainflow.flowsheet.addresses import AddressError
from chainflow.flowsheet.building import read_text
from chainflow.flowsheet.movable import is_allowed, lever, levers, moved

PLANT = """
ambient: $air
components: [H2, N2]
knobs: {warm: 80 degC, hot: $warm, trace: 1 %, air: 20 degC, aim: 90 degC, word: gas, idle: 5 bar}
equipment:
  gas:   {kind: supply, composition: {N2: $trace, H2: rest}, temperature: 25 degC, pressure: 2 bar,
          flow: 1 mol/s}
  fixed: {kind: supply, composition: {N2: 20 %, H2: 80 %}, temperature: 25 degC, pressure: 2 bar,
          flow: 1 mol/s}
  heat:  {kind: heater, temperature: $hot, pressure_drop: 0.1 bar}
  more:  {kind: heater, temperature: $warm}
  out:   {kind: product}
lines:
  - gas -> heat -> more -> out
  - fixed -> out
holds:
  - {hold: more.outlet.temperature, at: $aim, by: more.temperature, within: [30 degC, 200 degC]}
"""


@pytest.fixture(scope="module")
def flowsheet():
    return read_text(PLANT)


def test_where_knobs_act(flowsheet):
    places = flowsheet.knob_places
    assert places["hot"] == ("heat.temperature",)
    assert places["warm"] == ("heat.temperature", "more.temperature")
    assert places["aim"] == ("holds.0.at",)
    assert places["air"] == ("ambient",)
    assert places["idle"] == ()


def test_levers(flowsheet):
    found = {one.name: one for one in levers(flowsheet)}
    assert found["trace"].value == pytest.approx(0.01)
    assert (found["aim"].holds, found["aim"].unit) == ((0,), "K")
    assert found["warm"].elsewhere == ("more.temperature",)  # held: it is no setting to be moved
    assert "air" not in found
    assert "more.temperature" not in found
    assert "heat.temperature" not in found  # the knob sets it
    assert {"heat.pressure_drop", "gas.flow", "gas.temperature"} <= set(found)


def test_moving_keeps_the_rest(flowsheet):
    other = moved(flowsheet, lever(flowsheet, "hot"), 10.0)
    assert other.equipment["heat"].temperature == pytest.approx(363.15)
    assert other.equipment["more"] is flowsheet.equipment["more"]
    assert moved(flowsheet, lever(flowsheet, "aim"), 1.0).holds[0].at == pytest.approx(364.15)


def test_what_may_move(flowsheet):
    assert is_allowed(flowsheet, lever(flowsheet, "trace"), 1e-3)
    assert not is_allowed(flowsheet, lever(flowsheet, "trace"), -0.02)  # below nothing
    fixed = lever(flowsheet, "fixed.composition.N2")
    assert not is_allowed(flowsheet, fixed, 1e-3)  # the shares have no rest that follows


@pytest.mark.parametrize("name", ["nobody", "air", "idle", "heat.temprature", "none.at"])
def test_no_lever(flowsheet, name):
    with pytest.raises(AddressError):
        lever(flowsheet, name)

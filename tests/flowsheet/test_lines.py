"""Lines: chains cut into single lines, ports found, contents, counts and who sets the amount."""

import pytest

from chainflow.basis.faults import FlowsheetFault
from chainflow.equipment.ports import Role
from chainflow.flowsheet.building import read_text
from chainflow.flowsheet.lines import cut_chain

GAS = "{kind: supply, composition: {H2: 80 %, CO2: rest}, temperature: 25 degC, pressure: 12 bar"
STACK = "{kind: electrolyser, energy_use: 52 kWh/kg, temperature: 60 degC, pressure: 30 bar"
PIECES = f"""
equipment:
  sun: {{kind: sunlight, irradiance: 850 W/m2, aperture: 600 m2}}
  field: {{kind: pv-field, efficiency: 20 %}}
  board: {{kind: switchboard}}
  gas: {GAS}, flow: 5 mol/s}}
  served: {GAS}}}
  mix: {{kind: mixer}}
  split: {{kind: splitter, shares: {{a: 30 %, b: rest}}}}
  twice: {{kind: splitter, shares: {{c: 30 %, d: rest}}}}
  tank: {{kind: store, contents: {{H2O: 1}}, temperature: 25 degC, pressure: 1 bar}}
  feed: {{kind: pump, pressure: 30 bar}}
  warm: {{kind: heater, temperature: 80 degC}}
  press: {{kind: compressor, pressure: 30 bar}}
  dry: {{kind: condenser, temperature: 30 degC}}
  stack: {STACK}}}
  wanted: {STACK}, hydrogen: 1 kg/h}}
  grid: {{kind: grid}}
  hot: {{kind: cooler, temperature: 100 degC}}
  web: {{kind: heat-network}}
  town: {{kind: product}}
  other: {{kind: vent}}
lines:
"""


FIRST = PIECES.count("\n") + 1  # where the first line stands


def flowsheet(*lines):
    return read_text(PIECES + "".join(f"  - {line}\n" for line in lines))


def lines_of(*lines):
    return [f"{line.start} -> {line.end}" for line in flowsheet(*lines).lines]


def codes_of(*lines):
    with pytest.raises(FlowsheetFault) as caught:
        flowsheet(*lines)
    return [fault.code for fault in caught.value.faults]


def who_sets(*lines):
    """For each line whether the receiver sets its amount, and what it carries."""
    return {f"{li.start} -> {li.end}": (li.called, li.content) for li in flowsheet(*lines).lines}


# ---------------------------------------------------------------------------------- chains
@pytest.mark.parametrize(
    ("text", "joints"),
    [
        ("a -> b", [("a", None, "b", None)]),
        ("a.x->b.y", [("a", "x", "b", "y")]),
        ("  a . x -> b", None),
        ("a -> b -> c", [("a", None, "b", None), ("b", None, "c", None)]),
        ("a.x -> b.y -> c.z", [("a", "x", "b", "y"), ("b", None, "c", "z")]),
        ("a-1.p_2 -> b", [("a-1", "p_2", "b", None)]),
        ("a => b", None),
        ("a -> B", None),
        ("-> b", None),
        ("a -> -> b", None),
        ("a", None),
        ("", None),
        ("a.b.c -> d", None),
    ],
)
def test_chains_are_cut_into_lines(text, joints):
    faults = []
    found = list(cut_chain(text, None, faults))
    if joints is None:
        assert found == []
        assert [fault.code for fault in faults] == ["bad-line"]
    else:
        assert [(j.source, j.outlet, j.target, j.inlet) for j in found] == joints
        assert faults == []


def test_main_ports_may_be_left_out():
    assert lines_of("gas -> dry -> press -> town") == [
        "gas.outlet -> dry.inlet",
        "dry.gas -> press.inlet",
        "press.outlet -> town.inlet",
    ]


def test_a_port_in_the_middle_is_where_the_chain_enters():
    got = lines_of(
        "sun -> field -> board", "board.rest -> stack -> town", "tank.draw -> feed -> stack.water"
    )
    assert got == [
        "sun.light -> field.light",
        "field.power -> board.supply",
        "board.rest -> stack.power",
        "stack.hydrogen -> town.inlet",
        "tank.draw -> feed.inlet",
        "feed.outlet -> stack.water",
    ]


def test_lines_keep_the_order_and_place_of_the_file():
    sheet = flowsheet("gas -> mix -> town", "sun -> field -> other")
    assert [line.number for line in sheet.lines] == [0, 1, 2, 3]
    assert [line.place.line for line in sheet.lines] == [FIRST, FIRST, FIRST + 1, FIRST + 1]


# -------------------------------------------------------------------------------- contents
def test_ports_for_anything_carry_what_arrives():
    got = who_sets(
        "gas -> split",
        "split.a -> town",
        "sun -> field -> twice",
        "twice.c -> town",
        "twice.d -> other",
    )
    assert {key: content for key, (_, content) in got.items()} == {
        "gas.outlet -> split.inlet": "material",
        "split.a -> town.inlet": "material",
        "sun.light -> field.light": "light",
        "field.power -> twice.inlet": "power",
        "twice.c -> town.inlet": "power",
        "twice.d -> other.inlet": "power",
    }


def test_content_passes_splitters_in_a_row_whatever_their_order():
    lines = ["twice.c -> town", "split.a -> twice", "sun -> field -> split"]
    got = who_sets(*lines)
    assert got["twice.c -> town.inlet"] == (False, "power")
    assert got["split.a -> twice.inlet"] == (False, "power")


def test_power_through_splitters_into_a_gas_inlet_is_a_fault():
    assert codes_of("sun -> field -> split", "split.a -> mix", "mix -> town") == ["wrong-content"]


# ---------------------------------------------------------------------------------- counts
def test_any_number_of_lines_where_many_are_taken():
    assert len(lines_of("gas -> split", "split.a -> mix", "split.b -> mix", "mix -> town")) == 4


def test_served_power_may_go_to_many_users_from_one_port():
    got = lines_of(
        "grid.power -> wanted.power",
        "tank.draw -> wanted.water",
        "grid.power -> press.power",
        "gas -> press -> town",
        "wanted -> town",
    )
    assert got.count("grid.power -> wanted.power") == 1
    assert "grid.power -> press.power" in got


def test_one_line_for_each_material_outlet_even_if_it_serves():
    assert codes_of(
        "tank.draw -> feed -> stack.water", "tank.draw -> wanted.water", "sun -> field -> stack"
    ) == ["two-lines-from-outlet"]


def test_every_draw_has_a_name_of_its_own():
    got = lines_of(
        "tank.one -> feed -> stack.water", "tank.two -> wanted.water", "sun -> field -> stack"
    )
    assert "tank.one -> feed.inlet" in got
    assert "tank.two -> wanted.water" in got


def test_a_second_line_at_an_inlet_is_a_fault_at_its_place():
    with pytest.raises(FlowsheetFault) as caught:
        flowsheet("gas -> split", "split.a -> warm", "split.b -> warm", "warm -> town")
    (fault,) = caught.value.faults
    assert (fault.code, fault.line) == ("two-lines-into-inlet", FIRST + 2)


# ------------------------------------------------------------------------------ who sets it
def test_a_call_goes_back_through_pump_and_heater_to_the_store():
    got = who_sets("sun -> field -> stack -> town", "tank.draw -> feed -> warm -> stack.water")
    called = [key for key, (is_called, _) in got.items() if is_called]
    assert called == [
        "tank.draw -> feed.inlet",
        "feed.outlet -> warm.inlet",
        "warm.outlet -> stack.water",
    ]


def test_side_outlets_of_called_equipment_offer():
    got = who_sets(
        "sun -> field -> stack -> town",
        "tank.draw -> dry -> feed -> stack.water",
        "dry.liquid -> other",
    )
    assert got["dry.liquid -> other.inlet"] == (False, "material")
    assert got["tank.draw -> dry.inlet"][0]


def test_an_electrolyser_takes_power_or_calls_for_it():
    takes = who_sets(
        "sun -> field -> board", "board.rest -> stack", "tank.draw -> stack.water", "stack -> town"
    )
    calls = who_sets("grid -> wanted", "tank.draw -> wanted.water", "wanted -> town")
    assert takes["board.rest -> stack.power"] == (False, "power")
    assert calls["grid.power -> wanted.power"] == (True, "power")


def test_a_supply_serves_or_offers():
    offers = who_sets("gas -> town")
    assert offers == {"gas.outlet -> town.inlet": (False, "material")}
    assert codes_of("served -> town") == ["serves-takes"]


def test_offered_heat_cannot_be_called_for():
    codes = codes_of("gas -> hot -> town", "hot.heat -> warm.heat", "served -> warm -> other")
    assert codes == ["offers-calls"]


def test_served_heat_can():
    got = who_sets("gas -> hot -> warm -> town", "hot.heat -> web", "web.warm -> warm.heat")
    assert got["web.warm -> warm.heat"] == (True, "heat")
    assert got["hot.heat -> web.supply"] == (False, "heat")


def test_a_call_through_a_mixer_or_reactor_is_none():
    """Only equipment with one material inlet and one main outlet lets a call pass."""
    lines = ["gas -> mix -> stack.water", "sun -> field -> stack -> town"]
    assert codes_of(*lines) == ["offers-calls"]


def test_who_sets_an_amount_is_a_matter_of_lines_not_of_their_order():
    lines = ["sun -> field -> stack -> town", "tank.draw -> feed -> warm -> stack.water"]
    assert who_sets(*lines) == who_sets(*lines[::-1])


def test_roles_know_their_side():
    assert [role.is_inlet for role in (Role.OFFERS, Role.SERVES, Role.TAKES, Role.CALLS)] == [
        False,
        False,
        True,
        True,
    ]

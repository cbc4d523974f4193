"""Holds as they are written: aimed, bounded by what the setting may be, and started anywhere."""

import pytest

from chainflow.basis.faults import FlowsheetFault
from chainflow.flowsheet.building import read_text
from chainflow.solver.lookup import value_at
from chainflow.solver.solve import solve_flowsheet

LOOP = """
components: [H2, N2, H2O, CO, CO2, CH4]
equipment:
  gas: {{kind: supply, composition: {{H2: 80 %, CO2: rest}}, temperature: 25 degC,
        pressure: 12 bar, flow: 5 mol/s}}
  mix: {{kind: mixer}}
  make: {{kind: reactor, temperature: 320 degC, reactions: [
         {{equation: CO2 + 4 H2 -> CH4 + 2 H2O, conversion: {{CO2: 50 %}}}}]}}
  dry: {{kind: condenser, temperature: 30 degC}}
  split: {{kind: splitter, shares: {shares}}}
  town: {{kind: product}}
  sky: {{kind: vent}}
lines:
  - gas -> mix -> make -> dry -> split
  - split.back -> mix
  - split.out -> town
holds:
  - {{hold: {hold}, at: {at}, by: {by}, within: [{within}]}}
"""


def text(hold, at, by, within, shares="{back: 50 %, out: rest}"):
    return LOOP.format(hold=hold, at=at, by=by, within=within, shares=shares)


def solved(*aim, **more):
    return solve_flowsheet(read_text(text(*aim, **more)))


def fault_of(*aim, **more):
    with pytest.raises(FlowsheetFault) as caught:
        read_text(text(*aim, **more))
    (fault,) = caught.value.faults
    return fault.text


RECYCLE = ("split.out.fraction.CH4", "60 %", "split.shares.back")


@pytest.mark.parametrize("start", ["50 %", "0 %", "90 %", "100 %"])
def test_the_start_of_the_setting_is_of_no_account(start):
    """A share of zero carries nothing at first, yet the hold may open it."""
    solution = solved(*RECYCLE, "0 %, 95 %", shares=f"{{back: {start}, out: rest}}")
    assert value_at(solution, "split.out.fraction.CH4") == pytest.approx(0.6, abs=1e-8)
    # by hand: 0.5 / (1 - r) / (2.5 + 0.5 / (1 - r)) = 0.6, some moisture and dissolved CO2 aside
    assert solution.holds[0].value == pytest.approx(1 - 0.5 / 3.75, abs=3e-3)


def test_a_start_outside_the_range_begins_at_its_end():
    solution = solved(*RECYCLE, "60 %, 90 %", shares="{back: 10 %, out: rest}")
    assert solution.holds[0].reached == pytest.approx(0.6, abs=1e-8)


def test_a_setting_deep_inside_a_list():
    aim = ("dry.gas.dry_fraction.CH4", "40 %", "make.reactions.0.conversion.CO2", "5 %, 95 %")
    solution = solved(*aim)
    assert value_at(solution, "dry.gas.dry_fraction.CH4") == pytest.approx(0.4, abs=1e-8)
    assert solution.holds[0].by == "make.reactions.0.conversion.CO2"


def test_a_flow_that_is_held_by_its_supply():
    # CH4 made is the CO2 fed less what leaves unconverted: everything scales with the flow
    solution = solved("make.product.flow.CH4", "3 mol/s", "gas.flow", "0.1 mol/s, 50 mol/s")
    assert value_at(solution, "make.product.flow.CH4") == pytest.approx(3.0, rel=1e-9)
    per_feed = 3.0 / value_at(solution, "gas.outlet.flow")
    other = solved("make.product.flow.CH4", "6 mol/s", "gas.flow", "0.1 mol/s, 50 mol/s")
    assert 6.0 / value_at(other, "gas.outlet.flow") == pytest.approx(per_feed, rel=1e-8)


@pytest.mark.parametrize(
    ("within", "shares", "says"),
    [
        ("-1 %, 90 %", "{back: 50 %, out: rest}", "shares.back: -0.01 is out of range"),
        ("10 %, 110 %", "{back: 50 %, out: rest}", "shares.back: 1.1 is out of range"),
        ("10 %, 90 %", "{back: 50 %, out: 50 %}", "the shares add up to 60 %"),
        ("10 %, 90 %", "{back: 50 %, lost: 20 %, out: rest}", "the shares add up to 110 %"),
        ("10 bar, 90 %", "{back: 50 %, out: rest}", "within: '10 bar' is a pressure"),
        ("90 %, 10 %", "{back: 50 %, out: rest}", "within: the first value is not below"),
        ("50 %, 50 %", "{back: 50 %, out: rest}", "within: the first value is not below"),
    ],
)
def test_the_range_is_inside_what_the_setting_may_be(within, shares, says):
    assert says in fault_of(*RECYCLE, within, shares=shares)


@pytest.mark.parametrize(
    ("hold", "at", "says"),
    [
        ("make.product.temperature", "-300 degC", "out of range: wanted above -273.15 degC"),
        ("make.product.flow", "3 bar", "wanted a molar flow"),
        ("make.product.fraction.CH4", "hot", "does not start with a number"),
        ("make.conversion", "50 %", "has no result 'conversion'"),
        ("dry.net", "0 mol/s", "has no result 'net'"),
    ],
)
def test_what_is_held_has_a_value_of_its_kind(hold, at, says):
    assert says in fault_of(hold, at, "split.shares.back", "10 %, 90 %")


def test_a_hold_by_equipment_that_no_line_touches():
    text = """\
equipment:
  gas: {kind: supply, composition: {H2: 1}, temperature: 25 degC, pressure: 1 bar, flow: 1 mol/s}
  spare: {kind: supply, composition: {H2: 1}, temperature: 25 degC, pressure: 1 bar, flow: 1 mol/s}
  town: {kind: product}
lines:
  - gas -> town
holds:
  - {hold: gas.outlet.flow.H2, at: 2 mol/s, by: spare.flow, within: [1 mol/s, 3 mol/s]}
"""
    with pytest.raises(FlowsheetFault) as caught:
        read_text(text)
    (fault,) = caught.value.faults
    assert (fault.code, fault.place.line) == ("bad-hold", 8)
    assert "no line touches spare" in fault.text

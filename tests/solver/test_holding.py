"""Holds: one setting moves until one result has its value."""

from __future__ import annotations

import pytest

from chainflow.basis.faults import NotSolved
from chainflow.flowsheet.building import read_text
from chainflow.solver.lookup import value_at
from chainflow.solver.solve import solve_flowsheet
from tests.solver.small_plants import hydrogen_plant, methane_loop

HOLD = "holds:\n  - {{hold: {hold}, at: {at}, by: {by}, within: [{low}, {high}]}}\n"


def hold(**words: str) -> str:
    return HOLD.format(**words)


def test_simple_hold_is_met_in_few_passes() -> None:
    text = methane_loop(
        holds=hold(
            hold="reactor.product.fraction.CH4",
            at="0.30",
            by="reactor.temperature",
            low="250 degC",
            high="450 degC",
        )
    )
    solution = solve_flowsheet(read_text(text))
    assert solution.passes <= 15
    assert value_at(solution, "reactor.product.fraction.CH4") == pytest.approx(0.30, rel=1e-10)
    (result,) = solution.holds
    assert (result.unit, result.by_unit) == ("1", "K")
    # the answer with the setting written into the file is the same
    again = solve_flowsheet(
        read_text(methane_loop(), {"reactor.temperature": f"{result.value!r} K"})
    )
    assert value_at(again, "reactor.product.fraction.CH4") == pytest.approx(0.30, rel=1e-9)


@pytest.mark.parametrize(
    ("address", "at"),
    [
        ("stack.hydrogen.flow.H2", "5 mol/s"),
        ("stack.hydrogen.mass_flow", "40 kg/h"),
        ("stack.hydrogen", "40 kg/h"),
        ("board.rest.rate", "1.2 MW"),
        ("stack.water.flow", "6 mol/s"),
        ("stack.duty.power", "1.2 MW"),
        ("water.top_up", "5 mol/s"),
    ],
)
def test_every_kind_of_address_can_be_held(address: str, at: str) -> None:
    if address == "stack.hydrogen":
        address = "stack.hydrogen_kg_s"
    words = {"hold": address, "at": at, "by": "field.efficiency", "low": "1 %", "high": "60 %"}
    text = hydrogen_plant(
        equipment="  town: {kind: product}\n",
        lines="\n  - stack.hydrogen -> dry -> town\n",
        holds=hold(**words),
    )
    solution = solve_flowsheet(read_text(text))
    (result,) = solution.holds
    assert result.reached == pytest.approx(result.wanted, rel=1e-9)
    assert value_at(solution, address) == pytest.approx(result.wanted, rel=1e-9)


def test_two_holds_are_met_together() -> None:
    holds = """
holds:
  - hold: reactor.product.fraction.CH4
    at: 0.30
    by: reactor.temperature
    within: [250 degC, 450 degC]
  - {hold: stack.hydrogen.flow.H2, at: 5 mol/s, by: field.efficiency, within: [1 %, 60 %]}
"""
    solution = solve_flowsheet(read_text(methane_loop(holds=holds)))
    assert [h.reached for h in solution.holds] == pytest.approx([0.30, 5.0], rel=1e-9)


def test_hold_out_of_reach_names_both_ends() -> None:
    text = methane_loop(
        holds=hold(
            hold="reactor.product.fraction.CH4",
            at="0.60",
            by="reactor.temperature",
            low="250 degC",
            high="450 degC",
        )
    )
    with pytest.raises(NotSolved, match="out of reach") as problem:
        solve_flowsheet(read_text(text))
    assert problem.value.code == "hold-out-of-reach"
    ends = problem.value.details["ends"]
    assert [round(value - 273.15) for value, _ in ends] == [250, 450]
    assert all(0.0 < reached < 0.6 for _, reached in ends)


def test_hold_that_nothing_feels_is_unable() -> None:
    text = methane_loop(
        holds=hold(
            hold="field.power.rate",
            at="1 MW",
            by="reactor.temperature",
            low="250 degC",
            high="450 degC",
        )
    )
    with pytest.raises(NotSolved, match="changes nothing there") as problem:
        solve_flowsheet(read_text(text))
    assert problem.value.code == "hold-unable"


def test_hold_without_flow_is_unable_and_not_out_of_reach() -> None:
    text = methane_loop(
        holds=hold(
            hold="reactor.product.fraction.CH4",
            at="0.30",
            by="reactor.temperature",
            low="250 degC",
            high="450 degC",
        )
    )
    with pytest.raises(NotSolved) as problem:
        solve_flowsheet(read_text(text, {"sun.irradiance": "0 W/m2"}))
    assert problem.value.code == "hold-unable"


def test_net_of_a_store_can_be_held_at_zero() -> None:
    equipment = """
  store: {kind: store, contents: {H2: 1}, temperature: 25 degC, pressure: 15 bar}
  user:
    kind: supply
    composition: {CO2: 1}
    temperature: 25 degC
    pressure: 15 bar
    flow: 2 mol/s
  blend: {kind: blend, ratio: {H2: 4, CO2: 1}, let_down: true}
  town:  {kind: product}
"""
    lines = """
  - stack.hydrogen -> dry -> store.returns
  - user -> blend.main
  - store.draw -> blend.trim
  - blend -> town
"""
    words = {
        "hold": "store.net",
        "at": "0 mol/s",
        "by": "user.flow",
        "low": "0.1 mol/s",
        "high": "20 mol/s",
    }
    solution = solve_flowsheet(
        read_text(hydrogen_plant(equipment=equipment, lines=lines, holds=hold(**words)))
    )
    assert solution.passes <= 10
    assert value_at(solution, "store.net") == pytest.approx(0.0, abs=1e-8)


EXCHANGER = """
components: [N2]
equipment:
  warm:  {kind: supply, composition: {N2: 1}, temperature: 300 degC, pressure: 1 bar,
          flow: 1 mol/s}
  cold:  {kind: supply, composition: {N2: 1}, temperature: 20 degC, pressure: 1 bar, flow: 1 mol/s}
  meets: {kind: heat-exchanger, duty: 1 kW, approach: 50 K}
  sky:   {kind: vent}
lines:
  - warm -> meets -> sky
  - cold -> meets.cold
"""


def test_a_result_that_stays_where_the_setting_is_clipped_is_out_of_reach() -> None:
    """No duty brings the hot side nearer to the cold one than the approach."""
    text = EXCHANGER + hold(
        hold="meets.hot_out.temperature", at="60 degC", by="meets.duty", low="0.1 kW", high="20 kW"
    )
    with pytest.raises(NotSolved, match="out of reach") as problem:
        solve_flowsheet(read_text(text))
    assert problem.value.code == "hold-out-of-reach"
    (_, most), (_, least) = problem.value.details["ends"]
    assert least == pytest.approx(273.15 + 70.0, abs=2.0)  # 20 degC and the approach
    assert most > 560.0


def test_a_setting_that_is_stuck_only_where_it_stands_is_told_so() -> None:
    """Nothing condenses at 90 degC; at 5 degC nearly all of the water does."""
    text = """
components: [N2, H2O]
equipment:
  gas: {kind: supply, composition: {N2: rest, H2O: 10 %}, temperature: 95 degC, pressure: 2 bar,
        flow: 1 mol/s}
  dry: {kind: condenser, temperature: 90 degC}
  sky: {kind: vent}
lines:
  - gas -> dry -> sky
""" + hold(
        hold="dry.liquid.flow", at="10 mmol/s", by="dry.temperature", low="5 degC", high="94 degC"
    )
    with pytest.raises(NotSolved, match=r"changes nothing there at .*, though it is") as problem:
        solve_flowsheet(read_text(text))
    assert problem.value.code == "hold-unable"
    assert "begin nearer" in str(problem.value)


def test_loops_that_a_hold_keeps_open_are_blamed_on_the_hold() -> None:
    """Between 300 and 1200 degC no shift of 70 % hydrogen keeps 90 % of it."""
    text = """
components: [H2, H2O, CO, CO2, CH4]
equipment:
  gas:   {kind: supply, composition: {H2: rest, CO2: 30 %}, temperature: 300 degC,
          pressure: 10 bar, flow: 1 mol/s}
  shift: {kind: shift-reactor, temperature: 700 degC}
  sky:   {kind: vent}
lines:
  - gas -> shift -> sky
""" + hold(
        hold="shift.product.fraction.H2",
        at="0.9",
        by="shift.temperature",
        low="300 degC",
        high="1200 degC",
    )
    with pytest.raises(NotSolved, match="out of reach") as problem:
        solve_flowsheet(read_text(text))
    assert problem.value.code == "hold-out-of-reach"


def test_holds_that_cannot_be_met_together_are_not_called_solved() -> None:
    """The mass of a battery is its capacity times 5.48 kg/kWh: 1 MWh never weighs 10 t."""
    text = """
equipment:
  sun:     {kind: sunlight, irradiance: 800 W/m2, aperture: 1000 m2}
  field:   {kind: pv-field, efficiency: 20 %}
  battery: {kind: battery, efficiency: 90 %, duration: 4 h}
  town:    {kind: product}
lines:
  - sun -> field -> battery -> town
holds:
  - {hold: battery.capacity, at: 1 MWh, by: battery.duration, within: [1 h, 20 h]}
  - {hold: battery.MASS, by: sun.aperture, within: [1 m2, 20000 m2]}
"""
    with pytest.raises(NotSolved, match="cannot be met together") as problem:
        solve_flowsheet(read_text(text.replace("MASS", "mass, at: 10 t")))
    assert problem.value.code == "holds-at-odds"
    assert "where 10 t is wanted" in str(problem.value)
    solution = solve_flowsheet(read_text(text.replace("MASS", "discharge.rate, at: 100 kW")))
    assert [h.reached for h in solution.holds] == pytest.approx([3.6e9, 1e5], rel=1e-9)

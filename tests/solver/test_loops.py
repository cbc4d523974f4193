"""Loops close, from empty recycles, in few passes, and say so when they cannot."""

from __future__ import annotations

import numpy as np
import pytest

from chainflow.basis.faults import NotSolved
from chainflow.flowsheet.building import read_text
from chainflow.solver import linear
from chainflow.solver.lookup import value_at
from chainflow.solver.solution import Solution
from chainflow.solver.solve import inspect, solve_flowsheet
from chainflow.thermo.streams import Stream
from tests.solver.small_plants import (
    chain_of_loops,
    hydrogen_plant,
    methane_loop,
    wet_gas_loop,
)


def solved(text: str, **settings: str) -> Solution:
    return solve_flowsheet(read_text(text, {k.replace("__", "."): v for k, v in settings.items()}))


def flows(solution: Solution) -> dict[str, np.ndarray]:
    return {s.key: s.flow.flows for s in solution.streams if isinstance(s.flow, Stream)}


@pytest.mark.parametrize("purge", ["5 %", "1 %", "0.1 %", "0.01 %"])
def test_a_recycle_with_a_purge_closes_in_few_passes(purge: str) -> None:
    solution = solved(methane_loop(purge=purge))
    assert solution.passes <= 9
    assert max(solution.balance.elements, solution.balance.energy) < 1e-12


def test_inert_leaves_as_fast_as_it_comes() -> None:
    """In steady state all nitrogen that is bought leaves: purge, product and water together."""
    solution = solved(methane_loop(purge="0.5 %", inert="1 %"))
    bought = value_at(solution, "bought.outlet.flow.N2")
    out = value_at(solution, "back.purge.flow.N2")
    assert out == pytest.approx(bought, rel=1e-9)


def test_closed_form_of_an_ideal_loop() -> None:
    """Overall conversion X / (1 - (1 - X)(1 - p)) of a loop with single-pass conversion X and
    purge share p and perfect product removal (mole balance by hand); X = 0.8, p = 0.05."""
    text = """
components: [H2, CO, CO2, H2O, CH3OH]
equipment:
  fresh: {kind: supply, composition: {CO: 1}, temperature: 25 degC, pressure: 20 bar, flow: 1 mol/s}
  other: {kind: supply, composition: {H2: 1}, temperature: 25 degC, pressure: 20 bar}
  mix:   {kind: blend, ratio: {H2: 2, CO: 1}}
  bed:
    kind: reactor
    reactions: [{equation: CO + 2 H2 -> CH3OH, conversion: {CO: 80 %}}]
    temperature: 250 degC
  sieve: {kind: separator, recovery: {CH3OH: 100 %}}
  split: {kind: splitter, shares: {purge: 5 %, back: rest}}
  out:   {kind: product}
lines:
  - fresh -> mix.main
  - other -> mix.trim
  - mix -> bed -> sieve -> split
  - split.back -> mix.main
  - sieve.kept -> out
"""
    solution = solved(text)
    made = value_at(solution, "sieve.kept.flow.CH3OH")
    assert made == pytest.approx(0.8 / (1 - 0.2 * 0.95), rel=1e-10)
    back = value_at(solution, "split.back.flow.CO")
    assert back / 1.0 == pytest.approx(0.2 * 0.95 / (1 - 0.2 * 0.95), rel=1e-10)


def test_sparse_and_dense_systems_agree(monkeypatch: pytest.MonkeyPatch) -> None:
    text = chain_of_loops(6, joined=True)
    dense = flows(solved(text))
    monkeypatch.setattr(linear, "_DENSE_UP_TO", 0)
    sparse = flows(solved(text))
    for key, there in dense.items():
        assert sparse[key] == pytest.approx(there, rel=1e-10, abs=1e-12)


def test_many_joined_loops_close_in_few_passes() -> None:
    solution = solved(chain_of_loops(40, joined=True))
    assert solution.passes <= 12


def test_two_solves_are_equal_to_the_bit() -> None:
    first, second = flows(solved(methane_loop())), flows(solved(methane_loop()))
    assert all((first[key] == second[key]).all() for key in first)


def test_no_sun_gives_a_plant_at_rest() -> None:
    solution = solved(methane_loop(), sun__irradiance="0 W/m2")
    assert value_at(solution, "stack.hydrogen.flow") == 0.0
    assert solution.balance.elements == 0.0


def test_structure_names_loops_and_tears() -> None:
    structure = inspect(read_text(methane_loop()))
    assert any("blend" in loop and "reactor" in loop for loop in structure.loops)
    assert "board.rest" in structure.tears


def test_recycle_without_pressure_drop_is_a_remark() -> None:
    text = """
components: [H2, CO2]
equipment:
  a: {kind: supply, composition: {H2: 1}, temperature: 25 degC, pressure: 5 bar, flow: 1 mol/s}
  m: {kind: mixer}
  s: {kind: splitter, shares: {back: 50 %, on: rest}}
  p: {kind: product}
lines: [a -> m, m -> s, s.back -> m, s.on -> p]
"""
    remarks = [r.code for r in solved(text).remarks]
    assert "drop-free-recycle" in remarks
    assert "drop-free-recycle" not in [r.code for r in solved(methane_loop()).remarks]


ENGINE = """
  store:  {kind: store, contents: {H2: 1}, temperature: 25 degC, pressure: 15 bar}
  user:
    kind: supply
    composition: {CO2: 1}
    temperature: 25 degC
    pressure: 15 bar
    flow: 2 mol/s
  blend:  {kind: blend, ratio: {H2: 4, CO2: 1}, let_down: true}
  town:   {kind: product}
"""
ENGINE_LINES = """
  - stack.hydrogen -> dry -> store.returns
  - user -> blend.main
  - store.draw -> blend.trim
  - blend -> town
"""


@pytest.mark.parametrize("change", [-1e-3, -1e-9, 0.0, 1e-9, 1e-3])
def test_a_store_is_solved_at_its_switch(change: float) -> None:
    """Around the point where it neither makes up nor lets out, and on it."""
    text = hydrogen_plant(equipment=ENGINE, lines=ENGINE_LINES)
    made = value_at(solved(text), "store.returns.flow")
    solution = solved(text, user__flow=f"{made / 4 * (1 + change):.15g} mol/s")
    assert solution.passes <= 8
    net = value_at(solution, "store.net")
    # the draw is not quite 4 per CO2: the store's moisture counts too, so compare with itself
    asked = value_at(solution, "store.draw.flow")
    assert net == pytest.approx(made - asked, abs=1e-9 * made)
    assert value_at(solution, "store.top_up") == pytest.approx(max(-net, 0.0), abs=1e-12)


def test_short_switchboard_says_by_how_much() -> None:
    """A fixed user of 2 MW on a board that gets 1.6 MW: short by 0.4 MW with nothing at rest."""
    equipment = """
  oven: {kind: heater, duty: 2 MW}
  gas:
    kind: supply
    composition: {N2: 1}
    temperature: 25 degC
    pressure: 1 bar
    flow: 100 mol/s
  town: {kind: product}
"""
    lines = """
  - stack.hydrogen -> dry -> town
  - gas -> oven -> town
  - board.oven -> oven.power
"""
    with pytest.raises(NotSolved, match=r"board is short of 400 kW") as problem:
        solved(hydrogen_plant(equipment=equipment, lines=lines))
    assert problem.value.code == "short-of-power"
    assert problem.value.details["short_W"] == pytest.approx(0.4e6, rel=1e-9)


def test_shortage_line_serves_what_is_missing() -> None:
    """With a grid behind it everybody is served, and the grid gives what the others lack."""
    equipment = """
  grid: {kind: grid}
  press: {kind: compressor, pressure: 300 bar, stages: 3}
  town: {kind: product}
"""
    lines = """
  - stack.hydrogen -> dry -> press -> town
  - board.press -> press.power
  - grid.power -> board.shortage
"""
    text = hydrogen_plant(equipment=equipment, lines=lines).replace(
        "- board.rest -> stack.power", "- board.stack -> stack.power"
    )
    solution = solved(text, stack__hydrogen="200 kg/h")
    bought = value_at(solution, "grid.power.rate")
    asked = sum(value_at(solution, f"board.{name}.rate") for name in ("feed", "stack", "press"))
    assert bought == pytest.approx(asked - value_at(solution, "field.power.rate"), rel=1e-12)


def test_surplus_with_nowhere_to_go_is_not_solved() -> None:
    text = hydrogen_plant(
        equipment="  town: {kind: product}\n", lines="\n  - stack.hydrogen -> dry -> town\n"
    )
    text = text.replace("- board.rest -> stack.power", "- board.stack -> stack.power")
    with pytest.raises(NotSolved, match="nowhere to go") as problem:
        solved(text, stack__hydrogen="1 kg/h")
    assert problem.value.code == "surplus-power"


@pytest.mark.parametrize("purge", ["0 %", "0.0000000001 %", "0.000001 %", "0.1 %"])
@pytest.mark.parametrize("water", ["0.0001 %", "0.1 %"])
@pytest.mark.parametrize("kept", ["50 %", "99 %"])
def test_water_that_leaves_only_by_condensing_finds_its_level(
    purge: str, water: str, kept: str
) -> None:
    """The slopes of the dry loop ask for up to 1e10 mol/s of water, or have no answer at all.

    Saturation at 30 degC: 4.2470 kPa (IAPWS-95 tables, from memory), at 4.9 bar.
    """
    solution = solved(wet_gas_loop(purge=purge, water=water, kept=kept))
    hydrogen, there = (value_at(solution, f"knock.gas.flow.{name}") for name in ("H2", "H2O"))
    if value_at(solution, "knock.liquid.flow") > 0.0:
        assert there / hydrogen == pytest.approx(4.2470 / (490.0 - 4.2470), rel=1e-3)
    else:  # the purge takes all of it
        assert value_at(solution, "back.purge.flow.H2O") == pytest.approx(1e-5, rel=1e-9)
        assert (purge, water, kept) == ("0.1 %", "0.0001 %", "50 %")
    assert solution.passes <= 9

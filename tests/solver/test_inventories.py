"""What has no way out, and what nothing pins, is named before anything is solved."""

from __future__ import annotations

import pytest

from chainflow.basis.faults import NotSolved
from chainflow.flowsheet.building import read_text
from chainflow.solver.inventories import check_inventories, find_presence
from chainflow.solver.lookup import value_at
from chainflow.solver.solve import inspect, solve_flowsheet
from tests.solver.small_plants import methane_loop


def refused(text: str) -> NotSolved:
    with pytest.raises(NotSolved) as problem:
        inspect(read_text(text))
    return problem.value


def test_an_inert_without_a_purge_is_named() -> None:
    problem = refused(methane_loop(purge="0 %"))
    assert problem.code == "no-way-out"
    assert "N (as N2) enters at bought.outlet" in problem.text


def test_clean_feed_needs_no_purge() -> None:
    """CO2 at the trim is a one-way pin and counts, since carbon has a sure way out with CH4."""
    solution = solve_flowsheet(read_text(methane_loop(purge="0 %", inert="0 %")))
    assert solution.passes <= 9
    made = value_at(solution, "sieve.kept.flow.CH4")
    assert made == pytest.approx(value_at(solution, "bought.outlet.flow"), rel=1e-2)


def test_the_combination_that_the_stoichiometry_ties_is_named() -> None:
    """Without anything that trims, 4 C + 2 O - H of CO2 and H2 cannot leave as CH4 and H2O."""
    text = """
components: [H2, H2O, CO, CO2, CH4]
equipment:
  gas:
    kind: supply
    composition: {H2: 80 %, CO2: rest}
    temperature: 25 degC
    pressure: 20 bar
    flow: 1 mol/s
  mix:     {kind: mixer}
  bed:     {kind: methanation-reactor, temperature: 320 degC}
  sieve:   {kind: separator, recovery: {CH4: 97 %, H2O: 99 %}}
  out:     {kind: product}
lines:
  - gas -> mix
  - sieve.passed -> mix
  - mix -> bed -> sieve
  - sieve.kept -> out
"""
    problem = refused(text)
    assert problem.code == "nothing-pins"
    assert "4 C + 2 O - H" in problem.text or "C + 0.5 O - 0.25 H" in problem.text


CLOSED = """
components: [H2, O2, H2O]
equipment:
  sun:   {{kind: sunlight, irradiance: 800 W/m2, aperture: 1000 m2}}
  field: {{kind: pv-field, efficiency: 20 %}}
  stack: {{kind: electrolyser, energy_use: 50 kWh/kg, temperature: 60 degC, pressure: 2 bar}}
  water: {water}
  cell:  {{kind: burner, model: complete}}
  cool:  {{kind: condenser, temperature: 30 degC}}
  lift:  {{kind: pump, pressure: 2 bar}}
  o2:    {{kind: store, contents: {{O2: 1}}, temperature: 25 degC, pressure: 1.9 bar}}
  out:   {{kind: vent}}
lines:
  - sun -> field -> stack
  - stack.hydrogen -> cell.fuel
  - stack.oxygen -> o2.returns
  - o2.draw -> cell.oxidiser
  - cell -> cool
  - cool.gas -> out
{lines}
"""


def test_a_closed_loop_without_a_store_is_refused_when_read() -> None:
    """Condensate offered straight to the stack's call: the missing store is a fault of the file."""
    from chainflow.basis.faults import FlowsheetFault

    text = CLOSED.format(water="{kind: vent}", lines="  - cool.liquid -> lift -> stack.water\n")
    with pytest.raises(FlowsheetFault, match="put a store between"):
        read_text(text)


def test_a_closed_water_loop_with_a_store_closes() -> None:
    text = CLOSED.format(
        water="{kind: store, contents: {H2O: 1}, temperature: 25 degC, pressure: 1 bar}",
        lines="  - cool.liquid -> water.returns\n  - water.draw -> lift -> stack.water\n",
    )
    solution = solve_flowsheet(read_text(text))
    assert value_at(solution, "cool.liquid.flow") > 0.95 * value_at(solution, "stack.water.flow")


def test_absent_species_are_no_unknowns() -> None:
    flowsheet = read_text(methane_loop(inert="0 %"))
    presence = find_presence(flowsheet)
    assert "N2" not in presence.species["reactor", "product"]
    assert presence.species["feed", "outlet"] == ("H2O", "CO2")
    assert check_inventories(flowsheet, presence) == ()


def test_zero_shares_carry_nothing() -> None:
    presence = find_presence(read_text(methane_loop(purge="0 %", inert="0 %")))
    assert ("back", "purge") not in presence.species


TRAPPED_IN_STORE = """
components: [H2, N2, CO2]
equipment:
  gas:
    kind: supply
    composition: {{H2: 90 %, N2: rest}}
    temperature: 25 degC
    pressure: 20 bar
    flow: {flow}
  keep:  {{kind: store, contents: {{H2: 1}}, temperature: 25 degC, pressure: 10 bar}}
  other:
    kind: supply
    composition: {{CO2: 1}}
    temperature: 25 degC
    pressure: 10 bar
    flow: 1 mol/s
  mix:   {{kind: blend, ratio: {{H2: 4, CO2: 1}}}}
  sieve: {{kind: separator, recovery: {{CO2: 100 %, H2: 50 %}}}}
  lift:  {{kind: compressor, pressure: 10.1 bar, stages: 1}}
  out:   {{kind: product}}
lines:
  - gas -> keep.returns
  - keep.draw -> mix.trim
  - other -> mix.main
  - mix -> sieve
  - sieve.kept -> out
  - sieve.passed -> lift -> keep.returns
"""


def test_an_inert_may_leave_with_a_sure_surplus_but_not_without_one() -> None:
    """Nitrogen comes with the gas and leaves only with what the store has too much of."""
    solution = solve_flowsheet(read_text(TRAPPED_IN_STORE.format(flow="10 mol/s")))
    assert value_at(solution, "keep.rest.flow.N2") == pytest.approx(1.0, rel=1e-9)
    with pytest.raises(NotSolved) as problem:
        solve_flowsheet(read_text(TRAPPED_IN_STORE.format(flow="0.5 mol/s")))
    assert problem.value.code in ("no-way-out", "not-converged", "undetermined", "grows")

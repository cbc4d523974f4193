"""What is used and bought on each rung, and cuts that a file names."""

from math import prod

import pytest

from chainflow.accounts.efficiency import efficiency
from chainflow.accounts.worth import BASES
from tests.accounts.test_losses import PLANTS, SHIPPED
from tests.flowsheets.shipped import solved_text
from tests.plants import BOUGHT, CYCLE, HYDROGEN, METHANE, PARTED, solved


def uses(text):
    rungs = efficiency(solved_text(text)).rungs
    return {rung.end: {(u.equipment, u.what) for u in rung.uses} for rung in rungs}


@pytest.mark.parametrize("text", SHIPPED.values(), ids=SHIPPED)
@pytest.mark.parametrize("basis", BASES)
def test_rungs_of_every_shipped_flowsheet_multiply_to_its_overall_efficiency(text, basis):
    found = efficiency(solved_text(text))
    whole = prod(rung.ratio[basis] for rung in found.rungs)
    assert whole == pytest.approx(found.overall[basis], rel=1e-12)


@pytest.mark.parametrize("text", [*PLANTS.values(), *SHIPPED.values()], ids=[*PLANTS, *SHIPPED])
def test_every_draw_of_a_machine_stands_on_one_rung(text):
    """Power that a switchboard or the grid serves and power nobody brings, but for what is tiny."""
    solution = solved_text(text)
    rungs = efficiency(solution).rungs
    found = {u.equipment: u.rate for r in rungs for u in r.uses if u.what == "own power"}
    for line in solution.flowsheet.lines:
        if line.content == "power" and line.called:
            asked = solution.outcomes[line.target].drawn[line.inlet]
            assert found.get(line.target, 0.0) == pytest.approx(asked, abs=0.1)


def test_machines_of_the_cycle_stand_where_they_belong():
    found = uses(CYCLE)
    assert found["hydrogen"] == {("feed", "own power")}
    assert found["fuel kept"] == {("fuel", "bought heat")}
    assert found["power out"] == {("co2press", "own power")}


def test_machines_of_the_shipped_cycle_stand_where_they_belong():
    found = uses(SHIPPED["methane-cycle"])
    assert ("feed", "own power") in found["hydrogen"]
    assert {("shift", "own power"), ("circulator", "own power")} == found["fuel made"]
    assert ("press", "own power") in found["fuel kept"]
    assert {("lift", "own power"), ("fan", "own power")} <= found["power out"]


def test_hydrogen_that_is_drawn_from_a_store_leads_on():
    assert ("shift", "own power") in uses(SHIPPED["liquid-fuel"])["fuel made"]


def test_all_that_is_bought_enters_where_it_is_used():
    (rung,) = efficiency(solved(BOUGHT)).rungs
    assert {use.what for use in rung.uses} == {
        "bought material",
        "bought heat",
        "bought power",
        "bought cold",
    }
    press = solved(BOUGHT).outcomes["press"].power
    assert sum(u.rate for u in rung.uses if u.what == "bought power") == pytest.approx(
        press, rel=1e-12
    )
    assert [use.rate for use in rung.uses] == sorted((u.rate for u in rung.uses), reverse=True)


def test_current_for_the_stack_is_the_chain_itself():
    text = HYDROGEN.replace("- board.rest -> stack.power", "- board.stack -> stack.power")
    text = text.replace("energy_use: 52 kWh/kg,", "energy_use: 52 kWh/kg, hydrogen: 10 kg/h,")
    text = text.replace("lines:\n", "  sky: {kind: vent}\nlines:\n  - board.rest -> sky\n", 1)
    solution = solved(text)
    drawn = {u.equipment for r in efficiency(solution).rungs for u in r.uses}
    assert solution.outcomes["stack"].drawn["power"] == pytest.approx(520e3, rel=1e-9)
    assert "stack" not in drawn
    assert "feed" in drawn


def test_a_pump_behind_a_heater_belongs_to_the_stack_they_serve():
    """Though the water it draws comes back from methanation, a rung further down."""
    found = uses(SHIPPED["steam-methane"])
    assert ("feed", "own power") in found["hydrogen"]
    assert ("feed", "own power") not in found["fuel made"]


def test_power_of_a_grid_is_used_where_hydrogen_is_made():
    """And heat that is bought in many pieces, where water boils on the way, is told once."""
    text = PARTED.replace("  - grid.power -> warm.power\n", "")
    found = uses(text)
    assert ("grid", "bought power") in found["hydrogen"]
    rungs = efficiency(solved(text)).rungs
    (warm,) = [use for rung in rungs for use in rung.uses if use.equipment == "warm"]
    needs = [d.heat for d in solved(text).outcomes["warm"].duties]
    assert len(needs) > 1
    assert warm.rate == pytest.approx(sum(needs), rel=1e-12)


# --- names from the file ---------------------------------------------------------------------

NAMED = """
rungs:
  sunshine: light
  panels: [field.power]
  gas: hydrogen
  mixture: [blend.outlet]
  grid-gas: fuel made
  village: useful
"""


def test_names_of_the_file():
    found = efficiency(solved(METHANE + NAMED))
    names = [found.rungs[0].start, *(rung.end for rung in found.rungs)]
    assert names == ["sunshine", "panels", "gas", "mixture", "grid-gas", "village"]
    plain = efficiency(solved(METHANE))
    assert found.overall == plain.overall
    for basis in BASES:
        whole = prod(rung.ratio[basis] for rung in found.rungs)
        assert whole == pytest.approx(plain.overall[basis], rel=1e-12)
    solution = solved(METHANE)
    mixture = float(solution.stream("blend.outlet").flow.lhv)
    hydrogen = float(solution.stream("stack.hydrogen").flow.lhv)
    assert found.rungs[2].ratio["LHV"] == pytest.approx(mixture / hydrogen, rel=1e-9)


def test_cuts_of_several_ports_and_contents():
    text = CYCLE + "\nrungs:\n  caught: [boiler.heat, burner.flue]\n  rest: [reactor.product]\n"
    found = efficiency(solved(text))
    solution = solved(CYCLE)
    heat = solution.stream("boiler.heat").flow
    flue = solution.stream("burner.flue").flow
    light = 850 * 60000
    # CO2 bought and a trace of heat enter too; they carry no LHV and next to no energy
    assert found.rungs[0].ratio["LHV"] == pytest.approx(
        (heat.rate + float(flue.lhv)) / light, rel=1e-4
    )


def test_a_cut_that_carries_nothing_is_left_out():
    text = METHANE + "\nrungs:\n  drain: [blower.condensate]\n  kept: power kept\n"
    found = efficiency(solved(text))
    assert [rung.end for rung in found.rungs] == ["useful"]
    assert found.left_out == ("drain", "kept")


# --- power that is kept ------------------------------------------------------------------------

BATTERY = """
equipment:
  sun:     {kind: sunlight, irradiance: 1000 W/m2, aperture: 1000 m2}
  field:   {kind: pv-field, efficiency: 20 %}
  part:    {kind: splitter, shares: {noon: 30 %, later: rest}}
  cells:   {kind: battery, efficiency: 80 %, duration: 4 h}
  town:    {kind: product}
lines:
  - sun -> field -> part
  - part.noon -> town
  - part.later -> cells -> town
"""


def test_power_kept_counts_what_goes_past_the_battery():
    rungs = efficiency(solved(BATTERY)).rungs
    assert [rung.end for rung in rungs] == ["power", "power kept"]
    assert rungs[1].ratio["LHV"] == pytest.approx(0.3 + 0.7 * 0.8, rel=1e-12)


def test_a_battery_before_a_stack_keeps_nothing():
    text = HYDROGEN.replace("- board.rest -> stack.power", "- board.rest -> cells -> stack.power")
    text = text.replace(
        "lines:", "  cells: {kind: battery, efficiency: 80 %, duration: 4 h}\nlines:"
    )
    names = [rung.end for rung in efficiency(solved(text)).rungs]
    assert "power kept" not in names
    assert names[-1] == "fuel kept"


def test_power_behind_the_battery_that_runs_a_machine_is_lost_after_it():
    text = """
equipment:
  sun:   {kind: sunlight, irradiance: 1000 W/m2, aperture: 1000 m2}
  field: {kind: pv-field, efficiency: 20 %}
  cells: {kind: battery, efficiency: 80 %, duration: 4 h}
  board: {kind: switchboard}
  air:   {kind: supply, composition: {N2: 1}, temperature: 25 degC, pressure: 1 bar, flow: 1 mol/s}
  fan:   {kind: compressor, pressure: 2 bar}
  sky:   {kind: vent}
  town:  {kind: product}
lines:
  - sun -> field -> cells -> board.supply
  - board.fan -> fan.power
  - air -> fan -> sky
  - board.rest -> town
"""
    solution = solved(text)
    rungs = efficiency(solution).rungs
    assert [rung.end for rung in rungs] == ["power", "power kept", "power out"]
    fan = solution.outcomes["fan"].power
    assert rungs[2].ratio["LHV"] == pytest.approx(1 - fan / 160e3, rel=1e-9)
    assert [(u.equipment, u.what) for u in rungs[2].uses] == [("fan", "own power")]

"""Power to methane with and without heat integration, against published ranges."""

import pytest

from chainflow.accounts.heat import heat_account
from chainflow.flowsheet.building import read_flowsheet, read_text
from chainflow.solver.lookup import value_at
from chainflow.solver.solve import solve_flowsheet
from tests.flowsheets.shipped import FOLDER
from tests.heat_plants import STEAM_METHANE, without_recovery

HHV, LHV = 890.6e3, 802.3e3  # methane [J/mol], 25 degC
POWER = 4e6  # 800 W/m2 x 25000 m2 x 20 %


def kept(text, heating_value):
    """Share of the field's power that is in the methane."""
    solution = solve_flowsheet(read_text(text))
    return value_at(solution, "village.inlet.flow.CH4") * heating_value / POWER


def test_low_temperature_electrolysis():
    # conventional plant 54 % (project press text on HELMETH, read); band 49 to 65 % (Sterner,
    # Jentsch, Holzhammer, Fraunhofer IWES 2011, from memory)
    text = (FOLDER / "methane-store.yaml").read_text()
    electric = (
        text.replace("  - reactor.heat -> warmth.supply\n", "")
        .replace("  - warmth.preheat -> preheat.heat\n", "  - board.preheat -> preheat.power\n")
        .replace("  warmth:     {kind: heat-network}\n", "")
    )
    with_it, without = (kept(t, LHV) for t in (text, electric))
    assert 0.49 < without < with_it < 0.65


def test_steam_electrolysis_with_the_heat_of_methanation():
    # two-stage pilot with solid-oxide electrolysis: 76 % HHV (HELMETH project 2017, from memory),
    # goal above 85 % (read). Ours has no losses to its surroundings, hence near the upper end.
    assert 0.76 < kept(STEAM_METHANE, HHV) < 0.85
    # without the heat of methanation and of the hot gases it is no better than cold electrolysis
    assert 0.49 < kept(without_recovery(), HHV) < 0.65


def test_the_heat_of_methanation_raises_the_steam():
    """By reference equations of state, at the pinch that the program found."""
    from CoolProp.CoolProp import PropsSI

    solution = solve_flowsheet(read_text(STEAM_METHANE))
    account = heat_account(solution)
    given, needed = account.table.pinch_given, account.table.pinch_needed

    # the pinch is where water begins to condense behind the reactor
    share = value_at(solution, "reactor.product.fraction.H2O")
    dew = PropsSI("T", "P", share * 9.3e5, "Q", 1, "Water")  # 9.4 less the drop of 0.1 bar
    assert given == pytest.approx(dew, abs=1.0)
    assert needed == pytest.approx(given - 10.0, abs=1e-6)

    def molar(name, start, end, bar):
        ends = [PropsSI("Hmolar", "T", t, "P", bar * 1e5, name) for t in (start, end)]
        return ends[1] - ends[0]

    steam = value_at(solution, "stack.water.flow")
    above = steam * molar("Water", needed, 1073.15, 10.0)
    raised = [d.flow for name, d in account.needs if name == "raise"]
    found = sum(
        p.rate * min(max((p.hottest - needed) / max(p.hottest - p.coldest, 1e-9), 0.0), 1.0)
        for flow in raised
        for p in flow.pieces
    )
    assert found == pytest.approx(above, rel=0.02)  # the gas model takes 1.5 % too much at 10 bar
    # evaporation alone takes most of what methanation gives: 164.9 kJ/mol of methane at 25 degC
    # (CO2 + 4 H2 -> CH4 + 2 H2O(g), NIST formation enthalpies), about 178 at 300 degC
    methane = value_at(solution, "membrane.kept.flow.CH4")
    reaction = value_at(solution, "reactor.heat.rate")
    assert 165e3 < reaction / methane < 185e3
    assert account.electric < 0.03 * above


def test_shipped_methane_store_needs_no_heat_from_outside():
    account = heat_account(solve_flowsheet(read_flowsheet(FOLDER / "methane-store.yaml")))
    assert account.table.hot_utility == 0.0

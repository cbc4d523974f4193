"""The heat account: what a plant needs, what it gives off, and the least it could buy."""

import pytest

from chainflow.accounts.heat import heat_account
from chainflow.accounts.plant import plant_account, plant_value
from chainflow.accounts.purchases import purchases
from chainflow.flowsheet.building import read_text
from chainflow.solver.solve import solve_flowsheet
from tests.heat_plants import STEAM_METHANE, TWO_NETWORKS, without_recovery

# Two nitrogen streams, nothing joined: one is cooled, one is heated.
APART = """\
components: [N2]
approach: $gap
knobs: {gap: 10 K, how: 1 mol/s}
equipment:
  a:    {kind: supply, composition: {N2: 1}, temperature: 300 degC, pressure: 2 bar, flow: 2 mol/s}
  cool: {kind: cooler, temperature: 50 degC}
  b:    {kind: supply, composition: {N2: 1}, temperature: 60 degC, pressure: 2 bar, flow: $how}
  warm: {kind: heater, temperature: 400 degC}
  town: {kind: product}
lines:
  - a -> cool -> town
  - b -> warm -> town
"""


def solved(text, **overrides):
    return solve_flowsheet(read_text(text, overrides))


CHORDS = 3e-3  # each gas in four parts of constant heat capacity: cp changes by 2 % in one


def enthalpy(kelvin_from, kelvin_to):
    """Heat to warm nitrogen [J/mol], by the reference equation of state in CoolProp."""
    from CoolProp.CoolProp import PropsSI

    ends = [PropsSI("Hmolar", "T", t, "P", 2e5, "N2") for t in (kelvin_from, kelvin_to)]
    return ends[1] - ends[0]


def test_what_two_streams_could_do_for_each_other():
    """Above 290 degC (10 K below the hot end) nothing can warm the second stream."""
    account = heat_account(solved(APART))
    above = enthalpy(290.0 + 273.15, 400.0 + 273.15)
    assert account.bought == pytest.approx(enthalpy(333.15, 673.15), rel=1e-3)
    assert account.table.hot_utility == pytest.approx(above, rel=CHORDS)
    spare = 2.0 * enthalpy(323.15, 573.15) - enthalpy(333.15, 563.15)
    assert account.table.cold_utility == pytest.approx(spare, rel=CHORDS)
    assert account.table.pinch_given == pytest.approx(573.15, abs=1e-6)
    assert account.table.pinch_needed == pytest.approx(563.15, abs=1e-6)
    assert account.recovered == pytest.approx(0.0, abs=1e-6)


def test_the_approach_is_a_setting_of_the_file():
    least = [heat_account(solved(APART, gap=f"{gap} K")).table.hot_utility for gap in (0, 10, 60)]
    assert least == sorted(least)
    assert least[2] - least[1] == pytest.approx(enthalpy(240 + 273.15, 290 + 273.15), rel=CHORDS)


def test_heat_given_and_bought_is_conserved():
    for text in (APART, STEAM_METHANE, without_recovery(), TWO_NETWORKS):
        account = heat_account(solved(text))
        given = -sum(duty.heat for _, duty in account.given)
        now = account.recovered + account.rejected + sum(h.rate for _, h in account.kept)
        assert now == pytest.approx(given, rel=1e-9)
        table = account.table
        wanted = account.needed + sum(h.rate for _, h in account.kept)
        assert given + table.hot_utility == pytest.approx(wanted + table.cold_utility, rel=1e-9)


def test_one_network_with_everything_in_it_buys_the_least():
    """What the closed solve takes is what the problem table of the whole plant says."""
    account = heat_account(solved(STEAM_METHANE))
    linked = [d for _, d in account.given if d.met_by == "heat"]
    # the coolers of the press are not linked, and too cold to help
    assert len(linked) < len(account.given)
    assert account.electric == pytest.approx(account.table.hot_utility, rel=1e-9)
    pinch = account.networks["warmth"].results["pinch_given_K"]
    assert account.table.pinch_given == pytest.approx(pinch, rel=1e-9)


def test_without_recovery_the_account_says_what_could_be():
    account = heat_account(solved(without_recovery()))
    assert account.electric > 20.0 * account.table.hot_utility
    assert account.bought == pytest.approx(0.0, abs=1.0)


def test_each_user_of_a_network_says_how_it_is_met():
    solution = solved(TWO_NETWORKS)
    account = heat_account(solution)
    low, high = account.networks["low"].as_data(), account.networks["high"].as_data()
    assert set(low["users"]) == {"warm"}
    warm = low["users"]["warm"]
    assert warm["recovered_W"] + warm["shortage_W"] == pytest.approx(warm["asked_W"], rel=1e-12)
    assert low["shortage_W"] == pytest.approx(warm["shortage_W"], rel=1e-9)
    assert high["users"]["help"]["asked_W"] == pytest.approx(warm["shortage_W"], rel=1e-9)
    assert high["users"]["help"]["shortage_W"] == pytest.approx(0.0, abs=1e-6)


def test_heat_that_is_taken_as_it_comes_stays_where_it_is():
    """The engine keeps the rest of the cold network; only what is thrown away could be used."""
    account = heat_account(solved(TWO_NETWORKS))
    (kept,) = account.kept
    assert kept[0] == "wheel"
    assert kept[1].rate > 0.0
    assert account.table.hot_utility == pytest.approx(0.0, abs=1e-6)
    assert account.table.cold_utility == pytest.approx(account.rejected, rel=1e-9)


def test_the_account_is_in_the_plants_results():
    solution = solved(APART)
    data = plant_account(solution).as_data()
    assert plant_value(data, "heat.now.bought_W") == purchases(solution).heat_total
    assert plant_value(data, "heat.least.heat_W") < plant_value(data, "heat.now.bought_W")
    heat = data["heat"]
    assert sum(flow["heat_W"] for flow in heat["flows"] if flow["heat_W"] > 0) == pytest.approx(
        heat["needed_W"], rel=1e-12
    )
    given, needed = heat["curves"]["given"], heat["curves"]["needed"]
    assert needed["heat_W"][0] == pytest.approx(heat["least"]["cooling_W"])
    # drawn on one axis, the curves overlap by what could be recovered
    overlap = given["heat_W"][-1] - needed["heat_W"][0]
    assert overlap == pytest.approx(heat["needed_W"] - heat["least"]["heat_W"], rel=1e-9)


def test_a_plant_without_heat_has_an_empty_account():
    text = APART.replace("400 degC", "60 degC").replace("temperature: 50 degC}", "duty: 0 W}")
    data = heat_account(solved(text)).as_data()
    assert data["needed_W"] == pytest.approx(0.0, abs=1e-6)
    assert data["pinch_given_K"] is None

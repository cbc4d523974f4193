"""Burner and engine: leaks, enrichment, nitric oxide, and where an engine's heat goes."""

import pytest

from chainflow.equipment.base import Site
from chainflow.equipment.register import kinds
from tests.equipment.feeds import AIR, FUEL, MATTER, OXYGEN, stream


def run(kind, settings, *, outlets=(), **feeds):
    piece = kinds()[kind].model_validate(settings)
    site = Site(MATTER, inlets=frozenset(feeds), outlets=frozenset(outlets))
    return piece.operate(feeds, {}, site)


# -------------------------------------------------------------------------------------- burner
def test_a_leak_is_a_share_of_all_else_and_its_oxygen_counts():
    carbon = stream({"CO2": 6.0}, 25.0, 1.2)
    feeds = {"fuel": (FUEL,), "oxidiser": OXYGEN, "moderator": (carbon,)}
    tight = run("burner", {"excess": "2 %"}, **feeds)
    leaky = run("burner", {"excess": "2 %", "air_leak": "5 %"}, **feeds, leak=AIR)
    drawn = leaky.drawn
    rest = FUEL.total + carbon.total + drawn["oxidiser"]
    assert drawn["leak"] == pytest.approx(0.05 * rest, rel=1e-14)
    assert drawn["oxidiser"] < tight.drawn["oxidiser"]
    both = [o.drawn["oxidiser"] * OXYGEN.flow("O2") for o in (tight, leaky)]
    assert both[1] + drawn["leak"] * AIR.flow("O2") == pytest.approx(both[0], rel=1e-13)
    nitrogen = leaky.outlets["flue"].dry_fraction("N2")
    assert nitrogen > 10 * tight.outlets["flue"].dry_fraction("N2")


def test_a_leak_into_a_flame_that_is_kept():
    moderator = stream({"CO2": 1.0}, 25.0, 1.2)
    settings = {"flue_temperature": "1400 degC", "excess": "2 %"}
    feeds = {"fuel": (FUEL,), "oxidiser": OXYGEN, "moderator": moderator}
    tight = run("burner", settings, **feeds)
    leaky = run("burner", {**settings, "air_leak": "5 %"}, **feeds, leak=AIR)
    assert leaky.outlets["flue"].temperature == pytest.approx(1673.15, abs=1e-6)
    assert leaky.drawn["moderator"] < tight.drawn["moderator"]
    rest = FUEL.total + leaky.drawn["oxidiser"] + leaky.drawn["moderator"]
    assert leaky.drawn["leak"] == pytest.approx(0.05 * rest, rel=1e-14)


def test_enrichment_out_of_reach_says_what_is_there():
    settings = {"enrichment": "99 %"}
    outcome = run("burner", settings, fuel=(FUEL,), oxidiser=AIR, oxygen=OXYGEN)
    assert (
        "between the 20.7 % of the oxidiser and the 98 % of the oxygen" in outcome.unmet["oxygen"]
    )


def test_nitric_oxide_falls_with_a_colder_flame_and_without_nitrogen():
    hot, thin = (
        run("burner", {"excess": excess}, fuel=(FUEL,), oxidiser=AIR).results
        for excess in ("10 %", "120 %")
    )
    assert hot["upper_NO_fraction"] > 5 * thin["upper_NO_fraction"] > 0.0
    fuel = stream({"CH4": 1.0}, 25.0, 1.2)
    pure = run("burner", {}, fuel=(fuel,), oxidiser=stream({"O2": 1.0}, 25.0, 1.2)).results
    assert pure["upper_NO_fraction"] == 0.0
    dry = stream({"CO": 1.0}, 25.0, 1.2)
    assert (
        "dew_point_K"
        not in run("burner", {}, fuel=(dry,), oxidiser=stream({"O2": 1.0}, 25.0, 1.2)).results
    )


def test_below_its_dew_point_a_flue_is_wet():
    for slack, wet in ((-1.0, True), (1.0, False)):
        first = run("burner", {"temperature": "300 degC"}, fuel=(FUEL,), oxidiser=AIR)
        level = first.results["dew_point_K"] + slack
        flue = run("burner", {"temperature": level}, fuel=(FUEL,), oxidiser=AIR).outlets["flue"]
        assert bool(flue.water.any()) == wet


# -------------------------------------------------------------------------------------- engine
ENGINE = {"efficiency": "42 % LHV", "temperature": "120 degC", "excess": "80 %"}


def duties(outcome):
    return {name: sum(d.heat for d in outcome.duties if d.purpose == name) for name in NAMES}


NAMES = ("jacket and exhaust cooling", "jacket", "exhaust cooling", "generator and radiation")


def test_the_heat_is_the_same_however_it_is_split():
    ways = ({}, {"exhaust": "430 degC"}, {"jacket_share": "18 %"})
    found = [run("engine", ENGINE | way, fuel=(FUEL,), oxidiser=AIR) for way in ways]
    heats = [o.heat for o in found]
    assert heats == pytest.approx([heats[0]] * 3, rel=1e-12)
    assert duties(found[0])["jacket"] == 0.0


def test_exhaust_and_jacket_each_say_the_other():
    first = run("engine", {**ENGINE, "exhaust": "430 degC"}, fuel=(FUEL,), oxidiser=AIR)
    share = first.results["jacket_heat_W"] / first.results["fuel_W"]
    second = run("engine", {**ENGINE, "jacket_share": share}, fuel=(FUEL,), oxidiser=AIR)
    assert second.results["exhaust_K"] == pytest.approx(703.15, abs=1e-6)
    flue = first.outlets["flue"]
    hot = stream(dict(zip(MATTER.components, flue.flows, strict=True)), 430.0, 1.2)
    assert duties(first)["exhaust cooling"] == pytest.approx(flue.enthalpy - hot.enthalpy)


def test_what_neither_takes_is_lost_to_the_surroundings():
    settings = {**ENGINE, "exhaust": "400 degC", "jacket_share": "15 %"}
    found = run("engine", settings, outlets=("heat",), fuel=(FUEL,), oxidiser=AIR)
    assert duties(found)["jacket"] == pytest.approx(-0.15 * found.results["fuel_W"])
    lost = duties(found)["generator and radiation"]
    assert lost < 0.0
    assert found.outlets["heat"].rate == pytest.approx(-found.heat + lost, rel=1e-12)
    assert found.outlets["heat"].start == pytest.approx(673.15)


@pytest.mark.parametrize(
    ("way", "says"),
    [
        ({"exhaust": "1300 degC"}, "power, jacket and exhaust carry more"),
        ({"jacket_share": "60 %"}, "power, jacket and exhaust carry more"),
        ({"efficiency": "99 % LHV"}, "power and flue carry more"),
    ],
)
def test_an_engine_that_is_too_good_is_said(way, says):
    found = run("engine", ENGINE | way, fuel=(FUEL,), oxidiser=AIR)
    (caution,) = found.cautions
    assert says in caution.text

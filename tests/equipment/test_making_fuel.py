"""Shift, methanation and reforming: what is called, what is held, and what is refused."""

import numpy as np
import pytest
from pydantic import ValidationError

from chainflow.equipment.base import Site
from chainflow.equipment.carbon_margin import cooling_activity
from chainflow.equipment.junctions import joined
from chainflow.equipment.register import kinds
from chainflow.thermo.carbon import carbon_activities
from tests.equipment.feeds import MATTER, METHANOL, stream

RNG = np.random.default_rng(20)
OXYGEN = stream({"O2": 1.0}, 25.0, 20.0)
STEAM = stream({"H2O": 1.0}, 300.0, 20.0)
HYDROGEN_RICH = stream({"H2": 4.0, "CO2": 1.0}, 250.0, 20.0)
GAS = stream({"CH4": 1.0, "CO2": 0.1, "H2": 0.1}, 400.0, 20.0)


def made(kind, **settings):
    return kinds()[kind].model_validate(settings)


def run(piece, **feeds):
    return piece.operate(feeds, {}, Site(MATTER, inlets=frozenset(feeds)))


def codes(outcome):
    return {caution.code for caution in outcome.cautions}


def feeding(*, hydrogen, monoxide, celsius, bar):
    gas = {"H2": hydrogen, "CO2": 1.0 - monoxide, "CO": monoxide}
    return stream(gas, celsius, bar)


# ------------------------------------------------------------------------------- heat by oxygen
def test_oxygen_brings_the_shift_to_its_temperature():
    piece = made("shift-reactor", temperature="900 degC", autothermal=True)
    feed = stream({"H2": 3.0, "CO2": 1.0}, 400.0, 20.0)
    outcome = run(piece, feed=feed, oxygen=OXYGEN)
    product = outcome.outlets["product"]
    assert product.temperature == pytest.approx(1173.15, abs=1e-6)
    assert outcome.duties == ()
    brought = feed.enthalpy + outcome.drawn["oxygen"] * OXYGEN.enthalpy
    assert product.enthalpy == pytest.approx(brought, rel=1e-14)
    heated = run(made("shift-reactor", temperature="900 degC"), feed=feed)
    # hydrogen's 241.8 kJ/mol has to bring the oxygen and the steam it makes to temperature too
    burnt = outcome.drawn["oxygen"] * 2 * 241.8e3
    assert heated.heat < burnt < 1.2 * heated.heat


def test_a_hotter_feed_wants_less_oxygen_and_air_more_than_oxygen():
    piece = made("reformer", temperature="950 degC", steam_to_carbon=1.5, autothermal=True)
    amounts = [
        run(piece, feed=stream({"CH4": 1.0}, level, 20.0), steam=STEAM, oxygen=OXYGEN).drawn[
            "oxygen"
        ]
        for level in (200.0, 400.0, 600.0)
    ]
    assert amounts[0] > amounts[1] > amounts[2] > 0.3
    air = stream({"O2": 0.21, "N2": 0.79}, 25.0, 20.0)
    with_air = run(piece, feed=GAS, steam=STEAM, oxygen=air).drawn["oxygen"] * 0.21
    assert with_air > run(piece, feed=GAS, steam=STEAM, oxygen=OXYGEN).drawn["oxygen"]


@pytest.mark.parametrize(
    ("feed", "served", "says"),
    [
        (stream({"H2": 3.0, "CO2": 1.0}, 1100.0, 20.0), OXYGEN, "hotter than 800 degC without any"),
        (stream({"H2": 0.01, "CO2": 1.0}, 30.0, 20.0), OXYGEN, "even if all of the feed burns"),
        (stream({"H2": 3.0, "CO2": 1.0}, 400.0, 20.0), STEAM, "brings no oxygen"),
    ],
)
def test_oxygen_that_cannot_do_it_says_why(feed, served, says):
    piece = made("shift-reactor", temperature="800 degC", autothermal=True)
    assert says in run(piece, feed=feed, oxygen=served).unmet["oxygen"]


def test_a_hundred_autothermal_reactors_reach_their_temperature():
    for _ in range(100):
        level, bar = RNG.uniform(700.0, 1300.0), RNG.uniform(1.0, 40.0)
        piece = made(
            "reformer", temperature=level + 273.15, autothermal=True, approach=RNG.uniform(0, 50)
        )
        gas = {"CH4": 1.0, "H2O": RNG.uniform(0.0, 3.0), "CO2": RNG.uniform(0.0, 2.0)}
        feed = stream(gas, RNG.uniform(300.0, 600.0), bar)
        outcome = run(piece, feed=feed, oxygen=stream({"O2": 1.0}, 25.0, bar))
        product = outcome.outlets["product"]
        assert not outcome.unmet
        assert product.temperature == pytest.approx(level + 273.15, abs=1e-6)
        assert 0.0 < outcome.drawn["oxygen"] < 2.0
        assert outcome.results["carbon_activity"] > 0.0


# ----------------------------------------------------------------------------------- reformer
def test_steam_is_called_for_the_carbon_to_be_reformed():
    piece = made("reformer", temperature="850 degC", steam_to_carbon=3)
    wet = stream({"CH4": 1.0, "CO": 0.5, "CO2": 0.2, "H2O": 0.4}, 400.0, 20.0)
    outcome = run(piece, feed=wet, steam=STEAM)
    assert outcome.drawn["steam"] == pytest.approx(3.0 - 0.4, rel=1e-14)
    moist = stream({"H2O": 0.9, "CH4": 0.1}, 300.0, 20.0)
    # x (0.9 - 3 * 0.1) = 2.6
    assert run(piece, feed=wet, steam=moist).drawn["steam"] == pytest.approx(2.6 / 0.6)


def test_more_steam_converts_more_and_lowers_the_carbon_activity():
    found = [
        run(made("reformer", temperature="850 degC", steam_to_carbon=s), feed=GAS, steam=STEAM)
        for s in (2.0, 3.0, 4.0)
    ]
    converted = [o.results["conversion_CH4"] for o in found]
    carbon = [o.results["carbon_activity"] for o in found]
    assert converted == sorted(converted)
    assert carbon == sorted(carbon, reverse=True)
    lagging = made("reformer", temperature="850 degC", steam_to_carbon=3, approach="20 K")
    assert run(lagging, feed=GAS, steam=STEAM).results["conversion_CH4"] < converted[1]


def test_too_much_water_in_the_feed_is_said():
    piece = made("reformer", temperature="850 degC", steam_to_carbon=2)
    wet = stream({"CH4": 1.0, "H2O": 2.5}, 400.0, 20.0)
    assert "0.5 mol/s of steam more" in run(piece, feed=wet, steam=STEAM).unmet["steam"]
    assert "brings no water" in run(piece, feed=GAS, steam=GAS).unmet["steam"]


def test_cautions_of_the_reformer():
    hot = made("reformer", temperature="1000 degC", steam_to_carbon=3)
    assert "above-tube-window" in codes(run(hot, feed=GAS, steam=STEAM))
    dry = run(
        made("reformer", temperature="850 degC"), feed=stream({"CH4": 1.0, "CO2": 0.5}, 400.0)
    )
    assert {"carbon-activity", "dusting-when-cooled"} <= codes(dry)
    prudent = made("reformer", temperature="800 degC", steam_to_carbon=2.0, carbon_margin=0.1)
    assert "carbon-activity" in codes(run(prudent, feed=GAS, steam=STEAM))
    water = stream({"H2O": 1.0}, 25.0, 20.0)
    cold = stream({"CH4": 1.0}, 25.0, 20.0)
    piece = made("reformer", temperature="850 degC", steam_to_carbon=3)
    assert "wet-feed" in codes(run(piece, feed=cold, steam=water))


# -------------------------------------------------------------------------------------- carbon
def test_metal_dusting_is_feared_where_the_product_is_cooled():
    feed = stream({"H2": 2.0, "CO2": 1.0}, 300.0, 10.0)
    hot = run(made("shift-reactor", temperature="900 degC"), feed=feed)
    assert hot.results["carbon_activity"] < 1.0 < hot.results["carbon_activity_cooling"]
    assert "dusting-when-cooled" in codes(hot)
    assert "metal-dusting" not in codes(hot)
    (said,) = [c.text for c in hot.cautions if c.code == "dusting-when-cooled"]
    onset = float(said.partition("above 1 from ")[2].partition(" degC")[0])
    product = hot.outlets["product"]
    by_route = [
        carbon_activities(MATTER, product.flows, t + 273.15, 10e5) for t in (onset - 2, onset + 2)
    ]
    below, above = (max(a["boudouard"], a["water-gas"]) for a in by_route)
    assert above < 1.0 < below
    moved = made(
        "shift-reactor", temperature="900 degC", dusting_from="850 degC", dusting_to="890 degC"
    )
    assert "dusting-when-cooled" not in codes(run(moved, feed=feed))
    methane = stream({"CH4": 1.0, "H2": 0.01, "CO2": 1e-5, "CO": 1e-8}, 780.0, 10.0)
    assert cooling_activity(methane, 723.15, 1073.15).activity < 1.0  # soot, but no dusting
    cold = run(made("shift-reactor", temperature="400 degC"), feed=feed)
    assert "carbon_activity_cooling" not in cold.results


def test_carbon_before_the_catalyst_is_reported():
    feed = stream({"H2": 1.0, "CO": 1.0, "CO2": 0.3, "H2O": 0.01, "CH4": 0.1}, 550.0, 10.0)
    outcome = run(made("shift-reactor", temperature="900 degC"), feed=feed)
    assert outcome.results["carbon_activity_inlet"] > 1.0
    assert "carbon-at-inlet" in codes(outcome)


# --------------------------------------------------------------------------------------- beds
def bed_results(**settings):
    return run(made("methanation-reactor", **settings), feed=HYDROGEN_RICH)


def test_one_bed_without_a_limit_is_the_adiabatic_reactor():
    train = bed_results(beds=1).outlets["product"]
    alone = run(made("methanation-reactor", adiabatic=True), feed=HYDROGEN_RICH)
    assert train.temperature == pytest.approx(alone.outlets["product"].temperature, abs=1e-7)
    assert train.flows == pytest.approx(alone.outlets["product"].flows, rel=1e-10)


def test_the_recycle_is_the_one_that_a_closed_loop_has():
    """Feed the found recycle to a plain adiabatic reactor: it ends at the limit."""
    outcome = bed_results(beds=1, bed_limit="550 degC", bed_inlet="250 degC")
    product, ratio = outcome.outlets["product"], outcome.results["bed_1_recycle_ratio"]
    share = ratio * HYDROGEN_RICH.total / product.total
    cooled = stream(dict(zip(MATTER.components, share * product.flows, strict=True)), 250.0, 20.0)
    mixed = joined((HYDROGEN_RICH, cooled), MATTER)
    again = run(made("methanation-reactor", adiabatic=True), feed=mixed).outlets["product"]
    assert again.temperature == pytest.approx(823.15, abs=1e-6)
    assert again.flows == pytest.approx((1.0 + share) * product.flows, rel=1e-9)


def test_a_lower_limit_wants_more_recycle_and_converts_more():
    found = [bed_results(beds=1, bed_limit=f"{level} degC").results for level in (650, 550, 450)]
    ratios = [r["bed_1_recycle_ratio"] for r in found]
    assert ratios == sorted(ratios)
    shares = [r["conversion_CO2"] for r in found]
    assert shares == sorted(shares)


@pytest.mark.parametrize("hold", ["recycle", "steam"])
def test_no_bed_passes_its_limit(hold):
    """A hundred random trains."""
    for _ in range(50):
        limit = RNG.uniform(430.0, 700.0)
        bar = RNG.uniform(5.0, 30.0)
        settings = {
            "beds": int(RNG.integers(1, 5)),
            "bed_inlet": RNG.uniform(240.0, 300.0) + 273.15,
            "bed_limit": limit + 273.15,
            "hold": hold,
            "approach": RNG.uniform(0.0, 30.0),
            "pressure_drop": 0.3e5,
        }
        feed = feeding(
            hydrogen=RNG.uniform(3.6, 4.4),
            monoxide=RNG.uniform(0.0, 0.9),
            celsius=RNG.uniform(30.0, 280.0),
            bar=bar,
        )
        feeds = {"feed": feed}
        if hold == "steam":
            feeds["steam"] = stream({"H2O": 1.0}, 290.0, bar)
        outcome = run(made("methanation-reactor", **settings), **feeds)
        assert not outcome.unmet
        assert outcome.results["hottest_bed_K"] <= limit + 273.15 + 1e-6
        product = outcome.outlets["product"]
        entering = feed.flows + (
            outcome.drawn["steam"] * feeds["steam"].flows if hold == "steam" else 0.0
        )
        lost = MATTER.formula @ (product.flows - entering)
        assert np.abs(lost).max() <= 1e-13 * entering.sum()


def test_a_colder_bed_after_a_knock_out_makes_better_gas():
    plain = bed_results(beds=3, bed_limit="550 degC", bed_inlet="250 degC")
    dried = bed_results(beds=3, bed_limit="550 degC", bed_inlet="250 degC", knock_out="40 degC")
    last = bed_results(
        beds=3, bed_limit="550 degC", bed_inlet="250 degC", knock_out="40 degC", knock_outs="last"
    )
    order = [o.results["dry_fraction_CH4"] for o in (plain, dried, last)]
    assert order[0] < min(order[1:])
    water = dried.outlets["liquid"]
    assert water.fraction("H2O") > 0.99
    assert dried.results["condensed_mol_s"] == pytest.approx(water.total)
    assert len([d for d in dried.duties if d.purpose.startswith("cooling and condensing")]) > 2


def test_the_blower_costs_what_its_pressure_drop_says():
    free = bed_results(beds=1, bed_limit="550 degC")
    paid = bed_results(beds=1, bed_limit="550 degC", pressure_drop="1 bar")
    assert "drop-free-recycle" in codes(free)
    assert "drop-free-recycle" not in codes(paid)
    assert free.power == 0.0
    # ideal gas: n R T dp / p / efficiency; methane, steam and CO2 at 19 bar are a few % denser
    amount = paid.results["recycle_mol_s"]
    expected = amount * 8.314 * 523.15 * 1.0 / 19.0 / 0.75
    assert paid.power == pytest.approx(expected, rel=0.05)
    assert paid.drawn["power"] == paid.power


def test_cautions_of_the_train():
    hot = bed_results(beds=2)
    assert "above-catalyst-window" in codes(hot)
    assert "wet-bed" in codes(
        run(
            made("methanation-reactor", beds=1, bed_inlet="160 degC"),
            feed=stream({"H2": 4.0, "CO2": 1.0, "H2O": 5.0}, 250.0, 30.0),
        )
    )
    carbonyl = made("methanation-reactor", beds=2, bed_inlet="160 degC")
    assert "nickel-carbonyl" in codes(
        run(carbonyl, feed=stream({"H2": 3.0, "CO": 1.0}, 30.0, 20.0))
    )
    poor = bed_results(beds=1, bed_limit="600 degC", gas_group="H")
    assert "outside-gas-group" in codes(poor)
    ours = bed_results(beds=1, bed_limit="550 degC", catalyst_limit="500 degC")
    assert any("of 'catalyst_limit'" in c.text for c in ours.cautions)


def test_what_cannot_hold_a_bed_says_so():
    piece = made("methanation-reactor", beds=1, bed_limit="450 degC", hold="steam")
    outcome = run(piece, feed=HYDROGEN_RICH, steam=stream({"H2": 3.0, "CO": 1.0}, 250.0, 20.0))
    assert "no amount of steam is enough" in outcome.unmet["steam"]


# ---------------------------------------------------------------------------- wrong settings
@pytest.mark.parametrize(
    ("kind", "settings", "says"),
    [
        ("methanation-reactor", {"bed_limit": "550 degC"}, "'bed_limit' is given but no 'beds'"),
        ("methanation-reactor", {"beds": 2, "temperature": "300 degC"}, "'beds' and 'temperature'"),
        ("methanation-reactor", {"beds": 2, "conversion": "80 %"}, "'beds' and 'conversion'"),
        ("methanation-reactor", {"beds": 2, "duty": "1 kW"}, "'beds' and 'duty'"),
        (
            "methanation-reactor",
            {"beds": 2, "bed_inlet": "400 degC", "bed_limit": "300 degC"},
            "wanted above the 'bed_inlet' of 400 degC",
        ),
        ("methanation-reactor", {"beds": 2, "hold": "steam"}, "wants the 'bed_limit'"),
        ("methanation-reactor", {"beds": 1, "knock_out": "40 degC"}, "wanted 2 or more 'beds'"),
        ("methanation-reactor", {"beds": 9}, "less than or equal to 6"),
        ("shift-reactor", {"autothermal": True}, "'autothermal' wants the 'temperature'"),
        (
            "shift-reactor",
            {"autothermal": True, "temperature": "900 degC", "conversion": "50 %"},
            "leave 'conversion' out",
        ),
        ("shift-reactor", {"dusting_from": "900 degC"}, "'dusting_from' is not below"),
        ("reformer", {"temperature": "900 degC", "adiabatic": True}, "wanted one of them"),
        ("reformer", {"steam_to_carbon": -1}, "out of range"),
        ("engine", {"efficiency": "40 %", "temperature": 400.0, "exhaust": 390.0}, "'exhaust' is"),
        ("burner", {"enrichment": "120 %"}, "out of range"),
    ],
)
def test_wrong_settings_get_one_sentence(kind, settings, says):
    with pytest.raises(ValidationError) as caught:
        made(kind, **settings)
    (error,) = caught.value.errors()
    assert says in error["msg"]


def test_inlets_at_different_pressures_are_refused():
    piece = made("reformer", temperature="850 degC", steam_to_carbon=3)
    ((port, text),) = piece.pressure_faults({"feed": (20e5,), "steam": (30e5,)})
    assert port == "steam"
    assert "within 10 %" in text


@pytest.mark.parametrize(
    ("kind", "settings", "ports"),
    [
        ("shift-reactor", {}, set()),
        ("shift-reactor", {"autothermal": True, "temperature": "900 degC"}, {"oxygen"}),
        ("reformer", {"steam_to_carbon": 3}, {"steam"}),
        ("methanation-reactor", {"beds": 2, "knock_out": "40 degC"}, {"liquid"}),
        ("methanation-reactor", {"beds": 2, "bed_limit": "600 degC", "hold": "steam"}, {"steam"}),
        ("burner", {"air_leak": "2 %", "enrichment": "30 %"}, {"leak", "oxygen"}),
    ],
)
def test_ports_are_there_when_they_are_of_use(kind, settings, ports):
    found = {port.name for port in made(kind, **settings).port_list()}
    assert found & {"oxygen", "steam", "liquid", "leak"} == ports


# ------------------------------------------------------------------------ beyond equilibrium
def test_a_conversion_beyond_equilibrium_is_doubted_and_told_where_it_ends():
    """At 700 degC, 10 bar and H2/CO2 = 3: what the equilibrium itself says is the border."""
    feed = stream({"H2": 3.0, "CO2": 1.0}, 300.0, 10.0)
    free = run(made("shift-reactor", temperature="700 degC", methane="excluded"), feed=feed)
    most = free.results["conversion_CO2"]
    for share, doubted in ((0.98, False), (1.0, False), (1.02, True)):
        piece = made("shift-reactor", temperature="700 degC", conversion=f"{100 * most * share} %")
        said = [c.text for c in run(piece, feed=feed).cautions if c.code == "beyond-equilibrium"]
        assert bool(said) is doubted
    assert f"ends at {100 * most:.3g} % of the CO2" in said[0]
    assert "at 700 degC" in said[0]


def test_reactions_of_a_reactor_are_doubted_one_by_one():
    """Methanol at 250 degC, 50 bar: Q of the shift is 0.0144, its K 0.012 (NASA data)."""
    shift = {"equation": "CO2 + H2 -> CO + H2O", "conversion": {"CO2": "10 %"}}
    methanol = {"equation": "CO2 + 3 H2 -> CH3OH + H2O", "conversion": {"CO2": "10 %"}}
    piece = made("reactor", reactions=[methanol, shift], temperature="250 degC")
    feed = stream({"H2": 3.0, "CO2": 1.0, "CO": 0.05, "N2": 0.05}, 210.0, 50.0, METHANOL)
    outcome = piece.operate({"feed": feed}, {}, Site(METHANOL))
    (said,) = [c.text for c in outcome.cautions if c.code == "beyond-equilibrium"]
    assert "'CO2 + H2 -> CO + H2O'" in said
    burning = {"equation": "CH4 + 2 O2 -> CO2 + 2 H2O", "conversion": {"CH4": "100 %"}}
    hot = made("reactor", reactions=[burning], temperature="1000 degC")
    assert "beyond-equilibrium" not in codes(
        run(hot, feed=stream({"CH4": 1.0, "O2": 2.0, "N2": 8.0}, 25.0, 1.0))
    )

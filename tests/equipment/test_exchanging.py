"""Heat exchangers, boilers and what a compressor can be told: limits, pinches, refusals."""

import numpy as np
import pytest
from pydantic import ValidationError

from chainflow.equipment.base import Site
from chainflow.equipment.boiler import Boiler
from chainflow.equipment.compression import Compressor
from chainflow.equipment.exchanger import HeatExchanger
from chainflow.equipment.ports import Heat
from chainflow.equipment.pressure_split import least_work_pressures
from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.compression import isentropic
from chainflow.thermo.dew import dew_temperature
from chainflow.thermo.polytropic import polytropic_temperature
from chainflow.thermo.streams import Stream
from chainflow.thermo.water import condenses, saturation_temperature

MATTER = Matter.of(DEFAULT_COMPONENTS)
WET = {"CH4": 1.0, "H2O": 2.0, "H2": 0.2}


def stream(amounts, celsius=25.0, bar=1.0):
    return Stream.at(MATTER, MATTER.vector(amounts), celsius + 273.15, bar * 1e5)


def smallest_gap(hot, cold, outcome, places=400):
    """The least temperature difference along an exchanger, by brute force over the heat."""
    heat = outcome.results["duty_W"]
    gaps = []
    for share in np.linspace(0.0, 1.0, places):
        warm = Stream.from_enthalpy(
            MATTER, hot.flows, hot.enthalpy - share * heat, float(hot.pressure), hot.temperature
        )
        cool = Stream.from_enthalpy(
            MATTER, cold.flows, cold.enthalpy + (1 - share) * heat, float(cold.pressure), 350.0
        )
        gaps.append(warm.temperature - cool.temperature)
    return min(gaps)


PAIRS = [
    ("gases, cold side smaller", stream({"N2": 3.0}, 400, 5), stream({"H2": 1.0}, 30, 12)),
    ("gases, hot side smaller", stream({"N2": 1.0}, 400, 5), stream({"H2": 4.0}, 30, 12)),
    ("hot side condenses", stream(WET, 320, 12), stream({"H2": 4.0, "CO2": 1.0}, 30, 12)),
    ("steam condenses", stream({"H2O": 1.0}, 200, 5), stream({"N2": 12.0}, 30, 2)),
    ("cold side boils", stream({"N2": 6.0}, 400, 5), stream({"H2O": 1.0}, 25, 6)),
    ("both", stream(WET, 320, 12), stream({"H2O": 1.0}, 25, 6)),
    ("wet gas dries", stream({"N2": 3.0}, 300, 5), stream({"H2": 3.0, "H2O": 0.5}, 30, 12)),
]


@pytest.mark.parametrize(("hot", "cold"), [p[1:] for p in PAIRS], ids=[p[0] for p in PAIRS])
def test_the_approach_is_kept_everywhere_and_reached_somewhere(hot, cold):
    outcome = HeatExchanger(approach=10.0).run({"hot": hot, "cold": cold})
    assert outcome.results["approach_K"] == pytest.approx(10.0, abs=2e-3)
    gap = smallest_gap(hot, cold, outcome)
    assert 10.0 - 2e-3 <= gap <= 10.6  # the 400 places may miss the kink itself
    assert outcome.results["duty_W"] > 0.0


def test_the_pinch_is_at_the_dew_point_of_a_hot_side_that_condenses():
    hot, cold = PAIRS[2][1:]
    outcome = HeatExchanger().run({"hot": hot, "cold": cold})
    dew = dew_temperature(MATTER, hot.flows, hot.pressure)
    assert outcome.results["pinch_K"] == pytest.approx(dew, abs=1e-6)
    assert condenses(MATTER, hot.flows, dew - 1e-6, hot.pressure)
    assert not condenses(MATTER, hot.flows, dew + 1e-6, hot.pressure)


def test_more_approach_passes_less_heat():
    hot, cold = PAIRS[2][1:]
    heats = [
        HeatExchanger(approach=a).run({"hot": hot, "cold": cold}).results["duty_W"]
        for a in (1.0, 5.0, 20.0, 80.0, 250.0)
    ]
    assert heats == sorted(heats, reverse=True)


def test_conductance_of_two_gases_is_that_of_the_logarithmic_mean():
    # of constant heat capacities; these vary by some percent over 350 K
    hot, cold = PAIRS[0][1:]
    outcome = HeatExchanger(duty=5e3).run({"hot": hot, "cold": cold})
    warm, cool = outcome.outlets["hot_out"], outcome.outlets["cold_out"]
    one = hot.temperature - cool.temperature
    other = warm.temperature - cold.temperature
    mean = (one - other) / np.log(one / other)
    assert outcome.results["mean_difference_K"] == pytest.approx(mean, rel=0.01)


def test_an_aim_is_met_unless_it_pinches():
    hot, cold = PAIRS[2][1:]
    aim = HeatExchanger(cold_outlet=450.0).run({"hot": hot, "cold": cold})
    assert aim.outlets["cold_out"].temperature == pytest.approx(450.0, abs=1e-6)
    assert not aim.cautions
    too_much = HeatExchanger(hot_outlet=305.0).run({"hot": hot, "cold": cold})
    most = HeatExchanger().run({"hot": hot, "cold": cold})
    assert too_much.results["duty_W"] == most.results["duty_W"]
    assert [c.code for c in too_much.cautions] == ["pinched"]
    with pytest.raises(ValidationError, match="give at most one of hot_outlet, duty"):
        HeatExchanger(hot_outlet=305.0, duty=1e3)
    with pytest.raises(ValidationError, match="out of range"):
        HeatExchanger(approach=0.0)


def test_no_heat_passes_from_cold_to_hot():
    hot, cold = PAIRS[0][1:]
    outcome = HeatExchanger().run({"hot": cold, "cold": hot})
    assert outcome.results["duty_W"] == 0.0
    assert [c.code for c in outcome.cautions] == ["hot-not-hot"]


def test_a_hundred_random_exchangers_make_entropy():
    random = np.random.default_rng(5)
    for _ in range(100):
        hot = stream({"N2": 1.0, "H2O": random.uniform(0, 3)}, random.uniform(150, 600), 8.0)
        cold = stream({"H2": random.uniform(0, 2), "H2O": random.uniform(0.1, 2)}, 25.0, 8.0)
        outcome = HeatExchanger(approach=random.uniform(1, 30)).run({"hot": hot, "cold": cold})
        after = sum(s.entropy for s in outcome.outlets.values())
        assert after >= hot.entropy + cold.entropy - 1e-9 * abs(hot.entropy)


# --------------------------------------------------------------------------------------- boiler
WATER = stream({"H2O": 1.0}, 25.0, 90.0)


def test_a_boiler_keeps_its_approach_where_boiling_begins():
    hot = stream({"N2": 10.0, "CO2": 2.0}, 500.0, 1.1)
    outcome = Boiler(pressure=10e5, approach=15.0).run({"hot": hot, "water": WATER})
    boiling = saturation_temperature(10e5)
    assert outcome.results["pinch_K"] == pytest.approx(boiling + 15.0, abs=1e-3)
    # hand check: the heat given down to the pinch boils the steam
    at_pinch = Stream.at(MATTER, hot.flows, boiling + 15.0, hot.pressure)
    steam = Stream.gaseous(MATTER, MATTER.vector({"H2O": 1.0}), boiling, 10e5)
    latent = steam.enthalpy - MATTER.water_enthalpy(MATTER.vector({"H2O": 1.0}), boiling, 10e5)
    expected = (hot.enthalpy - at_pinch.enthalpy) / latent
    assert outcome.results["steam_mol_s"] == pytest.approx(expected, rel=1e-6)


def test_a_boiler_on_isothermal_heat_uses_all_of_it():
    heat = Heat(3e5, 573.15, 573.15, 573.15)
    outcome = Boiler(pressure=40e5).run({"heat": (heat,), "water": WATER})
    assert outcome.results["duty_W"] == pytest.approx(3e5, rel=1e-12)
    assert outcome.drawn["water"] == pytest.approx(outcome.results["steam_mol_s"])


def test_blowdown_and_superheat_cost_steam():
    hot = stream({"N2": 10.0, "CO2": 2.0}, 700.0, 1.1)
    plain, drawn, hotter = (
        Boiler(pressure=20e5, **more).run({"hot": hot, "water": WATER}).results["steam_mol_s"]
        for more in ({}, {"blowdown": 0.05}, {"superheat": 150.0})
    )
    assert plain > drawn
    assert plain > hotter


def test_a_hot_limit_is_kept():
    hot = stream({"N2": 10.0, "CO2": 2.0}, 700.0, 1.1)
    outcome = Boiler(pressure=2e5, hot_limit=450.0).run({"hot": hot, "water": WATER})
    assert outcome.outlets["hot_out"].temperature >= 450.0 - 1e-6


def test_heat_too_cold_raises_nothing_and_goes_on():
    heat = Heat(3e5, 450.0, 450.0, 450.0)
    site = Site(MATTER, inlets=frozenset({"heat", "water"}), outlets=frozenset({"heat"}))
    outcome = Boiler(pressure=40e5).run({"heat": (heat,), "water": WATER}, {}, site)
    assert outcome.drawn["water"] == 0.0
    assert outcome.outlets["heat"].rate == pytest.approx(3e5)
    assert [c.code for c in outcome.cautions] == ["hot-not-hot"]


def test_wrong_boilers_are_refused():
    ((path, text),) = Boiler(pressure=230e5).setting_faults(MATTER)
    assert path == ("pressure",)
    assert "water does not boil at 230 bar" in text
    ((port, text),) = Boiler(pressure=40e5).pressure_faults({"water": (1e5,), "hot": (1e5,)})
    assert port == "water"
    assert "put a pump between" in text


# ----------------------------------------------------------------------------------- compressor
def test_a_polytropic_path_is_many_small_isentropic_stages():
    flows = MATTER.vector({"CO2": 1.0})
    end = polytropic_temperature(MATTER, flows, 308.15, 5e5, 20e5, 0.8)

    def by_stages(count):
        level = 308.15
        for i in range(count):
            low, high = (5e5 * 4.0 ** ((i + k) / count) for k in (0, 1))
            work = isentropic(MATTER, flows, level, low, high).work / 0.8
            enthalpy = MATTER.gas_enthalpy(flows, level, low) + work
            level = Stream.from_enthalpy(MATTER, flows, enthalpy, high, level).temperature
        return level

    coarse, fine = by_stages(50), by_stages(100)  # first order in the number of stages
    assert fine - coarse == pytest.approx(end - fine, rel=0.05)
    assert end == pytest.approx(2 * fine - coarse, abs=2e-3)


def test_a_perfect_polytropic_path_is_isentropic():
    flows = MATTER.vector({"CH4": 1.0, "H2": 0.3})
    end = polytropic_temperature(MATTER, flows, 300.0, 1e5, 4e5, 1.0)
    assert end == pytest.approx(isentropic(MATTER, flows, 300.0, 1e5, 4e5).temperature, abs=1e-4)


def test_equal_ratios_are_best_for_a_gas_that_is_nearly_ideal():
    gas = MATTER.vector({"N2": 1.0})
    levels = least_work_pressures(MATTER, gas, [298.15] * 3, 1e3, 27e3)
    assert levels == pytest.approx([1e3, 3e3, 9e3, 27e3], rel=2e-4)


@pytest.mark.parametrize("gas", [{"H2": 1.0}, {"CO2": 1.0}, {"CH4": 1.0, "CO2": 0.5}])
def test_the_best_split_takes_the_least_work(gas):
    inlet = stream(gas, 80.0, 2.0)  # warmer than the other suctions: the first stage does less
    train = {"pressure": 40e5, "stages": 3, "intercool": 303.15}
    best = Compressor(**train, split="least-work").run({"inlet": inlet})
    equal = Compressor(**train).run({"inlet": inlet})
    assert best.results["work_W"] < equal.results["work_W"]
    levels = [stage.low for stage in best.inner]
    assert levels[1] / levels[0] < (40 / 2) ** (1 / 3)
    flows = MATTER.vector(gas)

    def work(one, two):
        pairs = ((353.15, 2e5, one), (303.15, one, two), (303.15, two, 40e5))
        return sum(isentropic(MATTER, flows, *pair).work for pair in pairs)

    least = work(levels[1], levels[2])
    for i in (1, 2):
        for factor in (0.98, 1.02):
            other = list(levels)
            other[i] *= factor
            assert work(other[1], other[2]) > least


def test_cooling_and_knock_out_are_reported():
    wet = stream({"CO2": 3.0, "H2O": 0.2}, 45.0, 1.1)
    outcome = Compressor(pressure=30e5, stages=3, aftercool=308.15).run({"inlet": wet})
    assert outcome.results["cooling_W"] == pytest.approx(
        sum(d.heat for d in outcome.duties if "cooling" in d.purpose), rel=1e-9
    )
    assert outcome.results["knocked_out_mol_s"] == pytest.approx(
        outcome.outlets["condensate"].total, rel=1e-9
    )

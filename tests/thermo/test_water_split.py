"""The split of a wet gas: balances, equilibrium, edges, slopes."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.validity import StateError
from chainflow.thermo.water import (
    condenses,
    henry_constant,
    saturation_pressure,
    split_slopes,
    water_split,
    water_split_slopes,
)

MATTER = Matter.of(DEFAULT_COMPONENTS)
WET = MATTER.vector({"H2": 4.0, "CO2": 1.0, "H2O": 1.0, "CH4": 0.3})
ALL = ("CO2", "H2", "CH4", "CO", "O2", "N2", "Ar")
STATE = (313.15, 30e5)


def test_the_gas_above_condensate_is_saturated():
    gas, water = water_split(MATTER, WET, *STATE, dissolved=())
    assert gas[4] / gas.sum() * STATE[1] == pytest.approx(saturation_pressure(STATE[0]), rel=1e-12)
    assert water[[0, 5, 6, 7]].tolist() == [0.0, 0.0, 0.0, 0.0]


def test_dissolved_gases_obey_henry_and_water_raoult():
    gas, water = water_split(MATTER, WET, *STATE, dissolved=ALL)
    y, x = gas / gas.sum(), water / water.sum()
    assert y[4] * STATE[1] == pytest.approx(x[4] * saturation_pressure(STATE[0]), rel=1e-12)
    for name in ("H2", "CO2", "CH4"):
        i = MATTER.index[name]
        assert y[i] * STATE[1] == pytest.approx(x[i] * henry_constant(name, STATE[0]), rel=1e-10)


amounts = st.lists(st.floats(0.0, 10.0), min_size=8, max_size=8)


@given(amounts, st.floats(210.0, 700.0), st.floats(1e3, 2e7))
def test_nothing_is_lost_and_nothing_negative(flows, temperature, pressure):
    flows = np.array(flows)
    gas, water = water_split(MATTER, flows, temperature, pressure, ALL)
    assert (gas >= 0.0).all()
    assert (water >= 0.0).all()
    assert np.abs(gas + water - flows).max() <= 1e-15 * max(flows.max(), 1e-300) * 4


def test_dew_point_by_the_sum_of_shares_over_constants():
    share = saturation_pressure(350.0) / 1e5
    flows = MATTER.vector({"N2": 1.0 - share, "H2O": share})
    assert not condenses(MATTER, flows, 350.0 + 1e-6, 1e5, ())
    assert condenses(MATTER, flows, 350.0 - 1e-6, 1e5, ())


def test_pure_water_is_liquid_below_and_gas_at_saturation():
    flows = MATTER.vector({"H2O": 2.0})
    pressure = saturation_pressure(380.0)
    gas, water = water_split(MATTER, flows, 380.0, pressure)
    assert (gas[4], water[4]) == (2.0, 0.0)
    gas, water = water_split(MATTER, flows, 379.99, pressure)
    assert (gas[4], water[4]) == (0.0, 2.0)


def test_soda_water_holds_all_its_gas_under_pressure():
    flows = MATTER.vector({"H2O": 1000.0, "CO2": 1.0})
    gas, _ = water_split(MATTER, flows, 300.0, 30e5)
    assert gas.sum() == 0.0
    gas, _ = water_split(MATTER, flows, 300.0, 1e5)
    assert gas[6] > 0.3


def test_no_liquid_above_the_critical_temperature_or_without_water():
    flows = MATTER.vector({"H2O": 1.0})
    assert water_split(MATTER, flows, 648.0, 300e5)[1].sum() == 0.0
    dry = Matter.of(("H2", "CO2"))
    assert water_split(dry, np.ones(2), 280.0, 60e5)[1].sum() == 0.0


def test_traces_of_gas_keep_their_digits():
    flows = MATTER.vector({"H2O": 1.0, "N2": 1e-13})
    gas, _ = water_split(MATTER, flows, 300.0, 1e5, ())
    share = saturation_pressure(300.0) / 1e5
    assert gas[2] == 1e-13
    assert gas[4] == pytest.approx(1e-13 * share / (1 - share), rel=1e-2)  # round-off of 1 mol


@pytest.mark.parametrize("dissolved", [(), ("CO2",), ALL])
@pytest.mark.parametrize(("temperature", "pressure"), [STATE, (340.0, 2e5), (300.0, 1e5)])
def test_slopes_agree_with_differences(dissolved, temperature, pressure):
    gas, water = water_split(MATTER, WET, temperature, pressure, dissolved)
    assert water.sum() > 0.0
    slopes = split_slopes(MATTER, WET, gas, water, temperature, pressure, dissolved)
    by_flows = water_split_slopes(MATTER, WET, gas, water, temperature, pressure, dissolved)
    assert (by_flows == slopes.by_flows).all()

    def liquid(flows=WET, t=temperature, p=pressure):
        return water_split(MATTER, flows, t, p, dissolved)[1]

    for place in range(8):
        step = np.zeros(8)
        step[place] = 1e-5
        if WET[place] > 0.0:
            numeric = (liquid(WET + step) - liquid(WET - step)) / 2e-5
        else:  # a one-sided difference of second order
            numeric = (4 * liquid(WET + step) - liquid(WET + 2 * step) - 3 * liquid()) / 2e-5
        assert by_flows[:, place] == pytest.approx(numeric, abs=1e-6)
    warmer = (liquid(t=temperature + 1e-3) - liquid(t=temperature - 1e-3)) / 2e-3
    assert slopes.by_temperature == pytest.approx(warmer, rel=1e-6, abs=1e-9)
    denser = (liquid(p=pressure * (1 + 1e-5)) - liquid(p=pressure * (1 - 1e-5))) / 2e-5 / pressure
    assert slopes.by_pressure == pytest.approx(denser, rel=1e-6, abs=1e-15)


def test_slopes_of_a_single_phase():
    dry = MATTER.vector({"H2": 1.0})
    assert not split_slopes(MATTER, dry, dry, 0 * dry, 300.0, 1e5).by_flows.any()
    soda = MATTER.vector({"H2O": 1000.0, "CO2": 1.0})
    gas, water = water_split(MATTER, soda, 300.0, 30e5)
    slopes = water_split_slopes(MATTER, soda, gas, water, 300.0, 30e5)
    assert slopes.diagonal().tolist() == [0.0, 0.0, 0.0, 0.0, 1.0, 0.0, 1.0, 0.0]


def test_an_unknown_dissolved_gas_is_refused():
    with pytest.raises(ValueError, match="no Henry's constant for CH3OH"):
        water_split(MATTER, WET, *STATE, dissolved=("CH3OH",))
    with pytest.raises(StateError, match="pressure"):
        water_split(MATTER, WET, 300.0, -1.0)

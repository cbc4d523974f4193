"""Equilibrium: elements, mass action, restricted species, slopes, adiabatic temperature."""

import math

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.equilibrium import (
    equilibrate,
    equilibrate_adiabatic,
    equilibrium_constant,
    reaction_enthalpy,
)
from chainflow.thermo.reactants import convertible
from chainflow.thermo.validity import StateError

MATTER = Matter.of(DEFAULT_COMPONENTS)
FEED = MATTER.vector({"H2": 4.0, "CO2": 1.0, "N2": 0.1})
SHIFT = ("H2", "CO2", "CO", "H2O")
METHANATION = {"CO2": -1.0, "H2": -4.0, "CH4": 1.0, "H2O": 2.0}
WATER_GAS = {"CO": -1.0, "H2O": -1.0, "CO2": 1.0, "H2": 1.0}


def quotient(flows, reaction, pressure):
    """Reaction quotient of the ideal gas, pressures in bar."""
    return math.prod(
        (flows[MATTER.index[name]] / flows.sum() * pressure / 1e5) ** count
        for name, count in reaction.items()
    )


def test_mass_action_holds():
    found = equilibrate(MATTER, FEED, 800.0, 5e5)
    for reaction in (METHANATION, WATER_GAS):
        constant = equilibrium_constant(reaction, 800.0)
        assert quotient(found.flows, reaction, 5e5) == pytest.approx(constant, rel=1e-9)
    assert found.temperature == 800.0


def test_only_the_named_species_react():
    found = equilibrate(MATTER, FEED, 800.0, 5e5, SHIFT)
    assert found.flows[7] == 0.0
    constant = equilibrium_constant(WATER_GAS, 800.0)
    assert quotient(found.flows, WATER_GAS, 5e5) == pytest.approx(constant, rel=1e-9)


def test_a_name_that_cannot_react_is_refused():
    with pytest.raises(ValueError, match="did you mean 'CO2'"):
        equilibrate(MATTER, FEED, 800.0, 5e5, ("H2", "Co2"))


def test_an_approach_moves_the_constants_only():
    shifted = equilibrate(MATTER, FEED, 600.0, 5e5, composition_temperature=650.0)
    assert (shifted.flows == equilibrate(MATTER, FEED, 650.0, 5e5).flows).all()
    assert shifted.temperature == 600.0


def test_nothing_reacts_where_nothing_can():
    for amounts in ({"N2": 1.0, "Ar": 2.0}, {"H2": 1.0, "N2": 1.0}, {"CH4": 1.0}, {}):
        flows = MATTER.vector(amounts)
        found = equilibrate(MATTER, flows, 700.0, 1e5)
        assert (found.flows == flows).all()
        assert (found.by_feed == np.eye(8)).all()
        assert not found.by_temperature.any()


def test_the_answer_does_not_depend_on_what_was_asked_before():
    first = equilibrate(MATTER, FEED, 600.0, 10e5).flows
    equilibrate(MATTER, MATTER.vector({"CO": 1.0, "O2": 5.0, "H2O": 3.0}), 1500.0, 1e5)
    assert (equilibrate(MATTER, FEED, 600.0, 10e5).flows == first).all()


@given(
    st.lists(st.one_of(st.just(0.0), st.floats(1e-9, 10.0)), min_size=8, max_size=8),
    st.floats(400.0, 2000.0),
    st.floats(5e4, 1e7),
)
def test_elements_balance_to_round_off(flows, temperature, pressure):
    flows = np.array(flows)
    assume(flows.sum() > 1e-3)
    found = equilibrate(MATTER, flows, temperature, pressure)
    fed = MATTER.formula @ flows
    assert np.abs(MATTER.formula @ found.flows - fed).max() <= 4e-15 * fed.max()
    assert (found.flows >= 0.0).all()
    kept = np.abs(MATTER.formula @ found.by_feed - MATTER.formula).max()
    assert kept < 1e-4  # a gas of one molecule only has slopes to five digits
    assert np.isfinite(found.by_temperature).all()


CASES = [
    (FEED, 600.0, 10e5, None),
    (MATTER.vector({"H2": 4, "CO2": 1, "CH4": 0.1, "H2O": 0.2, "Ar": 0.01}), 900.0, 1e5, None),
    (MATTER.vector({"H2": 4, "CO2": 1, "CH4": 0.1, "H2O": 0.2}), 1100.0, 20e5, SHIFT),
    (MATTER.vector({"H2": 1, "O2": 1.2, "N2": 4, "CO2": 0.1, "CO": 0.01}), 2500.0, 1e5, None),
    (MATTER.vector({"H2": 1, "H2O": 1e-3, "CO2": 1e-6}), 700.0, 1e5, None),
]


@pytest.mark.parametrize(("flows", "temperature", "pressure", "species"), CASES)
def test_slopes_agree_with_differences(flows, temperature, pressure, species):
    found = equilibrate(MATTER, flows, temperature, pressure, species)

    def at(feed, t=temperature):
        return equilibrate(MATTER, feed, t, pressure, species).flows

    for place in np.flatnonzero(flows):
        step = np.zeros(8)
        step[place] = 1e-4 * flows[place]
        numeric = (at(flows + step) - at(flows - step)) / (2 * step[place])
        assert found.by_feed[:, place] == pytest.approx(numeric, abs=2e-6)
    numeric = (at(flows, temperature + 0.01) - at(flows, temperature - 0.01)) / 0.02
    scale = np.abs(numeric).max()
    # absent species answer with 1e-10 of what could form, and differences end at round-off
    floor = 1e-9 * flows.sum() / temperature
    assert found.by_temperature == pytest.approx(numeric, abs=1e-6 * scale + floor)


@pytest.mark.parametrize(("flows", "temperature", "pressure", "species"), CASES)
def test_adiabatic_temperature_and_slopes(flows, temperature, pressure, species):
    start = equilibrate(MATTER, flows, temperature, pressure, species).flows
    enthalpy = MATTER.gas_enthalpy(start, temperature, pressure)

    def at(feed, heat=0.0):
        return equilibrate_adiabatic(MATTER, feed, enthalpy + heat, pressure, species)

    found = at(flows)
    assert found.temperature == pytest.approx(temperature, rel=1e-11)
    own = MATTER.gas_enthalpy(found.flows, found.temperature, pressure)
    assert own == pytest.approx(enthalpy, rel=1e-12)
    heat = 1e-5 * found.temperature / found.temperature_by_enthalpy
    up, down = at(flows, heat), at(flows, -heat)
    slope = (up.temperature - down.temperature) / (2 * heat)
    assert found.temperature_by_enthalpy == pytest.approx(slope, rel=1e-5)
    moved = (up.flows - down.flows) / (2 * heat)
    # absent species answer with 1e-10 of what could form, and differences end at round-off
    floor = 1e-9 * flows.sum() / found.temperature * found.temperature_by_enthalpy
    assert found.by_enthalpy == pytest.approx(moved, abs=1e-5 * np.abs(moved).max() + floor)
    for place in np.flatnonzero(flows > 1e-2):
        step = np.zeros(8)
        step[place] = 1e-5 * flows[place]
        up, down = at(flows + step), at(flows - step)
        width = 2 * step[place]
        slope = (up.temperature - down.temperature) / width
        assert found.temperature_by_feed[place] == pytest.approx(slope, rel=1e-4)
        numeric = (up.flows - down.flows) / width
        assert found.by_feed[:, place] == pytest.approx(numeric, abs=1e-4)


def test_the_guess_does_not_matter():
    enthalpy = MATTER.gas_enthalpy(FEED, 550.0, 10e5)
    temperatures = [
        equilibrate_adiabatic(MATTER, FEED, enthalpy, 10e5, guess=guess).temperature
        for guess in (None, 200.0, 740.0, 1540.0, 5000.0)
    ]
    assert temperatures == pytest.approx([temperatures[0]] * 5, rel=1e-12)


def test_an_approach_makes_an_exothermic_bed_cooler():
    enthalpy = MATTER.gas_enthalpy(FEED, 550.0, 10e5)
    full = equilibrate_adiabatic(MATTER, FEED, enthalpy, 10e5)
    part = equilibrate_adiabatic(MATTER, FEED, enthalpy, 10e5, approach=30.0)
    assert part.temperature < full.temperature
    constant = equilibrium_constant(METHANATION, part.temperature + 30.0)
    assert quotient(part.flows, METHANATION, 10e5) == pytest.approx(constant, rel=1e-6)


def test_adiabatic_without_flow_and_outside_the_data():
    nothing = equilibrate_adiabatic(MATTER, np.zeros(8), 0.0, 1e5)
    assert nothing.flows.sum() == 0.0
    with pytest.raises(StateError, match="J per mol fed"):
        equilibrate_adiabatic(MATTER, FEED, 1e9, 1e5)
    with pytest.raises(StateError, match="J per mol fed"):
        equilibrate_adiabatic(MATTER, FEED, -1e9, 1e5)
    with pytest.raises(StateError, match="finite"):
        equilibrate_adiabatic(MATTER, FEED, float("inf"), 1e5)


def test_carbon_dioxide_alone_has_slopes_that_keep_the_elements():
    found = equilibrate(MATTER, MATTER.vector({"CO2": 1.0}), 500.0, 1e5)
    assert np.abs(MATTER.formula @ found.by_feed - MATTER.formula).max() < 1e-5


def test_traces_neither_slow_nor_spoil_the_solver():
    for trace in (1e-10, 1e-15, 1e-19, 1e-25, 1e-29):
        flows = MATTER.vector({"H2": 4.0, "H2O": 1.0, "CO2": trace, "Ar": trace, "N2": trace})
        found = equilibrate(MATTER, flows, 600.0, 1e6)
        off = np.abs(MATTER.formula @ (found.flows - flows))
        assert off.max() <= 4e-15 * 5
        assert off[0] <= 1e-7 * trace + 1e-19  # carbon, to what counts as absent


def test_species_that_take_part_in_no_reaction_are_left_out():
    assert convertible(("H2", "N2", "CO2", "CO", "H2O")) == ("H2", "CO2", "CO", "H2O")
    assert convertible(("H2", "N2", "NH3")) == ("H2", "N2", "NH3")
    assert convertible(("CO2",)) == ()
    assert convertible(()) == ()


def test_reaction_enthalpy_is_the_slope_of_the_constant():
    step, temperature = 0.01, 700.0
    up = math.log(equilibrium_constant(METHANATION, temperature + step))
    down = math.log(equilibrium_constant(METHANATION, temperature - step))
    vant_hoff = 8.314462618 * temperature**2 * (up - down) / (2 * step)
    assert reaction_enthalpy(METHANATION, temperature) == pytest.approx(vant_hoff, rel=1e-7)

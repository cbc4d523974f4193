"""Matter: names, arrays, heating values and the kernels of one case."""

import pickle

import numpy as np
import pytest

from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter, known_components
from chainflow.thermo.validity import StateError

MATTER = Matter.of(DEFAULT_COMPONENTS)
SYNGAS = MATTER.vector({"H2": 3.0, "CO2": 1.0, "H2O": 0.5, "CH4": 0.2})


def test_the_same_names_give_the_same_object():
    assert Matter.of(list(DEFAULT_COMPONENTS)) is MATTER
    assert Matter.of(("H2", "O2")) is not MATTER
    assert pickle.loads(pickle.dumps(MATTER)) is MATTER


def test_formula_counts_atoms():
    assert MATTER.elements == ("C", "H", "O", "N", "Ar")
    atoms = dict(zip(MATTER.elements, MATTER.formula[:, MATTER.index["CH4"]], strict=True))
    assert atoms == {"C": 1.0, "H": 4.0, "O": 0.0, "N": 0.0, "Ar": 0.0}


def test_molar_masses_are_in_kilograms():
    # IUPAC standard atomic weights 2021, abridged: H 1.008, C 12.011, O 15.999
    assert MATTER.molar_mass[MATTER.index["H2"]] == pytest.approx(2.016e-3, rel=1e-4)
    assert MATTER.molar_mass[MATTER.index["CO2"]] == pytest.approx(44.009e-3, rel=1e-4)


def test_only_what_takes_up_oxygen_has_a_heating_value():
    matter = Matter.of(known_components())
    inert = {"O2", "N2", "Ar", "He", "H2O", "CO2", "NO", "NO2", "N2O"}
    for name, place in matter.index.items():
        assert (matter.lhv[place] == 0.0) == (name in inert), name
        assert matter.hhv[place] >= matter.lhv[place]


def test_a_near_miss_is_named():
    with pytest.raises(ValueError, match="did you mean 'CO2'"):
        Matter.of(("H2", "Co2"))
    with pytest.raises(ValueError, match="named twice"):
        Matter.of(("H2", "H2"))
    with pytest.raises(ValueError, match="cannot be empty"):
        Matter.of(())
    with pytest.raises(ValueError, match="not among the components"):
        MATTER.vector({"CH3OH": 1.0})


def test_water_and_carbon_dioxide_are_found_or_absent():
    assert MATTER.water == 4
    assert MATTER.carbon_dioxide == 6
    assert Matter.of(("H2", "N2")).water is None


def test_no_flow_has_no_property():
    nothing = np.zeros(8)
    assert MATTER.gas_enthalpy(nothing, 300.0, 1e5) == 0.0
    assert MATTER.gas_state(nothing, 300.0, 1e5) == (0.0, 0.0, 0.0)
    assert MATTER.gas_volume(nothing, 300.0, 1e5) == 0.0
    assert MATTER.gas_density(nothing, 300.0, 1e5) == 0.0
    assert MATTER.water_enthalpy(nothing, 300.0, 1e5) == 0.0
    assert MATTER.water_entropy(nothing, 300.0, 1e5) == 0.0
    assert MATTER.water_heat_capacity(nothing, 300.0, 1e5) == 0.0
    assert np.isfinite(MATTER.gas_partial(nothing, 300.0, 1e5).enthalpy).all()


@pytest.mark.parametrize(("temperature", "pressure"), [(300.0, 1e5), (450.0, 30e5), (1200.0, 80e5)])
def test_gas_properties_belong_together(temperature, pressure):
    flows = MATTER.vector({"H2": 3.0, "CO2": 1.0, "CH4": 0.2})
    state = MATTER.gas_state(flows, temperature, pressure)
    partial = MATTER.gas_partial(flows, temperature, pressure)
    step = 0.01
    above = MATTER.gas_state(flows, temperature + step, pressure)
    below = MATTER.gas_state(flows, temperature - step, pressure)
    slope = (above.enthalpy - below.enthalpy) / (2 * step)
    growth = (above.entropy - below.entropy) / (2 * step) * temperature
    assert state.heat_capacity == pytest.approx(slope, rel=1e-6)
    assert state.heat_capacity == pytest.approx(growth, rel=1e-6)
    alone = MATTER.gas_heat_capacity(flows, temperature, pressure)
    assert alone == pytest.approx(state.heat_capacity, rel=1e-14)
    assert flows @ partial.enthalpy == pytest.approx(state.enthalpy, rel=1e-12)
    assert flows @ partial.entropy == pytest.approx(state.entropy, rel=1e-12)
    assert partial.heat_capacity == pytest.approx(state.heat_capacity, rel=1e-14)


def test_partial_enthalpies_and_entropies_are_slopes():
    temperature, pressure = 320.0, 60e5
    partial = MATTER.gas_partial(SYNGAS, 520.0, pressure)
    flows = MATTER.vector({"H2": 3.0, "CO2": 1.0, "CH4": 0.2})
    partial = MATTER.gas_partial(flows, temperature, pressure)
    for place in np.flatnonzero(flows):
        step = np.zeros(len(flows))
        step[place] = 1e-5
        up = MATTER.gas_state(flows + step, temperature, pressure)
        down = MATTER.gas_state(flows - step, temperature, pressure)
        enthalpy = (up.enthalpy - down.enthalpy) / 2e-5
        entropy = (up.entropy - down.entropy) / 2e-5
        assert partial.enthalpy[place] == pytest.approx(enthalpy, rel=1e-6, abs=1.0)
        assert partial.entropy[place] == pytest.approx(entropy, rel=1e-6)


def test_a_thin_gas_is_ideal():
    flows = MATTER.vector({"H2": 1.0, "CO2": 1.0})
    ideal = float(flows @ MATTER.ideal_enthalpies(350.0))
    assert MATTER.gas_enthalpy(flows, 350.0, 1.0) == pytest.approx(ideal, abs=0.01)


@pytest.mark.parametrize("temperature", [290.0, 360.0, 480.0])
def test_liquid_properties_belong_together(temperature):
    flows = MATTER.vector({"H2O": 1.0, "CO2": 0.01, "CH4": 1e-4})
    step, pressure = 1e-3, 20e5
    up = MATTER.water_enthalpy(flows, temperature + step, pressure)
    down = MATTER.water_enthalpy(flows, temperature - step, pressure)
    growth = MATTER.water_entropy(flows, temperature + step, pressure)
    growth -= MATTER.water_entropy(flows, temperature - step, pressure)
    capacity = MATTER.water_heat_capacity(flows, temperature, pressure)
    assert capacity == pytest.approx((up - down) / (2 * step), rel=1e-6)
    assert capacity == pytest.approx(temperature * growth / (2 * step), rel=1e-6)
    partial = MATTER.water_partial(temperature, pressure).enthalpy
    assert flows @ partial == pytest.approx(MATTER.water_enthalpy(flows, temperature, pressure))


def test_a_dissolved_gas_at_equilibrium_has_the_chemical_potential_of_the_gas():
    from chainflow.thermo.water import henry_constant

    temperature, pressure, share = 300.0, 1e5, 1e-6
    partial_pressure = share * henry_constant("CO2", temperature)
    pure = MATTER.vector({"CO2": 1.0})
    gas = MATTER.gas_enthalpy(pure, temperature, 1.0)
    gas -= temperature * (MATTER.gas_entropy(pure, temperature, 1.0))
    gas += 8.314462618 * temperature * np.log(partial_pressure / 1.0)
    step = 1e-9
    water = MATTER.vector({"H2O": 1.0 - share, "CO2": share})
    more = water + MATTER.vector({"CO2": step})

    def gibbs(flows):
        entropy = MATTER.water_entropy(flows, temperature, pressure)
        return MATTER.water_enthalpy(flows, temperature, pressure) - temperature * entropy

    assert (gibbs(more) - gibbs(water)) / step == pytest.approx(gas, abs=5.0)  # [J/mol]


def test_what_cannot_dissolve_is_refused_in_water():
    matter = Matter.of(("H2O", "CH3OH"))
    with pytest.raises(StateError, match="CH3OH in liquid water"):
        matter.water_enthalpy(np.array([1.0, 0.1]), 300.0, 1e5)
    with pytest.raises(StateError, match="critical temperature"):
        matter.water_enthalpy(np.array([1.0, 0.0]), 700.0, 1e5)

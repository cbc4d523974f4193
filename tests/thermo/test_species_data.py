"""The data file: what it holds, how it is read, whether its pieces fit together."""

import time

import cantera as ct
import numpy as np
import pytest

from chainflow.thermo import species
from chainflow.thermo.components import known_components
from chainflow.thermo.species import Polynomial, component_species, flame_species, polynomial


def test_every_species_states_one_bar():
    for group in (flame_species(), species.condensed_species()):
        for entry in group.values():
            assert entry.thermo.reference_pressure == 1e5, entry.name


def test_every_component_brings_its_critical_data():
    for entry in component_species().values():
        assert entry.input_data["critical-parameters"]["critical-temperature"] > 0.0, entry.name


@pytest.mark.parametrize("name", ["H2", "O2", "N2", "H2O", "CO", "CO2", "CH4", "CH3OH", "NH3"])
def test_polynomials_equal_those_cantera_ships(name):
    # nasa_gas.yaml of Cantera 3.2.0 is where the file says they come from
    shipped = {s.name: s for s in ct.Species.list_from_file("nasa_gas.yaml")}[name]
    for temperature in (250.0, 298.15, 900.0, 2500.0):
        ours = polynomial(name).enthalpy(temperature) * 1e3
        assert ours == pytest.approx(shipped.thermo.h(temperature), rel=1e-12, abs=1.0)


@pytest.mark.parametrize("name", ["H2", "CO2", "H2O(L)", "C(gr)"])
def test_plain_polynomials_equal_cantera_ones(name):
    entry = {**flame_species(), **species.condensed_species()}[name].thermo
    for temperature in (280.0, 400.0, 590.0):
        pure = polynomial(name)
        assert pure.heat_capacity(temperature) == pytest.approx(entry.cp(temperature) / 1e3)
        assert pure.entropy(temperature) == pytest.approx(entry.s(temperature) / 1e3)
        assert pure.enthalpy(temperature) == pytest.approx(entry.h(temperature) / 1e3)


@pytest.mark.parametrize("temperature", [205.0, 260.0, 630.0])
def test_a_polynomial_outside_its_range_goes_on_smoothly(temperature):
    water: Polynomial = polynomial("H2O(L)")  # 273.15 to 600 K
    step = 1e-3
    slope = (water.enthalpy(temperature + step) - water.enthalpy(temperature - step)) / (2 * step)
    growth = (water.entropy(temperature + step) - water.entropy(temperature - step)) / (2 * step)
    assert slope == pytest.approx(water.heat_capacity(temperature), rel=1e-7)
    assert growth * temperature == pytest.approx(water.heat_capacity(temperature), rel=1e-7)


def test_the_file_is_read_in_the_time_of_a_blink():
    start = time.perf_counter()
    ct.Species.list_from_file(str(species.DATA_FILE), "components")
    assert time.perf_counter() - start < 0.5  # about 10 ms; a re-read of a 748-species file is 800


def test_components_have_short_names_without_commas():
    assert all("," not in name and " " not in name for name in known_components())
    assert {"H2", "CH3OH", "C3H6", "n-C4H10", "NO"} <= set(known_components())


def test_elements_in_their_standard_state_have_no_enthalpy_at_25_degrees():
    for name in ("H2", "O2", "N2", "Ar", "He", "C(gr)"):
        assert polynomial(name).enthalpy(298.15) == pytest.approx(0.0, abs=0.05)  # [J/mol]


def test_polynomials_join_at_1000_kelvin():
    for name in component_species():
        pure = polynomial(name)
        below = pure.enthalpy(np.nextafter(pure.joint, 0.0))
        above = pure.enthalpy(np.nextafter(pure.joint, 1e4))
        assert above - below == pytest.approx(0.0, abs=1.0)  # [J/mol] of some 1e4

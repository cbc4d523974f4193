"""Flames: closure, limits, errors."""

import numpy as np
import pytest

from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.flames import flame_state, flame_temperature
from chainflow.thermo.species import polynomial
from chainflow.thermo.validity import StateError

MATTER = Matter.of(DEFAULT_COMPONENTS)


def mixture(amounts, temperature=298.15):
    flows = MATTER.vector(amounts)
    return flows, float(flows @ MATTER.ideal_enthalpies(temperature))


def test_energy_and_elements_close_with_radicals():
    flows, enthalpy = mixture({"CH4": 1.0, "O2": 2.0, "N2": 7.5, "Ar": 0.1})
    temperature, amounts = flame_state(MATTER, flows, enthalpy, 1e5)
    heat = sum(n * polynomial(name).enthalpy(temperature) for name, n in amounts.items())
    assert heat == pytest.approx(enthalpy, abs=1.0)  # [W] of 1 MW
    assert amounts["OH"] > 1e-3
    assert amounts["NO"] > 1e-3
    assert amounts["Ar"] == 0.1
    hydrogen = sum(
        n * {"H2O": 2, "H2": 2, "OH": 1, "H": 1, "CH4": 4, "HO2": 1, "H2O2": 2, "NH3": 3}.get(k, 0)
        for k, n in amounts.items()
    )
    assert hydrogen == pytest.approx(4.0, rel=1e-5)  # the rest sits in traces such as HCN


def test_radicals_keep_a_hydrogen_flame_below_what_whole_molecules_give():
    from chainflow.thermo.equilibrium import equilibrate_adiabatic

    flows, enthalpy = mixture({"H2": 1.0, "O2": 0.5})
    whole = equilibrate_adiabatic(MATTER, flows, enthalpy, 101325.0).temperature
    flame = flame_temperature(MATTER, flows, enthalpy, 101325.0)
    # Cantera 3.2.0 with nasa_gas.yaml, HP of 12 species: 3077 K; without radicals 3507 K
    assert flame == pytest.approx(3077.0, abs=6.0)
    assert whole == pytest.approx(3507.0, abs=6.0)


def test_an_inert_gas_just_keeps_its_temperature():
    flows, enthalpy = mixture({"N2": 1.0, "Ar": 1.0}, 700.0)
    assert flame_temperature(MATTER, flows, enthalpy, 1e5) == pytest.approx(700.0, abs=0.01)
    flows, enthalpy = mixture({"Ar": 1.0}, 500.0)
    assert flame_temperature(MATTER, flows, enthalpy, 1e5) == pytest.approx(500.0, rel=1e-9)


def test_a_cold_unburnt_mixture_has_a_flame_and_burnt_gas_the_same():
    flows, enthalpy = mixture({"CO": 1.0, "O2": 0.5, "H2O": 0.1})
    burnt = MATTER.vector({"CO2": 1.0, "H2O": 0.1})
    before = flame_temperature(MATTER, flows, enthalpy, 1e5)
    assert flame_temperature(MATTER, burnt, enthalpy, 1e5) == pytest.approx(before, rel=1e-9)


def test_no_flow_and_too_much_heat_are_errors():
    with pytest.raises(StateError, match="no flame"):
        flame_temperature(MATTER, np.zeros(8), 0.0, 1e5)
    flows, enthalpy = mixture({"H2": 1.0, "O2": 0.5})
    with pytest.raises(StateError, match="no flame temperature"):
        flame_temperature(MATTER, flows, enthalpy + 1e8, 1e5)
    with pytest.raises(StateError, match="pressure"):
        flame_temperature(MATTER, flows, enthalpy, 0.0)

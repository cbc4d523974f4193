"""Densities of pure fluids and the warning of liquefaction."""

import numpy as np
import pytest

from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.densities import PURE_FLUIDS, liquefying, pure_density, vapour_pressure
from chainflow.thermo.validity import StateError

MATTER = Matter.of((*DEFAULT_COMPONENTS, "C3H8"))


def test_a_thin_gas_is_ideal_whatever_the_equation():
    for name in (*PURE_FLUIDS, "C3H8", "Ar"):
        matter = Matter.of((name,))
        ideal = matter.molar_mass[0] * 1e3 / (8.314462618 * 400.0)
        assert pure_density(name, 400.0, 1e3) == pytest.approx(ideal, rel=3e-4)


def test_stored_carbon_dioxide_is_liquid_where_it_should_be():
    assert pure_density("CO2", 253.15, 25e5) > 900.0
    assert pure_density("CO2", 253.15, 15e5) < 60.0


def test_a_state_outside_is_an_error():
    with pytest.raises(StateError, match="density of CO2 at 100 K"):
        pure_density("CO2", 100.0, 1e5)
    with pytest.raises(StateError, match="pressure above zero"):
        pure_density("H2", 300.0, 0.0)
    with pytest.raises(StateError, match="temperature is 100 K"):
        pure_density("Ar", 100.0, 1e5)


def test_what_would_liquefy_is_named():
    flows = MATTER.vector({"CO2": 1.0})
    assert liquefying(MATTER, flows, 298.15, 60e5) == ()
    assert liquefying(MATTER, flows, 298.15, 66e5) == ("CO2",)
    assert liquefying(MATTER, flows, 310.0, 200e5) == ()  # above its critical temperature
    mixed = MATTER.vector({"CO2": 1.0, "C3H8": 1.0, "H2": 8.0, "H2O": 5.0})
    assert liquefying(MATTER, mixed, 280.0, 100e5) == ("C3H8",)
    assert liquefying(MATTER, np.zeros(9), 280.0, 100e5) == ()


def test_vapour_pressure_ends_at_the_critical_point():
    assert vapour_pressure("CO2", 304.2) == np.inf
    # CoolProp 8.0.0: 304.1282 K, 7.3773 MPa
    assert vapour_pressure("CO2", 304.12) == pytest.approx(7.3773e6, rel=1e-3)

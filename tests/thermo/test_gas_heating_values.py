"""Heating values per mol, mass and volume: they belong together."""

import numpy as np
import pytest

from chainflow.basis.constants import NORMAL_MOLAR_VOLUME
from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.heating import heating_values
from chainflow.thermo.validity import StateError

MATTER = Matter.of(DEFAULT_COMPONENTS)
GAS = MATTER.vector({"H2": 1.0, "CH4": 3.0, "N2": 0.5})


def test_at_25_degrees_they_are_those_of_the_components():
    found = heating_values(MATTER, GAS)
    assert found.upper * GAS.sum() == pytest.approx(float(GAS @ MATTER.hhv), rel=1e-12)
    assert found.lower * GAS.sum() == pytest.approx(float(GAS @ MATTER.lhv), rel=1e-12)
    assert found.upper_per_mass * found.molar_mass == pytest.approx(found.upper)
    assert found.lower_per_mass * found.molar_mass == pytest.approx(found.lower)


def test_an_ideal_gas_fills_the_normal_volume():
    found = heating_values(MATTER, GAS, metering_temperature=273.15, ideal=True)
    assert found.molar_volume == pytest.approx(NORMAL_MOLAR_VOLUME, rel=1e-12)
    assert found.relative_density == pytest.approx(found.molar_mass / 28.9655e-3, rel=1e-4)
    assert found.lower_wobbe_index < found.upper_wobbe_index
    assert found.lower_per_volume < found.upper_per_volume


def test_the_size_of_the_flow_does_not_matter():
    small, large = heating_values(MATTER, GAS), heating_values(MATTER, 1e3 * GAS)
    assert large.upper_per_volume == pytest.approx(small.upper_per_volume, rel=1e-12)


def test_inert_gas_has_none_and_no_flow_is_an_error():
    assert heating_values(MATTER, MATTER.vector({"CO2": 1.0, "H2O": 1.0})).upper == 0.0
    with pytest.raises(StateError, match="without flow"):
        heating_values(MATTER, np.zeros(8))

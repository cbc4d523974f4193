"""Quality of a dry gas."""

import numpy as np
import pytest

from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.gas_quality import RESULTS, gas_quality
from chainflow.thermo.validity import StateError

MATTER = Matter.of(DEFAULT_COMPONENTS)


def test_water_does_not_count():
    gas = {"CH4": 0.9, "H2": 0.05, "CO2": 0.05}
    dry = gas_quality(MATTER, MATTER.vector(gas)).results()
    wet = gas_quality(MATTER, 7.0 * MATTER.vector({**gas, "H2O": 3.0})).results()
    assert wet == pytest.approx(dry, rel=1e-12)
    assert set(dry) == set(RESULTS)
    assert dry["dry_fraction_CH4"] == pytest.approx(0.9)


def test_inert_gas_lowers_the_wobbe_index_more_than_hydrogen():
    def wobbe(gas):
        return gas_quality(MATTER, MATTER.vector(gas)).results()["upper_wobbe_index_J_m3"]

    methane = wobbe({"CH4": 1.0})
    assert wobbe({"CH4": 0.9, "CO2": 0.1}) < wobbe({"CH4": 0.9, "H2": 0.1}) < methane


def test_a_quantity_of_water_has_no_quality():
    with pytest.raises(StateError, match="without flow"):
        gas_quality(MATTER, MATTER.vector({"H2O": 1.0}))
    with pytest.raises(StateError, match="without flow"):
        gas_quality(MATTER, np.zeros(8))

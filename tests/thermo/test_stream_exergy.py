"""Exergy: zero in the environment, work lost in a valve, shapes and settings."""

import numpy as np
import pytest

from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter, known_components
from chainflow.thermo.compression import isentropic
from chainflow.thermo.exergy import (
    STANDARD_ENVIRONMENT,
    Environment,
    chemical_exergies,
    heat_exergy,
    solar_exergy_factor,
)
from chainflow.thermo.streams import Stream

MATTER = Matter.of(DEFAULT_COMPONENTS)


@pytest.mark.parametrize(
    ("name", "pressure"), [("N2", 75830.0), ("O2", 20390.0), ("Ar", 906.0), ("CO2", 33.5)]
)
def test_a_gas_as_thin_as_in_the_environment_has_none(name, pressure):
    stream = Stream.at(MATTER, MATTER.vector({name: 1.0}), 298.15, pressure)
    # the departure of the real gas at 0.76 bar is a few J/mol
    assert stream.exergy() == pytest.approx(0.0, abs=5.0)


def test_a_stream_at_rest_has_its_chemical_exergy():
    for name in ("H2", "CH4", "CO"):
        stream = Stream.at(MATTER, MATTER.vector({name: 2.0}), 298.15, 101325.0)
        expected = 2.0 * chemical_exergies(MATTER)[MATTER.index[name]]
        assert stream.exergy() == pytest.approx(expected, abs=10.0)


def test_warming_and_pressing_add_exergy():
    flows = MATTER.vector({"N2": 1.0})
    rest = Stream.at(MATTER, flows, 298.15, 101325.0).exergy()
    for temperature, pressure in ((600.0, 101325.0), (298.15, 50e5), (230.0, 101325.0)):
        assert Stream.at(MATTER, flows, temperature, pressure).exergy() > rest + 100.0


def test_isentropic_work_is_stored_and_a_valve_destroys_it():
    flows = MATTER.vector({"H2": 1.0})
    low = Stream.at(MATTER, flows, 298.15, 1e5)
    change = isentropic(MATTER, flows, 298.15, 1e5, 5e5)
    high = Stream.at(MATTER, flows, change.temperature, 5e5)
    assert high.exergy() - low.exergy() == pytest.approx(change.work, rel=1e-8)
    let_down = high.at_pressure(1e5)
    lost = high.exergy() - let_down.exergy()
    produced = 298.15 * (let_down.entropy - high.entropy)
    assert lost == pytest.approx(produced, rel=1e-9)
    assert lost > 0.0


def test_liquid_water_has_less_exergy_than_its_vapour():
    liquid = Stream.at(MATTER, MATTER.vector({"H2O": 1.0}), 298.15, 101325.0)
    steam = Stream.at(MATTER, MATTER.vector({"H2O": 1.0}), 400.0, 101325.0)
    assert 0.0 < liquid.exergy() < steam.exergy()


def test_the_environment_is_settable_and_checked():
    damp = Environment(carbon_dioxide=42.0, water=1900.0)
    stream = Stream.at(MATTER, MATTER.vector({"CO2": 1.0}), 298.15, 101325.0)
    change = stream.exergy(damp) - stream.exergy()
    # less work to gather CO2 from air that holds more: RT ln(33.5/42) = -0.56 kJ/mol
    assert change == pytest.approx(8.314462618 * 298.15 * np.log(33.5 / 42.0), rel=1e-6)
    assert damp.element_potentials()["C"] != STANDARD_ENVIRONMENT.element_potentials()["C"]
    with pytest.raises(ValueError, match="environment: oxygen is 0"):
        Environment(oxygen=0.0)


def test_every_component_has_a_finite_exergy():
    exergies = chemical_exergies(Matter.of(known_components()))
    assert np.isfinite(exergies).all()
    assert (exergies > 0.0).all()


def test_no_flow_no_exergy_and_cases_keep_their_shape():
    assert Stream.empty(MATTER).exergy() == 0.0
    many = Stream.at(MATTER, MATTER.vector({"H2": 1.0}), np.array([300.0, 400.0]), 1e5)
    assert many.exergy().shape == (2,)


def test_heat_at_ambient_is_worthless_and_sunlight_is_not():
    assert heat_exergy(100.0, 298.15) == 0.0
    assert heat_exergy(100.0, 596.3) == pytest.approx(50.0)
    assert solar_exergy_factor() < 1.0
    assert solar_exergy_factor(ambient=0.0) == 1.0

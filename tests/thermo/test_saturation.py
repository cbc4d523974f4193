"""Saturation pressure and Henry's constants: slopes, inverses, ranges."""

import pytest

from chainflow.thermo import saturation, water
from chainflow.thermo.validity import StateError


@pytest.mark.parametrize("temperature", [230.0, 273.16, 350.0, 500.0, 640.0])
def test_slopes_of_the_saturation_pressure(temperature):
    step = 1e-3
    at = saturation.log_saturation_pressure
    first = (at(temperature + step).value - at(temperature - step).value) / (2 * step)
    second = (at(temperature + step).first - at(temperature - step).first) / (2 * step)
    assert at(temperature).first == pytest.approx(first, rel=1e-7)
    assert at(temperature).second == pytest.approx(second, rel=1e-6)


@pytest.mark.parametrize("name", list(saturation.HENRY))
@pytest.mark.parametrize("temperature", [280.0, 350.0, 560.0])
def test_slopes_of_henrys_constants(name, temperature):
    step = 1e-2
    at = saturation.log_henry_constant
    first = (at(name, temperature + step).value - at(name, temperature - step).value) / (2 * step)
    second = (at(name, temperature + step).first - at(name, temperature - step).first) / (2 * step)
    assert at(name, temperature).first == pytest.approx(first, rel=1e-6, abs=1e-9)
    assert at(name, temperature).second == pytest.approx(second, rel=1e-6)
    assert water.henry_slope(name, temperature) == pytest.approx(
        -(temperature**2) * first, rel=1e-5
    )


@pytest.mark.parametrize("temperature", [201.0, 250.0, 373.15, 500.0, 646.9])
def test_boiling_and_saturation_are_inverse(temperature):
    pressure = water.saturation_pressure(temperature)
    assert water.saturation_temperature(pressure) == pytest.approx(temperature, rel=1e-11)


def test_the_critical_point_is_the_end():
    assert water.saturation_pressure(water.CRITICAL_TEMPERATURE) == water.CRITICAL_PRESSURE
    critical = water.saturation_temperature(water.CRITICAL_PRESSURE)
    assert critical == pytest.approx(water.CRITICAL_TEMPERATURE, rel=1e-9)


@pytest.mark.parametrize("temperature", [150.0, 650.0, float("nan")])
def test_outside_the_range_is_an_error(temperature):
    with pytest.raises(StateError, match=r"wanted 200 to 647\.096 K"):
        water.saturation_pressure(temperature)
    with pytest.raises(StateError, match=r"wanted 200 to 647\.096 K"):
        water.henry_constant("CO2", temperature)


def test_no_boiling_above_the_critical_pressure():
    with pytest.raises(StateError, match="does not boil"):
        water.saturation_temperature(23e6)
    with pytest.raises(StateError, match="does not boil"):
        water.saturation_temperature(1e-9)


def test_a_gas_without_data_is_named():
    with pytest.raises(ValueError, match="no Henry's constant for NH3"):
        water.henry_constant("NH3", 300.0)


def test_henrys_constants_stay_in_order_beyond_their_fitted_range():
    # continued down to 200 K the constants fall steadily and stay positive
    for name in saturation.HENRY:
        values = [water.henry_constant(name, t) for t in (205.0, 220.0, 240.0, 260.0, 273.0)]
        assert values == sorted(values)
        assert values[0] > 1e5

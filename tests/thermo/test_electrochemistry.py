"""Voltages of water splitting: closed forms and limits."""

import pytest

from chainflow.basis.constants import FARADAY
from chainflow.thermo.components import Matter
from chainflow.thermo.electrochemistry import (
    nernst_shift,
    reversible_voltage,
    thermoneutral_voltage,
)
from chainflow.thermo.validity import StateError


def test_thermoneutral_voltage_is_the_heating_value_per_charge():
    hydrogen = Matter.of(("H2",))
    liquid = thermoneutral_voltage(298.15)
    steam = thermoneutral_voltage(298.15, "steam")
    assert liquid * 2 * FARADAY == pytest.approx(hydrogen.hhv[0], rel=1e-12)
    assert steam * 2 * FARADAY == pytest.approx(hydrogen.lhv[0], rel=1e-12)


@pytest.mark.parametrize("temperature", [298.15, 333.15, 353.15])
def test_reversible_voltage_follows_the_fit_of_leroy(temperature):
    # LeRoy, Bowen, LeRoy, J. Electrochem. Soc. 127 (1980) 1954, 25 to 250 degC
    import math

    fit = 1.5184 - 1.5421e-3 * temperature
    fit += 9.523e-5 * temperature * math.log(temperature) + 9.84e-8 * temperature**2
    assert reversible_voltage(temperature) == pytest.approx(fit, abs=1e-3)  # [V]


def test_the_phases_differ_by_the_heat_of_evaporation():
    assert reversible_voltage(373.124, "liquid") == pytest.approx(
        reversible_voltage(373.124, "steam"), abs=1e-3
    )


def test_reversible_voltage_falls_by_the_entropy():
    slope = (reversible_voltage(1001.0, "steam") - reversible_voltage(999.0, "steam")) / 2
    heat = thermoneutral_voltage(1000.0, "steam") - reversible_voltage(1000.0, "steam")
    assert slope * 1000.0 == pytest.approx(-heat, rel=1e-5)


def test_pressure_of_steam_lowers_the_voltage():
    assert nernst_shift(1073.15, 1e5, 1e5, 1e5) == 0.0
    assert nernst_shift(1073.15, 1e5, 1e5, 5e5) < 0.0


def test_wrong_phase_or_temperature():
    with pytest.raises(ValueError, match="wanted 'liquid' or 'steam'"):
        reversible_voltage(300.0, "ice")
    with pytest.raises(ValueError, match="take phase='steam'"):
        reversible_voltage(1000.0)
    with pytest.raises(StateError, match="temperature"):
        reversible_voltage(100.0)

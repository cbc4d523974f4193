"""Formation enthalpies and heating values against printed ones.

Sources: ATcT v1.112 and CRC as shipped in the library chemicals 1.5.2; CODATA Key Values for
Thermodynamics (Cox, Wagman, Medvedev 1989); ISO 6976:2016 (from memory); EN 437 test gases (from
memory); Moran and Shapiro, Fundamentals of Engineering Thermodynamics, Table A-25.
"""

import pytest

from chainflow.basis.constants import NORMAL_MOLAR_VOLUME
from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.heating import heating_values
from chainflow.thermo.species import polynomial

MATTER = Matter.of((*DEFAULT_COMPONENTS, "CH3OH"))


@pytest.mark.parametrize(
    ("name", "published"),
    [
        ("CH4", -74.53),
        ("CO", -110.53),
        ("CO2", -393.47),
        ("H2O", -241.82),
        ("H2O(L)", -285.83),
        ("CH3OH", -200.70),
    ],
)
def test_formation_enthalpies(name, published):
    # ATcT v1.112 in chemicals 1.5.2, 298.15 K, [kJ/mol]; sources differ by up to 0.5
    assert polynomial(name).enthalpy(298.15) / 1e3 == pytest.approx(published, abs=0.5)


def test_formation_enthalpy_of_liquid_water():
    # CODATA Key Values 1989: -285.830 +- 0.040 kJ/mol
    assert polynomial("H2O(L)").enthalpy(298.15) / 1e3 == pytest.approx(-285.830, abs=0.05)


@pytest.mark.parametrize(
    ("name", "upper", "lower"),
    [("H2", 285.83, 241.82), ("CH4", 890.59, 802.57), ("CO", 282.95, 282.95)],
)
def test_molar_heating_values(name, upper, lower):
    # chemicals 1.5.2 combustion_data with ATcT/CRC formation enthalpies, 25 degC, [kJ/mol], 0.2 %
    place = MATTER.index[name]
    assert MATTER.hhv[place] / 1e3 == pytest.approx(upper, rel=2e-3)
    assert MATTER.lhv[place] / 1e3 == pytest.approx(lower, rel=2e-3)


@pytest.mark.parametrize(
    ("name", "upper", "lower"),
    [("H2", 141.79, 119.95), ("CH4", 55.51, 50.03), ("CO", 10.10, 10.10)],
)
def test_heating_values_per_mass(name, upper, lower):
    # chemicals 1.5.2 combustion_data, 25 degC, [MJ/kg], 0.2 %
    found = heating_values(MATTER, MATTER.vector({name: 1.0}))
    assert found.upper_per_mass / 1e6 == pytest.approx(upper, rel=2e-3)
    assert found.lower_per_mass / 1e6 == pytest.approx(lower, rel=2e-3)


def test_hydrogen_of_the_textbook_table():
    # Moran and Shapiro, Table A-25, 25 degC, 1 atm: 141 780 and 119 950 kJ/kg, 0.2 %
    found = heating_values(MATTER, MATTER.vector({"H2": 1.0}))
    assert found.upper_per_mass / 1e3 == pytest.approx(141_780.0, rel=2e-3)
    assert found.lower_per_mass / 1e3 == pytest.approx(119_950.0, rel=2e-3)


@pytest.mark.parametrize(
    ("name", "temperature", "published"),
    [
        ("CH4", 298.15, 890.58),
        ("CH4", 288.15, 891.51),
        ("H2", 298.15, 285.83),
        ("CO", 298.15, 282.98),
    ],
)
def test_gross_calorific_values_of_iso_6976(name, temperature, published):
    # ISO 6976:2016 Table 3, ideal gas, [kJ/mol], from memory; normative, 0.02 %
    found = heating_values(MATTER, MATTER.vector({name: 1.0}), temperature)
    assert found.upper / 1e3 == pytest.approx(published, rel=2e-4)


@pytest.mark.parametrize(("name", "published"), [("CH4", 39.733), ("H2", 12.752)])
def test_gross_calorific_value_per_ideal_volume(name, published):
    # 25 degC combustion, metered at 0 degC and 101.325 kPa: arithmetic from ISO 6976:2016
    # (890.58 and 285.83 over 22.41397), [MJ/m3], 0.1 %
    found = heating_values(
        MATTER, MATTER.vector({name: 1.0}), 298.15, metering_temperature=273.15, ideal=True
    )
    assert found.upper_per_volume / 1e6 == pytest.approx(published, rel=1e-3)


@pytest.mark.parametrize(
    ("gas", "published"),
    [
        ({"CH4": 1.0}, (37.78, 34.02, 0.555, 50.72, 45.67)),  # G20
        ({"CH4": 0.77, "H2": 0.23}, (31.86, 28.53, 0.443, 47.87, 42.87)),  # G222
    ],
)
def test_gases_of_en_437(gas, published):
    # EN 437 test-gas table, 15 degC / 15 degC, 1013.25 mbar, dry, real gas, from memory:
    # Hs, Hi [MJ/m3], relative density, Ws, Wi [MJ/m3]; 0.2 %
    found = heating_values(MATTER, MATTER.vector(gas), 288.15, 288.15, 101325.0)
    ours = (
        found.upper_per_volume / 1e6,
        found.lower_per_volume / 1e6,
        found.relative_density,
        found.upper_wobbe_index / 1e6,
        found.lower_wobbe_index / 1e6,
    )
    assert ours == pytest.approx(published, rel=2e-3)


def test_energy_per_kilogram_and_normal_volume_of_hydrogen():
    # closed forms from 285.83 and 241.82 kJ/mol and 2.01588 g/mol:
    # 39.39 and 33.32 kWh/kg (0.02); 3.542 and 2.997 kWh/Nm3 (0.1 %)
    place = MATTER.index["H2"]
    upper, lower = MATTER.hhv[place] / 3.6e6, MATTER.lhv[place] / 3.6e6
    assert upper / MATTER.molar_mass[place] == pytest.approx(39.39, abs=0.02)
    assert lower / MATTER.molar_mass[place] == pytest.approx(33.32, abs=0.02)
    assert upper / NORMAL_MOLAR_VOLUME == pytest.approx(3.542, rel=1e-3)
    assert lower / NORMAL_MOLAR_VOLUME == pytest.approx(2.997, rel=1e-3)

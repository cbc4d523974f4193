"""Adiabatic flame temperatures and dew points of flue gas against printed ones.

Flames: Cantera 3.2.0 with gri30, another mechanism and table than ours; Turns, An Introduction to
Combustion; Smith, Van Ness, Abbott (both from memory).
"""

import pytest

from chainflow.equipment.burner import Burner
from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.flames import flame_temperature
from chainflow.thermo.streams import Stream
from chainflow.thermo.water import saturation_temperature

MATTER = Matter.of((*DEFAULT_COMPONENTS, "CH3OH", "C3H8"))
AIR = 79.0 / 21.0


def flame(amounts):
    feed = Stream.gaseous(MATTER, MATTER.vector(amounts), 298.15, 101325.0)
    return flame_temperature(MATTER, feed.flows, feed.enthalpy, 101325.0)


@pytest.mark.parametrize(
    ("amounts", "published", "tolerance"),
    [
        ({"CH4": 1, "O2": 2, "N2": 2 * AIR}, 2224, 6),
        ({"CH4": 1, "O2": 4, "N2": 4 * AIR}, 1478, 6),
        ({"H2": 1, "O2": 0.5, "N2": 0.5 * AIR}, 2380, 6),
        ({"CO": 1, "O2": 0.5, "N2": 0.5 * AIR}, 2383, 6),
        ({"CH4": 1, "O2": 2}, 3052, 10),
        ({"CH4": 1, "O2": 2, "CO2": 2 * 7 / 3}, 2158, 6),
        ({"CH4": 1, "O2": 2, "CO2": 2 * AIR}, 1782, 6),
        ({"CH4": 1, "O2": 2, "N2": 2 * 7 / 3}, 2524, 6),
        ({"CH3OH": 1, "O2": 1.5, "N2": 1.5 * AIR}, 2220, 6),
        ({"C3H8": 1, "O2": 5, "N2": 5 * AIR}, 2265, 6),
    ],
)
def test_flames_at_one_atmosphere(amounts, published, tolerance):
    # Cantera 3.2.0, gri30, 298.15 K, 1 atm, constant pressure, [K]; 6 K, 10 K with pure oxygen
    assert flame(amounts) == pytest.approx(published, abs=tolerance)


def test_methane_in_air_of_the_textbook():
    # Turns, An Introduction to Combustion, Table B.1, from memory: 2226 K, 8 K
    assert flame({"CH4": 1, "O2": 2, "N2": 2 * 3.76}) == pytest.approx(2226, abs=8)


@pytest.mark.parametrize(
    ("fuel", "products", "published"),
    [
        ({"CH4": 1, "O2": 2, "N2": 7.52}, {"CO2": 1, "H2O": 2, "N2": 7.52}, 2326),
        ({"H2": 1, "O2": 0.5, "N2": 1.88}, {"H2O": 1, "N2": 1.88}, 2519),
    ],
)
def test_complete_combustion_without_dissociation(fuel, products, published):
    # Cantera 3.2.0, gri30, 298.15 K, 1 atm, [K], 5 K
    feed = Stream.gaseous(MATTER, MATTER.vector(fuel), 298.15, 101325.0)
    burnt = Stream.from_enthalpy(MATTER, MATTER.vector(products), feed.enthalpy, 101325.0)
    assert burnt.temperature == pytest.approx(published, abs=5.0)


def test_methane_with_a_fifth_more_air():
    # Smith, Van Ness, Abbott, Example 4.7, from memory: 2066 K, 6 K
    oxygen = 2.4
    fuel = {"CH4": 1, "O2": oxygen, "N2": oxygen * AIR}
    products = {"CO2": 1, "H2O": 2, "O2": oxygen - 2, "N2": oxygen * AIR}
    feed = Stream.gaseous(MATTER, MATTER.vector(fuel), 298.15, 101325.0)
    burnt = Stream.from_enthalpy(MATTER, MATTER.vector(products), feed.enthalpy, 101325.0)
    assert burnt.temperature == pytest.approx(2066, abs=6.0)


@pytest.mark.parametrize(("share", "published"), [(2 / (1 + 2 + 7.52), 59.2), (2 / 3, 89.0)])
def test_dew_point_of_flue_gas(share, published):
    # CoolProp saturation at 101.325 kPa: CH4 in air, CH4 in oxygen; [degC], 0.5 K
    assert saturation_temperature(share * 101325.0) - 273.15 == pytest.approx(published, abs=0.5)


def test_air_that_a_burner_asks_for():
    # closed form of the printed 17.12 kg/kg and 9.52 mol/mol, air O2 + 3.76 N2: 0.3 %
    fuel = Stream.gaseous(MATTER, MATTER.vector({"CH4": 1.0}), 298.15, 101325.0)
    air = Stream.gaseous(MATTER, MATTER.vector({"O2": 1 / 4.76, "N2": 3.76 / 4.76}), 298.15, 101325)
    asked = Burner().run({"fuel": (fuel,), "oxidiser": air}).drawn["oxidiser"]
    assert asked == pytest.approx(9.52, rel=3e-3)
    assert asked * air.mass_flow / fuel.mass_flow == pytest.approx(17.12, rel=3e-3)

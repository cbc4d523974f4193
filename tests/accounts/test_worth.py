import pytest

from chainflow.accounts.worth import Worth, of_heat, of_light, of_material, of_power
from chainflow.equipment.ports import Heat
from chainflow.thermo.components import Matter
from chainflow.thermo.streams import Stream

MATTER = Matter.of(("H2", "H2O", "CO2", "CH4"))


def stream(**flows):
    return Stream.gaseous(MATTER, MATTER.vector(flows), 298.15, 101325.0)


def test_power_is_worth_the_same_on_every_basis():
    assert of_power(3e6).by_basis == {"LHV": 3e6, "HHV": 3e6, "exergy": 3e6}


def test_light_has_the_exergy_of_petela():
    # Petela, J. Heat Transfer 86 (1964) 187, with 298.15 K and 5778 K: 0.9312
    assert of_light(1.0).exergy == pytest.approx(0.9312, abs=5e-5)
    assert of_light(1.0).lhv == 1.0


def test_heat_has_the_exergy_of_carnot():
    # 1 - 298.15 / 596.3 = 0.5
    assert of_heat(Heat(10.0, 596.3, 596.3, 596.3)).exergy == pytest.approx(5.0, rel=1e-12)


def test_heat_below_25_degc_has_no_exergy_as_an_input():
    assert of_heat(Heat(10.0, 290.0, 290.0, 290.0)) == Worth(10.0, 10.0, 0.0)


def test_methane_heating_values():
    # ISO 6976:2016: CH4 at 25 degC 802.60 (lower) and 890.58 (upper) kJ/mol
    worth = of_material(stream(CH4=1.0))
    assert worth.lhv / 1e3 == pytest.approx(802.6, abs=0.5)
    assert worth.hhv / 1e3 == pytest.approx(890.6, abs=0.5)


def test_water_and_carbon_dioxide_have_no_heating_value_but_exergy():
    worth = of_material(stream(CO2=1.0, H2O=1.0))
    assert (worth.lhv, worth.hhv) == (0.0, 0.0)
    assert worth.exergy > 0.0


def test_sums_and_ratios():
    whole = Worth.total([Worth(1.0, 2.0, 3.0), Worth(1.0, 2.0, 1.0)])
    assert Worth(1.0, 1.0, 1.0).over(whole) == {"LHV": 0.5, "HHV": 0.25, "exergy": 0.25}


def test_a_ratio_to_nothing_has_no_value():
    assert Worth(1.0, 1.0, 1.0).over(Worth(0.0, 1.0, 0.0)) == {
        "LHV": None,
        "HHV": 1.0,
        "exergy": None,
    }

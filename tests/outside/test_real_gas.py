"""Densities and work of real gases against reference equations of state and a public record.

CoolProp 8.0.0: Leachman 2009 for hydrogen, Setzmann-Wagner for methane, Span-Wagner for carbon
dioxide. US DOE Hydrogen Program Record 9013 (2009).
"""

import pytest
from CoolProp import CoolProp

from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.compression import isentropic, isentropic_temperature
from chainflow.thermo.densities import pure_density, vapour_pressure

MATTER = Matter.of(DEFAULT_COMPONENTS)


def minimum_work(name, low, high):
    """Isothermal work at 25 degC [kWh/kg]: rise of h less T times the rise of s."""
    flows = MATTER.vector({name: 1.0})
    start, end = (MATTER.gas_state(flows, 298.15, p * 1e5) for p in (low, high))
    work = end.enthalpy - start.enthalpy - 298.15 * (end.entropy - start.entropy)
    return work / MATTER.molar_mass[MATTER.index[name]] / 3.6e6


def stage_work(name, low, high, stages):
    """Work [kWh/kg] of equal isentropic stages, each from 25 degC."""
    flows, ratio = MATTER.vector({name: 1.0}), (high / low) ** (1 / stages)
    work = sum(
        isentropic(MATTER, flows, 298.15, low * 1e5 * ratio**i, low * 1e5 * ratio ** (i + 1)).work
        for i in range(stages)
    )
    return work / MATTER.molar_mass[MATTER.index[name]] / 3.6e6


DENSITIES = [
    ("H2", 273.15, 1.01325, 0.0899),
    ("H2", 298.15, 30, 2.397),
    ("H2", 288.15, 200, 14.94),
    ("H2", 288.15, 350, 24.0),
    ("H2", 288.15, 700, 40.17),
    ("H2", 298.15, 350, 23.32),
    ("H2", 358.15, 875, 40.23),
    ("CH4", 288.15, 1.01325, 0.6798),
    ("CH4", 288.15, 200, 167.8),
    ("CH4", 298.15, 250, 188.2),
]


@pytest.mark.parametrize(("name", "temperature", "bar", "published"), DENSITIES)
def test_density_of_what_is_stored(name, temperature, bar, published):
    # CoolProp 8.0.0, [kg/m3], 0.3 %
    assert pure_density(name, temperature, bar * 1e5) == pytest.approx(published, rel=3e-3)


@pytest.mark.parametrize(("name", "temperature", "bar", "published"), DENSITIES)
def test_density_of_the_gas_model(name, temperature, bar, published):
    # CoolProp 8.0.0; Redlich-Kwong is known to stay within 0.3 % to 100 bar and 3 % to 900 bar
    own = MATTER.gas_density(MATTER.vector({name: 1.0}), temperature, bar * 1e5)
    assert own == pytest.approx(published, rel=3e-3 if bar < 100 else 0.03)


@pytest.mark.parametrize(("high", "published"), [(350, 1.05), (700, 1.36)])
def test_isothermal_work_of_the_public_record(high, published):
    # US DOE Record 9013: 20 to 350 and 700 bar at 25 degC, real gas, [kWh/kg], 0.01
    assert minimum_work("H2", 20, high) == pytest.approx(published, abs=0.01)


@pytest.mark.parametrize(
    ("low", "high", "isothermal", "one", "three", "four"),
    [
        (1, 30, 1.168, 1.968, 1.379, 1.322),
        (30, 350, 0.906, 1.287, 1.015, 0.986),
        (20, 700, 1.360, 2.252, 1.594, 1.531),
        (1, 200, 1.851, 4.244, 2.398, 2.244),
        (30, 180, 0.643, 0.832, 0.699, 0.685),
    ],
)
def test_work_of_hydrogen_compression(low, high, isothermal, one, three, four):
    # CoolProp 8.0.0, 25 degC before every stage, equal ratios, efficiency 1, [kWh/kg], 1 %
    assert minimum_work("H2", low, high) == pytest.approx(isothermal, rel=0.01)
    assert stage_work("H2", low, high, 1) == pytest.approx(one, rel=0.01)
    assert stage_work("H2", low, high, 3) == pytest.approx(three, rel=0.01)
    assert stage_work("H2", low, high, 4) == pytest.approx(four, rel=0.01)


def test_hydrogen_gets_hot_in_one_stage():
    # CoolProp 8.0.0: 1 to 30 bar from 25 degC ends at 510.8 degC, 2 K
    end = isentropic_temperature(MATTER, MATTER.vector({"H2": 1.0}), 298.15, 1e5, 30e5)
    assert end - 273.15 == pytest.approx(510.8, abs=2.0)


def test_work_of_methane_and_carbon_dioxide():
    # CoolProp 8.0.0, 25 degC, [kWh/kg], 1 %: CH4 1 to 250 bar isothermal, and 4 stages at 0.75
    assert minimum_work("CH4", 1, 250) == pytest.approx(0.2234, rel=0.01)
    assert stage_work("CH4", 1, 250, 4) / 0.75 == pytest.approx(0.3634, rel=0.01)


def test_pin_of_the_work_to_dense_carbon_dioxide():
    # CoolProp 8.0.0: 1 to 110 bar at 25 degC, 0.0609 kWh/kg, printed with 1 %, which the gas model
    # misses: the product is liquid.  A pin: what it is above, by our own code
    assert minimum_work("CO2", 1, 110) / 0.0609 - 1.0 == pytest.approx(0.0107, abs=2e-4)


def test_work_of_compressing_carbon_dioxide_to_its_dew_point():
    # CoolProp 8.0.0: 1 to 60 bar at 25 degC, 1 %
    assert minimum_work("CO2", 1, 60) == pytest.approx(
        _reference_work("CarbonDioxide", 1e5, 60e5), rel=0.01
    )


def _reference_work(fluid, low, high):
    start, end = (
        CoolProp.PropsSI("HMASS", "T", 298.15, "P", p, fluid)
        - 298.15 * CoolProp.PropsSI("SMASS", "T", 298.15, "P", p, fluid)
        for p in (low, high)
    )
    return (end - start) / 3.6e6


@pytest.mark.parametrize(
    ("name", "fluid"), [("CO2", "CarbonDioxide"), ("C3H8", "Propane"), ("C2H6", "Ethane")]
)
def test_vapour_pressures(name, fluid):
    # CoolProp 8.0.0; Ambrose and Walton claim 1 to 2 % for such molecules
    for temperature in (225.0, 250.0, 280.0, 300.0):
        published = CoolProp.PropsSI("P", "T", temperature, "Q", 0, fluid)
        assert vapour_pressure(name, temperature) == pytest.approx(published, rel=0.02)


@pytest.mark.parametrize(
    "gas",
    [{"H2": 0.8, "CO2": 0.2}, {"CH4": 0.9, "H2": 0.1}, {"N2": 0.85, "CO2": 0.15}],
)
def test_mixtures_against_helmholtz_models(gas):
    # CoolProp 8.0.0 mixture models at 320 K; Redlich-Kwong stays within 1 % at 30 and 2 % at
    # 100 bar in density
    names = {"H2": "Hydrogen", "CO2": "CarbonDioxide", "CH4": "Methane", "N2": "Nitrogen"}
    fluid = "&".join(f"{names[name]}[{share}]" for name, share in gas.items())
    flows = MATTER.vector(gas)
    for bar, tolerance in ((30, 0.01), (100, 0.02)):
        published = CoolProp.PropsSI("DMASS", "T|gas", 320.0, "P", bar * 1e5, fluid)
        own = MATTER.gas_density(flows, 320.0, bar * 1e5)
        assert own == pytest.approx(published, rel=tolerance)

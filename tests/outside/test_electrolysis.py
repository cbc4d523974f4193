"""Electrolysis against closed forms, standard atomic weights and a reference equation of state.

Faraday's constant is that of CODATA 2018; heating values 285.83 and 241.82 kJ/mol are those of
the ATcT formation enthalpies (library chemicals 1.5.2); saturation from CoolProp 8.0.0 (IAPWS-95).
"""

import pytest
from CoolProp import CoolProp

from chainflow.basis.quantities import parse
from chainflow.equipment.base import Site
from chainflow.equipment.electrolysis import Electrolyser
from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.electrochemistry import nernst_shift
from chainflow.thermo.streams import Stream

MATTER = Matter.of(DEFAULT_COMPONENTS)
H2, O2, WATER = (MATTER.index[name] for name in ("H2", "O2", "H2O"))
HYDROGEN = 2.01588e-3  # [kg/mol], IUPAC
KWH = 3.6e6  # [J]


def stack(power=1e6, **settings):
    """What a stack does with a power [W] and water of 25 degC."""
    settings = {"temperature": "60 degC", "pressure": "30 bar", **settings}
    if "voltage" in settings:
        settings["model"] = "voltage"
    equipment = Electrolyser.model_validate(settings)
    water = Stream.at(MATTER, MATTER.vector({"H2O": 1.0}), 298.15, equipment.pressure)
    return equipment.operate({"power": (power,), "water": water}, {}, Site(MATTER))


def test_pressure_raises_the_voltage_by_nernst():
    # closed form RT/2F ln(30^1.5) at 80 degC, [V], 0.2 mV
    assert nernst_shift(353.15, 30e5, 30e5) == pytest.approx(0.0776, abs=2e-4)


@pytest.mark.parametrize(("values", "published"), [("hhv", 39.39), ("lhv", 33.32)])
def test_energy_of_a_kilogram_at_full_efficiency(values, published):
    # closed form 285.83 and 241.82 kJ/mol over 2.01588 g/mol, [kWh/kg], 0.02
    assert getattr(MATTER, values)[H2] / HYDROGEN / KWH == pytest.approx(published, abs=0.02)


@pytest.mark.parametrize(("values", "published"), [("hhv", 3.542), ("lhv", 2.997)])
def test_energy_of_a_normal_cubic_metre(values, published):
    # closed form at 0 degC and 101.325 kPa, [kWh/Nm3], 0.1 %
    amount = parse("1 Nm3/s", "mol/s")
    assert getattr(MATTER, values)[H2] * amount / KWH == pytest.approx(published, rel=1e-3)


def test_hydrogen_by_charge():
    # 1/(2F), [mol/(A s)], 1e-5; 37.608 g/(kA h), 0.01 %
    results = stack(power=1.9e3, voltage="1.9 V").results  # 1000 A through one cell
    assert results["hydrogen_mol_s"] / 1e3 == pytest.approx(5.18213e-6, rel=1e-5)
    assert results["hydrogen_kg_s"] * 1e3 * 3600 == pytest.approx(37.608, rel=1e-4)


@pytest.mark.parametrize("voltage", [1.5, 1.9, 2.4])
def test_electricity_by_voltage(voltage):
    # closed form 2F/(M 3600): 26.590 kWh/kg for each volt, 0.01 %
    results = stack(voltage=f"{voltage} V").results
    use = results["direct_current_W"] / results["hydrogen_kg_s"] / KWH
    assert use / voltage == pytest.approx(26.590, rel=1e-4)


def test_water_used_and_oxygen_made():
    # stoichiometry with standard molar masses: 8.937 and 7.937 kg per kg of hydrogen, 0.01 % of it
    # and half a unit of the last digit (hydrogen 1.008 here, 1.00794 there)
    outcome = stack(energy_use="52 kWh/kg")
    hydrogen = outcome.results["hydrogen_kg_s"]
    gases = outcome.outlets["hydrogen"], outcome.outlets["oxygen"]
    moisture = sum(gas.flows[WATER] for gas in gases) * MATTER.molar_mass[WATER]
    used = outcome.results["water_kg_s"] - moisture
    made = outcome.outlets["oxygen"].flows[O2] * MATTER.molar_mass[O2]
    assert used / hydrogen == pytest.approx(8.937, abs=8.9e-4 + 5e-4)
    assert made / hydrogen == pytest.approx(7.937, abs=7.9e-4 + 5e-4)


def test_a_stack_of_52_kilowatt_hours_per_kilogram():
    # 39.39 / 52 and 33.32 / 52, to the 0.02 kWh/kg of those values
    results = stack(energy_use="52 kWh/kg", rectifier="95 %").results
    assert results["hydrogen_kg_s"] * 3600 == pytest.approx(950 / 52, rel=1e-12)
    assert results["stack_efficiency_HHV"] == pytest.approx(39.39 / 52, abs=0.02 / 52)
    assert results["stack_efficiency_LHV"] == pytest.approx(33.32 / 52, abs=0.02 / 52)
    assert results["voltage_V"] == pytest.approx(52 / 26.590, rel=1e-4)


@pytest.mark.parametrize(("celsius", "bar"), [(60, 30), (60, 12), (80, 10), (80, 1.2)])
def test_both_gases_leave_saturated(celsius, bar):
    # CoolProp 8.0.0; the gas is taken as ideal, so y = p_sat / p exactly
    saturation = CoolProp.PropsSI("P", "T", celsius + 273.15, "Q", 0, "Water")
    outcome = stack(energy_use="52 kWh/kg", temperature=f"{celsius} degC", pressure=f"{bar} bar")
    for name in ("hydrogen", "oxygen"):
        share = outcome.outlets[name].fraction("H2O")
        assert share == pytest.approx(saturation / (bar * 1e5), rel=1e-4)


def test_no_heat_at_the_thermoneutral_voltage():
    # 1.4812 V at 25 degC and 1 bar (Cantera 3.2.0 gases, CODATA water), 1 mV; at 30 bar the real
    # gases and the moisture they take up shift it by less than another 1 mV
    outcome = stack(voltage="1.4812 V", temperature="25 degC")
    per_mol = outcome.heat / outcome.results["hydrogen_mol_s"]
    assert per_mol == pytest.approx(0.0, abs=2e-3 * 2 * 96485.33212)


def test_heat_of_a_stack_is_what_the_voltage_leaves():
    # overvoltage 1.9 - 1.4812 V over 2F, to the shift of the thermoneutral voltage, 2 mV (60 degC:
    # the water is warmed by the stack itself, 35 K of 75.3 J/(mol K), from memory)
    outcome = stack(voltage="1.9 V", temperature="60 degC")
    per_mol = -outcome.heat / outcome.results["hydrogen_mol_s"]
    moisture = 1.5 * outcome.outlets["hydrogen"].fraction("H2O") * 44e3  # evaporated
    gases = 35.0 * (28.9 + 0.5 * 29.5)  # heat capacities of H2 and O2, from memory
    expected = 2 * 96485.33212 * (1.9 - 1.4812) - moisture - gases
    assert per_mol == pytest.approx(expected, abs=2e-3 * 2 * 96485.33212)


def test_hydrogen_asked_for_calls_for_its_power():
    # 20 kg/h at 52 kWh/kg and 95 % rectifier: 20 * 52 / 0.95 kW
    equipment = Electrolyser.model_validate(
        {
            "energy_use": "52 kWh/kg",
            "hydrogen": "20 kg/h",
            "rectifier": "95 %",
            "temperature": "60 degC",
            "pressure": "30 bar",
        }
    )
    water = Stream.at(MATTER, MATTER.vector({"H2O": 1.0}), 298.15, 30e5)
    outcome = equipment.operate({"water": water}, {}, Site(MATTER))
    assert outcome.drawn["power"] == pytest.approx(20 * 52e3 / 0.95, rel=1e-12)

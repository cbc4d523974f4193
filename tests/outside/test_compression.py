"""Compressors, valves and expanders against a reference equation of state and a public record.

CoolProp 8.0.0: Leachman 2009 for hydrogen, Setzmann-Wagner for methane, Span-Wagner for carbon
dioxide.  US DOE Hydrogen Program Record 9013 (2009).  Redlich-Kwong is the model under test.
"""

import pytest
from CoolProp import CoolProp

from chainflow.equipment.base import Site
from chainflow.equipment.compression import Compressor
from chainflow.equipment.expansion import Expander, Pump, Valve
from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.streams import Stream

MATTER = Matter.of(DEFAULT_COMPONENTS)
KWH = 3.6e6  # [J]
WARM = 298.15  # [K], 25 degC


def gas(name, bar, temperature=WARM):
    return Stream.at(MATTER, MATTER.vector({name: 2.0}), temperature, bar * 1e5)


def compressed(name, low, high, stages, **settings):
    """The outcome of compressing a gas of 25 degC, cooled to 25 degC between the stages."""
    given = {"pressure": f"{high} bar", "stages": stages, "intercool": "25 degC", **settings}
    return Compressor.model_validate(given).operate({"inlet": gas(name, low)}, {}, Site(MATTER))


def work(outcome):
    """Shaft work [kWh/kg]."""
    return outcome.results["specific_work_J_kg"] / KWH


def least_work(name, low, high):
    """Rise of h less T times the rise of s at 25 degC [kWh/kg]."""
    start, end = gas(name, low), gas(name, high)
    rise = end.enthalpy - start.enthalpy - WARM * (end.entropy - start.entropy)
    return rise / start.mass_flow / KWH


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
def test_hydrogen(low, high, isothermal, one, three, four):
    # CoolProp 8.0.0, 25 degC before every stage, equal ratios, efficiency 1, [kWh/kg], 1 %
    assert least_work("H2", low, high) == pytest.approx(isothermal, rel=0.01)
    for stages, published in ((1, one), (3, three), (4, four)):
        outcome = compressed("H2", low, high, stages, efficiency=1)
        assert work(outcome) == pytest.approx(published, rel=0.01)


def test_discharge_of_one_stage_of_hydrogen():
    # CoolProp 8.0.0: 1 to 30 bar from 25 degC isentropic, 510.8 degC, 2 K
    outcome = compressed("H2", 1, 30, 1, efficiency=1)
    assert outcome.results["discharge_K"] - 273.15 == pytest.approx(510.8, abs=2)


def test_isothermal_work_of_an_ideal_gas_is_near():
    # closed form RT ln 30 / M = 1.162 kWh/kg; hydrogen is 0.5 % above (CoolProp 8.0.0: 1.168)
    assert least_work("H2", 1, 30) == pytest.approx(1.162, rel=0.01)
    assert least_work("H2", 1, 30) > 1.162


@pytest.mark.parametrize(("high", "published"), [(350, 1.05), (700, 1.36)])
def test_isothermal_work_of_the_public_record(high, published):
    # US DOE Record 9013, from 20 bar at 25 degC, [kWh/kg], 0.01
    assert least_work("H2", 20, high) == pytest.approx(published, abs=0.01)


def test_methane():
    # CoolProp 8.0.0: 1 to 250 bar, 25 degC, isothermal and four stages at 0.75, [kWh/kg], 1 %
    assert least_work("CH4", 1, 250) == pytest.approx(0.2234, rel=0.01)
    outcome = compressed("CH4", 1, 250, 4, efficiency=0.75)
    assert work(outcome) == pytest.approx(0.3634, rel=0.01)


@pytest.mark.parametrize("bar", [20, 40, 60])
def test_carbon_dioxide_as_a_gas(bar):
    # CoolProp 8.0.0 (Span-Wagner), rise of h less T times rise of s at 25 degC, 1 %
    states = [
        [CoolProp.PropsSI(x, "T", WARM, "P", p * 1e5, "CO2") for x in ("Hmass", "Smass")]
        for p in (1, bar)
    ]
    (h0, s0), (h1, s1) = states
    published = (h1 - h0 - WARM * (s1 - s0)) / KWH
    assert least_work("CO2", 1, bar) == pytest.approx(published, rel=0.01)


def test_more_stages_take_less_work_and_never_less_than_the_least():
    works = [work(compressed("H2", 1, 200, stages, efficiency=1)) for stages in (1, 2, 3, 5, 8, 12)]
    assert works == sorted(works, reverse=True)
    assert works[-1] > least_work("H2", 1, 200)


def test_stages_are_chosen_by_the_discharge_temperature():
    # common practice, no source: below 150 degC
    outcome = compressed("H2", 10, 350, "auto", efficiency=0.75)
    fewer = compressed("H2", 10, 350, int(outcome.results["stages"]) - 1, efficiency=0.75)
    assert outcome.results["discharge_K"] <= 423.15 < fewer.results["discharge_K"]


def test_hydrogen_to_350_bar_takes_some_per_cent_of_its_heating_value():
    # common practice, no source: 5 to 9 % of the LHV at 75 % from 10 bar
    outcome = compressed("H2", 10, 350, "auto", efficiency=0.75)
    assert 0.05 < outcome.power / gas("H2", 10).lhv < 0.09


# ----------------------------------------------------------------------------- letting down
@pytest.mark.parametrize("celsius", [30, 40, 60, 100])
def test_carbon_dioxide_let_down_from_60_to_30_bar(celsius):
    # CoolProp 8.0.0 (Span-Wagner), constant enthalpy, 3 K
    enthalpy = CoolProp.PropsSI("Hmass", "T", celsius + 273.15, "P", 60e5, "CO2")
    published = CoolProp.PropsSI("T", "Hmass", enthalpy, "P", 30e5, "CO2")
    valve = Valve.model_validate({"pressure": "30 bar"})
    outcome = valve.operate({"inlet": gas("CO2", 60, celsius + 273.15)}, {}, Site(MATTER))
    assert outcome.outlets["outlet"].temperature == pytest.approx(published, abs=3.0)


def test_pin_of_the_warming_of_hydrogen_that_is_let_down():
    # CoolProp 8.0.0 (Leachman): 350 to 30 bar from 25 degC, 12.8 K; the attraction of
    # Redlich-Kwong falls with T^-1/2 only.  A pin: its effect is 13.3 % larger, by our own code
    enthalpy = CoolProp.PropsSI("Hmass", "T", WARM, "P", 350e5, "Hydrogen")
    published = CoolProp.PropsSI("T", "Hmass", enthalpy, "P", 30e5, "Hydrogen")
    valve = Valve.model_validate({"pressure": "30 bar"})
    outlet = valve.operate({"inlet": gas("H2", 350)}, {}, Site(MATTER)).outlets["outlet"]
    assert published > WARM
    departure = (outlet.temperature - WARM) / (published - WARM) - 1.0
    assert departure == pytest.approx(0.133, abs=2e-3)


def test_power_of_an_expander():
    # CoolProp 8.0.0 (Span-Wagner): CO2 30 to 2 bar from 300 degC, isentropic times 80 %, 1 %
    h0, s0 = (CoolProp.PropsSI(x, "T", 573.15, "P", 30e5, "CO2") for x in ("Hmass", "Smass"))
    h1 = CoolProp.PropsSI("Hmass", "Smass", s0, "P", 2e5, "CO2")
    inlet = gas("CO2", 30, 573.15)
    outcome = Expander.model_validate({"pressure": "2 bar"}).operate(
        {"inlet": inlet}, {}, Site(MATTER)
    )
    published = 0.8 * (h0 - h1) * inlet.mass_flow
    assert outcome.outlets["power"] == pytest.approx(published, rel=0.01)


def test_power_of_a_steam_expander():
    # CoolProp 8.0.0 (IAPWS-95): 20 bar 350 degC to 0.1 bar, isentropic times 85 %; real steam
    # differs from Redlich-Kwong by up to 3 % there
    h0, s0 = (CoolProp.PropsSI(x, "T", 623.15, "P", 20e5, "Water") for x in ("Hmass", "Smass"))
    h1 = CoolProp.PropsSI("Hmass", "Smass", s0, "P", 1e4, "Water")
    inlet = gas("H2O", 20, 623.15)
    expander = Expander.model_validate({"pressure": "0.1 bar", "efficiency": "85 %"})
    outcome = expander.operate({"inlet": inlet}, {}, Site(MATTER))
    published = 0.85 * (h0 - h1) * inlet.mass_flow
    assert outcome.outlets["power"] == pytest.approx(published, rel=0.03)


def test_power_of_a_pump():
    # CoolProp 8.0.0 (IAPWS-95): water 1 to 100 bar at 25 degC, isentropic over 70 %, 1 %
    h0, s0 = (CoolProp.PropsSI(x, "T", WARM, "P", 1e5, "Water") for x in ("Hmass", "Smass"))
    h1 = CoolProp.PropsSI("Hmass", "Smass", s0, "P", 100e5, "Water")
    inlet = gas("H2O", 1)
    outcome = Pump.model_validate({"pressure": "100 bar"}).operate(
        {"inlet": inlet}, {}, Site(MATTER)
    )
    assert outcome.power == pytest.approx((h1 - h0) / 0.7 * inlet.mass_flow, rel=0.01)

"""Fuel cells: curves, sizing, heat, what is left of fuel and air, and wrong settings."""

import numpy as np
import pytest
from pydantic import ValidationError

from chainflow.basis.constants import FARADAY
from chainflow.equipment.cells.fuel_cells import PemFuelCell
from tests.equipment.feeds import MATTER, stream
from tests.equipment.stacks import AIR, HYDROGEN, at_work, fuel_cell, rises

FULL = {"current_density": 5e3}
METHANE = stream({"CH4": 1.0}, 25.0, 5.0)
MOIST = stream({"CH4": 1.0, "H2O": 2.2}, 300.0, 5.0)

# Tabled so that a reader can compare: cell voltage [V] at current densities [A/cm2], pins.
DENSITIES = (0.02, 0.05, 0.1, 0.3, 0.6, 1.0)
PEM = {  # set, degC; hydrogen and air at 1.5 bar, half of the oxygen used
    ("neyerlin-2006", 80): (0.887, 0.861, 0.838, 0.796, 0.760, 0.723),
    ("neyerlin-2006", 60): (0.890, 0.865, 0.843, 0.802, 0.766, 0.728),
    ("mark-v", 70): (0.994, 0.939, 0.894, 0.809, 0.733, 0.641),
    ("mann-2000", 70): (0.867, 0.802, 0.751, 0.653, 0.566, 0.463),
}
HOT_DENSITIES = (0.02, 0.1, 0.3, 0.4, 0.5, 0.6)
SOLID_OXIDE = {  # degC; hydrogen with 2 % steam, 80 % used
    700: (0.902, 0.889, 0.778, 0.716, 0.652, 0.587),
    750: (0.882, 0.878, 0.809, 0.765, 0.719, 0.672),
    800: (0.862, 0.861, 0.821, 0.790, 0.757, 0.722),
}


def pem_voltages(name, celsius, densities=DENSITIES):
    pieces = [
        fuel_cell("pem", celsius, 1.5, current_density=1e4 * i, pem={"set": name})
        for i in densities
    ]
    return [at_work(piece).results["voltage_V"] for piece in pieces]


def hot_voltages(celsius, densities=HOT_DENSITIES):
    pieces = [fuel_cell("solid-oxide", celsius, 1, current_density=1e4 * i) for i in densities]
    return [at_work(piece).results["voltage_V"] for piece in pieces]


@pytest.mark.parametrize("key", PEM, ids=str)
def test_pem_curves_as_tabled_pin(key):
    assert pem_voltages(*key) == pytest.approx(PEM[key], abs=6e-4)


@pytest.mark.parametrize("celsius", SOLID_OXIDE)
def test_solid_oxide_curves_as_tabled_pin(celsius):
    assert hot_voltages(celsius) == pytest.approx(SOLID_OXIDE[celsius], abs=6e-4)


def test_curves_fall_with_current():
    densities = np.linspace(0.001, 1.4, 40)
    for name in ("neyerlin-2006", "mark-v", "mann-2000"):
        found = pem_voltages(name, 70, densities)
        assert rises([-v for v in found])
        assert max(found) < 1.2
    assert rises([-v for v in hot_voltages(800, np.linspace(0.01, 1.0, 20))])


def test_the_physical_cell_lies_between_the_semi_empirical_ones_at_usual_loads():
    """The older formula as a check on the physics: within 60 mV of the fitted stack."""
    for density in (0.2, 0.3, 0.4, 0.5, 0.6):
        (physical,) = pem_voltages("neyerlin-2006", 70, (density,))
        (fitted,) = pem_voltages("mark-v", 70, (density,))
        (generic,) = pem_voltages("mann-2000", 70, (density,))
        assert generic < physical
        assert physical == pytest.approx(fitted, abs=0.06)


def random_points():
    chance = np.random.default_rng(21)

    def between(low, high):
        return float(chance.uniform(low, high))

    for _ in range(100):
        yield fuel_cell(
            "pem",
            between(30, 90),
            between(1.2, 4),
            current_density=between(50, 1.3e4),
            pem={
                "set": str(chance.choice(["neyerlin-2006", "mark-v"])),
                "fuel_use": between(0.5, 0.99),
            },
            air_ratio=between(1.5, 4),
            inverter=between(0.9, 1.0),
            auxiliaries=between(0.0, 0.15),
        )
        yield fuel_cell(
            "solid-oxide",
            between(700, 900),
            between(1, 3),
            current_density=between(50, 4e3),
            solid_oxide={"fuel_use": between(0.3, 0.9), "recirculation": between(0.0, 0.8)},
            air_ratio=between(1.5, 6),
        )


@pytest.mark.parametrize("model", ["pem", "solid-oxide"])
def test_no_random_point_beats_thermodynamics(model):
    points = [piece for piece in random_points() if piece.model == model]
    assert len(points) == 100
    for piece in points:
        outcome = at_work(piece)
        found = outcome.results
        assert not outcome.unmet
        assert 0.0 < found["voltage_V"] < found["reversible_V"]
        assert found["stack_efficiency_HHV"] < 1.0
        assert found["efficiency_LHV"] <= found["stack_efficiency_LHV"] < 1.0
        parts = ("activation_V", "ohmic_V", "concentration_V")
        assert all(found[name] >= 0.0 for name in parts)
        lost = sum(found[name] for name in parts)
        assert found["reversible_V"] - lost == pytest.approx(found["voltage_V"], rel=1e-12)


def test_area_and_rating_size_the_same_stack():
    for model, celsius in (("pem", 75), ("solid-oxide", 780)):
        extra = {"inverter": 0.95, "auxiliaries": 0.05}
        first = at_work(fuel_cell(model, celsius, 1.2, current_density=4e3, **extra))
        power = -first.power
        others = [
            fuel_cell(model, celsius, 1.2, cell_area=first.results["cell_area_m2"], **extra),
            fuel_cell(model, celsius, 1.2, current_density=4e3, rating=power, **extra),
        ]
        for piece in others:
            outcome = at_work(piece)
            assert outcome.power == pytest.approx(first.power, rel=1e-10)
            found = outcome.results
            assert found["current_density_A_m2"] == pytest.approx(4e3, rel=1e-10)
        assert outcome.results["load"] == pytest.approx(1.0, rel=1e-10)


def test_more_fuel_than_the_rating_is_said():
    piece = fuel_cell("pem", 75, 1.2, current_density=4e3, rating=5e4)
    assert [c.code for c in at_work(piece).cautions] == ["above-rating"]


def test_current_water_and_air_follow_from_the_fuel():
    piece = fuel_cell("pem", 50, 1.5, pem={"permeability": 0.0}, air_ratio=2.5, **FULL)
    outcome = at_work(piece)
    assert outcome.results["current_A"] == pytest.approx(2 * FARADAY * 0.97, rel=1e-12)
    assert outcome.drawn["oxidiser"] == pytest.approx(2.5 * 0.5 * 0.97 / 0.21, rel=1e-12)
    assert float(outcome.outlets["spent_fuel"].flow("H2")) == pytest.approx(0.03, rel=1e-12)
    exhaust = outcome.outlets["exhaust"]
    assert float(exhaust.flow("H2O")) == pytest.approx(0.97, rel=1e-12)
    assert exhaust.water[MATTER.index["H2O"]] > 0.0  # part of the water made is liquid


def test_hydrogen_that_crosses_makes_no_power():
    tight = at_work(fuel_cell("pem", 70, 1.5, pem={"permeability": 0.0}, **FULL)).results
    leaky = at_work(fuel_cell("pem", 70, 1.5, **FULL)).results
    assert leaky["current_A"] < tight["current_A"]
    assert leaky["voltage_V"] < tight["voltage_V"]


def test_spent_fuel_of_a_hot_cell_carries_the_oxygen():
    outcome = at_work(fuel_cell("solid-oxide", 750, 1, **FULL), fuel=MOIST)
    taken = 4 * 0.8  # oxygen atoms that 80 % of a methane's demand are
    current = outcome.results["current_A"]
    assert current == pytest.approx(2 * FARADAY * taken, rel=1e-12)
    spent, atoms = outcome.outlets["spent_fuel"], MATTER.formula[MATTER.elements.index("O")]
    assert float(atoms @ spent.flows) == pytest.approx(2.2 + taken, rel=1e-10)


def test_methane_without_steam_needs_recirculation():
    dry = at_work(fuel_cell("solid-oxide", 750, 1, **FULL), fuel=METHANE)
    assert "would turn to soot" in dry.unmet["fuel"]
    again = fuel_cell("solid-oxide", 750, 1, solid_oxide={"recirculation": 0.7}, **FULL)
    outcome = at_work(again, fuel=METHANE)
    assert not outcome.unmet
    assert outcome.results["carbon_activity"] < 1.0
    little = fuel_cell(
        "solid-oxide", 650, 1, solid_oxide={"recirculation": 0.4}, current_density=1e3
    )
    codes = [c.code for c in at_work(little, fuel=METHANE).cautions]
    assert codes == ["carbon-activity"]


def test_carbon_monoxide_into_a_pem_cell_is_a_caution():
    reformed = stream({"H2": 0.7, "CO2": 0.2, "CO": 0.01, "H2O": 0.05}, 60.0, 2.0)
    codes = [c.code for c in at_work(fuel_cell("pem", 70, 1.5, **FULL), fuel=reformed).cautions]
    assert codes == ["carbon-monoxide-into-cell"]


def test_what_is_said_where_there_is_no_answer():
    small = at_work(fuel_cell("pem", 70, 1.5, cell_area=5.0))
    assert "the cells' limit is 2 A/cm2: more 'cell_area' or less fuel" in small.unmet["fuel"]
    steep = at_work(fuel_cell("solid-oxide", 600, 1, current_density=2e4))
    assert "the cells give no voltage" in steep.unmet["fuel"]
    airless = at_work(fuel_cell("pem", 70, 1.5, **FULL), air=HYDROGEN)
    assert "brings no oxygen" in airless.unmet["oxidiser"]


@pytest.mark.parametrize(
    ("settings", "says"),
    [
        ({}, "wanted 'current_density' (the area follows) or 'cell_area'"),
        ({"cell_area": 2.0, **FULL}, "the fuel settles one of them"),
        ({"current_density": 3e4}, "wanted less than the limiting current of 2 A/cm2"),
        ({"current_density": 0.0}, "'current_density' is zero"),
        ({"solid_oxide": {}, **FULL}, "'solid_oxide' is of another model than pem"),
        ({"inverter": 0.5, "auxiliaries": 0.5, **FULL}, "lower them"),
        ({"air_ratio": 0.9, **FULL}, "out of range: wanted at least 1.05"),
    ],
)
def test_what_is_said_of_wrong_settings(settings, says):
    with pytest.raises(ValidationError) as caught:
        fuel_cell("pem", 70, 1.5, **settings)
    (error,) = caught.value.errors()
    assert says in error["msg"]


@pytest.mark.parametrize(
    ("piece", "says"),
    [
        (fuel_cell("pem", 150, 1.5, **FULL), "model pem works from 0 to 100 degC"),
        (fuel_cell("pem", 99, 1.0, **FULL), "leaves no room for the gases"),
        (fuel_cell("solid-oxide", 400, 1.5, **FULL), "model solid-oxide works from 500 to 1000"),
    ],
)
def test_what_is_said_of_a_wrong_temperature(piece, says):
    ((path, text),) = piece.setting_faults(MATTER)
    assert says in text
    assert path == ("temperature",)


def test_numbers_of_a_set_can_be_replaced():
    cell = PemFuelCell(set="mann-2000", xi2=3e-3)
    assert cell.xi2 == 3e-3
    assert cell.xi1 == -0.948
    assert PemFuelCell(set="mann-2000").xi2 is None


def test_air_is_brought_to_the_stack_by_its_own_heat_first():
    outcome = at_work(fuel_cell("solid-oxide", 750, 1, **FULL), air=AIR)
    assert {d.met_by for d in outcome.duties if d.purpose == "stack"} == {"own"}

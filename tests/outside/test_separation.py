"""The least work of a separation against closed forms of ideal mixing at 25 degC and 1 atm."""

import pytest

from chainflow.equipment.base import Site
from chainflow.equipment.separation import Separator
from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.streams import Stream

MATTER = Matter.of(DEFAULT_COMPONENTS)
CARBON_DIOXIDE = 44.0095e-3  # [kg/mol], IUPAC


def separated(amounts, recovery, **settings):
    """Outcome, and the least work for each mol that is kept [J/mol]."""
    inlet = Stream.at(MATTER, MATTER.vector(amounts), 298.15, 101325.0)
    separator = Separator.model_validate({"recovery": recovery, **settings})
    outcome = separator.operate({"inlet": inlet}, {}, Site(MATTER, inlets=frozenset({"power"})))
    return outcome, outcome.results["minimum_work_W"] / outcome.outlets["kept"].total


AIR = {"N2": 0.78084, "O2": 0.20946, "Ar": 0.00928, "CO2": 420e-6}


@pytest.mark.parametrize(
    ("share", "molar", "mass"),
    [(1e-4, 19.3, 121.7), (0.75, 20.6, 130.0)],
)
def test_carbon_dioxide_from_air(share, molar, mass):
    # closed form, 420 ppm: RT ln(1/y) for a vanishing share, 75 % captured beside it;
    # [kJ/mol] and [kWh/t], 0.5 %
    _, work = separated(AIR, {"CO2": share})
    assert work / 1e3 == pytest.approx(molar, rel=5e-3)
    assert work / CARBON_DIOXIDE / 3.6e6 * 1e3 == pytest.approx(mass, rel=5e-3)


def test_carbon_dioxide_from_flue_gas():
    # closed form, 12 % in the gas, 90 % captured pure, ideal mixture: [kJ/mol], [GJ/t], 0.5 %
    _, work = separated({"N2": 0.88, "CO2": 0.12}, {"CO2": 0.9})
    assert work / 1e3 == pytest.approx(6.96, rel=5e-3)
    assert work / CARBON_DIOXIDE / 1e6 == pytest.approx(0.158, rel=5e-3)


def test_separating_all_of_a_pair_undoes_its_mixing():
    # closed form: -R T sum(x ln x) of an even pair is R T ln 2 for each mol fed, 0.5 % (real gases)
    outcome, _ = separated({"H2": 0.5, "N2": 0.5}, {"N2": 1.0})
    least = outcome.results["minimum_work_W"]
    assert least == pytest.approx(8.314462618 * 298.15 * 0.6931471806, rel=5e-3)


@pytest.mark.parametrize(("stated", "free"), [("6.9 kJ/mol", True), ("7.0 kJ/mol", False)])
def test_less_than_the_least_work_is_an_idealisation(stated, free):
    # the closed form 6.96 kJ/mol lies between
    outcome, _ = separated({"N2": 0.88, "CO2": 0.12}, {"CO2": 0.9}, work=stated)
    assert [note.code for note in outcome.idealisations] == ["free-separation"] * free

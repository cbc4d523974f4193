"""Carbon activity: the three routes, against Cantera with graphite, and where there is no route."""

import cantera as ct
import numpy as np
import pytest

from chainflow.thermo.carbon import carbon_activities, carbon_activity
from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.equilibrium import equilibrate
from chainflow.thermo.species import DATA_FILE
from chainflow.thermo.validity import StateError

MATTER = Matter.of(DEFAULT_COMPONENTS)


@pytest.mark.parametrize("temperature", [600.0, 900.0, 1300.0])
def test_routes_agree_at_equilibrium(temperature):
    feed = MATTER.vector({"H2": 2.0, "CO2": 1.0})
    gas = equilibrate(MATTER, feed, temperature, 1e5).flows
    activities = carbon_activities(MATTER, gas, temperature, 1e5)
    assert set(activities) == {"boudouard", "methane", "water-gas"}
    best = carbon_activity(MATTER, gas, temperature, 1e5)
    assert list(activities.values()) == pytest.approx([best] * 3, rel=1e-5)


def carbon_by_cantera(amounts, temperature, pressure):
    """Graphite [mol] in full equilibrium of gas and graphite."""
    names = ["H2", "H2O", "CO", "CO2", "CH4"]
    species = {s.name: s for s in ct.Species.list_from_file(str(DATA_FILE), "components")}
    gas = ct.Solution(thermo="ideal-gas", species=[species[name] for name in names])
    condensed = ct.Species.list_from_file(str(DATA_FILE), "condensed")
    graphite = ct.Solution(
        thermo="fixed-stoichiometry", species=[s for s in condensed if s.name == "C(gr)"]
    )
    gas.TPX = temperature, pressure, amounts
    mixture = ct.Mixture([(gas, sum(amounts.values())), (graphite, 0.0)])
    mixture.T, mixture.P = temperature, pressure
    mixture.equilibrate("TP", solver="vcs")
    return mixture.species_moles[-1]


@pytest.mark.parametrize("ratio", [1.0, 2.0, 3.0])
@pytest.mark.parametrize("temperature", [700.0, 850.0, 1100.0])
def test_deposit_is_foretold_where_cantera_finds_graphite(ratio, temperature):
    amounts = {"H2": ratio, "CO2": 1.0}
    gas = equilibrate(MATTER, MATTER.vector(amounts), temperature, 1e5).flows
    foretold = carbon_activity(MATTER, gas, temperature, 1e5) > 1.0
    assert foretold == (carbon_by_cantera(amounts, temperature, 1e5) > 1e-8)


def test_without_a_route_there_is_no_carbon():
    for amounts in ({"CO2": 1.0, "H2O": 1.0}, {"N2": 1.0}, {"H2": 1.0, "CO2": 1.0}, {}):
        assert carbon_activity(MATTER, MATTER.vector(amounts), 900.0, 1e5) == 0.0


def test_methane_or_carbon_monoxide_alone_deposit():
    for name in ("CH4", "CO"):
        activity = carbon_activity(MATTER, MATTER.vector({name: 1.0}), 900.0, 1e5)
        assert 1e6 < activity < np.inf


def test_a_set_without_carbon_has_none():
    matter = Matter.of(("H2", "O2", "H2O"))
    assert carbon_activities(matter, np.ones(3), 900.0, 1e5) == {}
    assert carbon_activity(matter, np.ones(3), 900.0, 1e5) == 0.0


def test_a_bad_state_is_refused():
    with pytest.raises(StateError, match="temperature"):
        carbon_activity(MATTER, np.ones(8), 100.0, 1e5)

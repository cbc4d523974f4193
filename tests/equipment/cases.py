"""Every registered kind at several settings, with feeds as they come in a plant.

The laws of this directory run over all of them.
"""

import pytest

from tests.equipment import cases_of_chemistry, cases_of_flows, cases_of_heat
from tests.equipment.case import Collector
from tests.equipment.cases_electrolysis import electrolysing
from tests.equipment.cases_exchanging import exchanging
from tests.equipment.cases_keeping import keeping
from tests.equipment.cases_liquid_fuels import liquid_fuels
from tests.equipment.cases_making_fuel import making_fuel
from tests.equipment.cases_of_sunlight import sunlight
from tests.equipment.cases_photo import photoelectrodes
from tests.equipment.cases_separating import separating

_PARTS = (
    cases_of_flows.boundary,
    cases_of_flows.power,
    cases_of_flows.electrolysis,
    cases_of_flows.junctions,
    cases_of_heat.separation,
    cases_of_heat.heat,
    cases_of_heat.pressure,
    cases_of_chemistry.reactors,
    cases_of_chemistry.combustion,
    cases_of_chemistry.stores,
    electrolysing,
    photoelectrodes,
    making_fuel,
    separating,
    exchanging,
    keeping,
    liquid_fuels,
    sunlight,
)


def _all_cases():
    collector = Collector()
    for part in _PARTS:
        part(collector.add)
    return tuple(collector.cases)


CASES = _all_cases()


def named(cases):
    """Run a test once for each of the cases."""
    return pytest.mark.parametrize("case", cases, ids=lambda case: case.name)

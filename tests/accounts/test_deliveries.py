import pytest

from chainflow.accounts.deliveries import deliveries
from chainflow.accounts.worth import of_material
from tests.plants import BOUGHT, CYCLE, METHANE, solved

PIPE = """
equipment:
  gas:  {kind: supply, composition: {CH4: 1}, temperature: 25 degC, pressure: 20 bar, flow: 1 mol/s}
  wheel: {kind: expander, pressure: 12 bar}
  parts: {kind: splitter, shares: {half: 50 %, rest_of_it: rest}}
  town: {kind: product}
lines:
  - gas -> wheel -> parts
  - parts.half -> town
"""


def test_matter_into_a_product_is_delivered():
    solution = solved(METHANE)
    ((name, stream),) = deliveries(solution).material
    assert name == "town"
    assert stream is solution.stream("fuel.rest").flow


def test_what_goes_into_a_vent_is_lost():
    names = {name for name, _ in deliveries(solved(METHANE)).material}
    assert names == {"town"}


def test_power_into_a_product_is_delivered():
    solution = solved(CYCLE)
    assert deliveries(solution).power == (("town", solution.outcomes["wheel"].outlets["power"]),)


def test_power_that_leaves_by_an_unlinked_outlet_is_delivered():
    solution = solved(PIPE)
    assert deliveries(solution).power == (("wheel", solution.outcomes["wheel"].outlets["power"]),)
    assert deliveries(solution).power_total > 0.0


def test_matter_that_leaves_by_an_unlinked_outlet_is_not():
    solution = solved(PIPE)
    ((name, stream),) = deliveries(solution).material
    assert name == "town"
    assert float(stream.total) == pytest.approx(0.5, rel=1e-12)


def test_surplus_into_the_grid_is_sold():
    text = """
equipment:
  sun:   {kind: sunlight, irradiance: 1000 W/m2, aperture: 100 m2}
  field: {kind: pv-field, efficiency: 20 %}
  net:   {kind: grid}
lines:
  - sun -> field -> net.surplus
"""
    assert deliveries(solved(text)).power == (("net", pytest.approx(2e4, rel=1e-12)),)


def test_heat_into_a_product_is_delivered():
    text = """
equipment:
  gas:  {kind: supply, composition: {N2: 1}, temperature: 500 degC, pressure: 1 bar, flow: 1 mol/s}
  cold: {kind: cooler, temperature: 100 degC}
  town: {kind: product}
  sky:  {kind: vent}
lines:
  - gas -> cold -> sky
  - cold.heat -> town
"""
    solution = solved(text)
    found = deliveries(solution)
    gone = (
        solution.stream("gas.outlet").flow.enthalpy - solution.stream("cold.outlet").flow.enthalpy
    )
    assert found.heat_total == pytest.approx(gone, rel=1e-12)
    assert found.worth.lhv == pytest.approx(gone, rel=1e-12)
    assert 0.0 < found.worth.exergy < found.worth.lhv


def test_worth_is_the_sum_of_all():
    solution = solved(BOUGHT)
    assert deliveries(solution).worth == of_material(solution.stream("chill.outlet").flow)

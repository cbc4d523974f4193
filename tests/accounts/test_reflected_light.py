"""Light that a cover turns back counts as sunlight and as a loss."""

import pytest

from chainflow.accounts.losses import loss_map
from chainflow.accounts.plant import plant_account
from chainflow.flowsheet.building import read_text
from chainflow.solver.solve import solve_flowsheet

PLANT = """
equipment:
  sun:
    kind: sunlight
    place: {latitude: 46 deg, longitude: 9 deg}
    hour: 21 Dec 10:00
    plane: {tilt: 20 deg%s}
    aperture: 1000 m2
  field: {kind: pv-field, model: one-diode}
  out: {kind: product}
lines:
  - sun.light -> field.light
  - field.power -> out
"""


def solved(cover):
    return solve_flowsheet(read_text(PLANT % cover))


def test_a_plant_counts_the_light_that_is_turned_back():
    """A low sun on an invented roof: the plant's sunlight is all that falls."""
    bare, covered = solved(""), solved(", cover: {}")
    one, other = (plant_account(solution) for solution in (bare, covered))
    assert other.sunlight == pytest.approx(one.sunlight, rel=1e-12)
    back = next(s.flow.rate for s in covered.streams if s.key == "sun.reflected")
    assert 0.03 < back / other.sunlight < 0.15
    assert other.efficiency.overall["LHV"] < one.efficiency.overall["LHV"]
    assert covered.balance.energy < 1e-12
    lost = loss_map(covered)
    assert any(loss.where == "sun.reflected" for loss in lost.losses)
    leaving = sum(lost.products.values()) + sum(loss.exergy for loss in lost.losses)
    assert leaving == pytest.approx(sum(lost.entering.values()), rel=1e-12)

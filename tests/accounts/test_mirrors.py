"""Mirrors that do not face the sun are told."""

import pytest

from chainflow.accounts.hazards import cautions
from chainflow.flowsheet.building import read_text
from chainflow.solver.solve import solve_flowsheet

SUN = """
equipment:
  sun: {kind: sunlight, aperture: 500 m2, %s}
  share: {kind: splitter, shares: {one: 70 %%, other: rest}}
  mirrors: {kind: concentrator, temperature: 500 degC, concentration: %g}
  rest: {kind: pv-field, efficiency: 20 %%}
  use: {kind: product}
  power: {kind: product}
lines:
  - sun.light -> share
  - share.one -> mirrors.light
  - share.other -> rest.light
  - mirrors.heat -> use
  - rest.power -> power
"""
SKY = "place: {latitude: 40 deg, longitude: 20 deg}"


def said(light, concentration=100):
    solution = solve_flowsheet(read_text(SUN % (light, concentration)))
    return [c for c in cautions(solution) if c.code == "sun-not-followed"]


@pytest.mark.parametrize(
    "light",
    [
        f"{SKY}, plane: {{mount: two-axis}}",
        f"{SKY}, plane: {{mount: single-axis}}",
        "irradiance: 800 W/m2, direct: 100 %",
    ],
    ids=["two-axis", "single-axis", "stated"],
)
def test_mirrors_that_follow_or_whose_plane_nobody_knows(light):
    assert said(light) == []


@pytest.mark.parametrize("light", [SKY, f"{SKY}, plane: {{tilt: 40 deg}}"], ids=["level", "tilted"])
def test_mirrors_that_stand_still(light):
    """Through a splitter, too."""
    (found,) = said(light)
    assert found.equipment == "mirrors"
    assert found.text.startswith("the light of sun falls on a plane that stands still, mirrors")
    assert "write plane: {mount: two-axis}" in found.text


def test_about_one_axis_a_trough_works_and_a_tower_does_not():
    """Mirrors that turn about one axis reach 1 / sin(0.2665 deg) = 215 at most: closed form."""
    follow = f"{SKY}, plane: {{mount: single-axis}}"
    assert said(follow, 210) == []
    (found,) = said(follow, 1000)
    assert "cannot concentrate 1000 times, 215 at most" in found.text

"""What the front of a module turns back: nothing of the light is lost on the way."""

from pathlib import Path

import numpy as np
import pvlib
import pytest

from chainflow.equipment.base import Site
from chainflow.equipment.sun.cover import Cover
from chainflow.equipment.sunlight import Sunlight
from tests.equipment.feeds import MATTER

GREENSBORO = str(Path(pvlib.__file__).parent / "data" / "723170TYA.CSV")
SITE = Site(MATTER)


def sky(**more):
    return Sunlight.model_validate({"weather": GREENSBORO, "aperture": "600 m2", **more})


PLANES = [
    {"tilt": "30 deg"},
    {"mount": "single-axis", "ground_cover": "40 %"},
    {"mount": "two-axis", "sky": "perez"},
]


@pytest.mark.parametrize("plane", PLANES, ids=["fixed", "single-axis", "two-axis"])
@pytest.mark.parametrize("model", ["fresnel", "ashrae"])
def test_what_a_cover_turns_back_is_what_is_missing(plane, model):
    """Hour by hour and over the year; the hour that is solved stays the same one."""
    bare, covered = sky(plane=plane), sky(plane={**plane, "cover": {"model": model}})
    whole, within = bare.year(), covered.year()
    assert (within.rate <= whole.rate).all()
    one, other = (piece.operate({}, {}, SITE) for piece in (bare, covered))
    assert other.results["hour_of_year"] == one.results["hour_of_year"]
    light, reflected = other.outlets["light"], other.outlets["reflected"]
    assert light.rate + reflected.rate == pytest.approx(one.outlets["light"].rate, rel=1e-12)
    assert 0.0 <= reflected.direct <= 1.0
    beam = light.rate * light.direct + reflected.rate * reflected.direct
    assert beam == pytest.approx(one.outlets["light"].rate * one.outlets["light"].direct, rel=1e-12)
    lost = 3600.0 / 600.0 * (whole.rate - within.rate).sum()
    assert other.results["year_reflected_J_m2"] == pytest.approx(lost, rel=1e-9)
    assert other.results["year_in_plane_J_m2"] == one.results["year_in_plane_J_m2"]
    # 2 to 4 % of a year on a fixed plane, less on one that follows: common practice, no source
    assert 0.005 < lost / one.results["year_in_plane_J_m2"] < 0.045


def test_without_a_cover_nothing_is_turned_back():
    outcome = sky(plane={"tilt": "30 deg"}).operate({}, {}, SITE)
    assert set(outcome.outlets) == {"light"}
    assert outcome.results["year_reflected_J_m2"] == 0.0


def test_a_mirror_that_faces_the_sun_loses_no_beam_to_a_cover():
    outcome = sky(plane={"mount": "two-axis", "cover": {}}, hour="21 Jun 12:00")
    reflected = outcome.operate({}, {}, SITE).outlets["reflected"]
    assert reflected.rate > 0.0
    assert reflected.direct == pytest.approx(0.0, abs=1e-12)


def test_following_planes_take_the_diffuse_shares_between_tilts():
    """Tilts of a following plane are looked up every 3 deg and joined by straight lines."""
    cover = Cover()
    tilts = np.array([1.5, 10.0, 31.0, 44.5, 58.0, 88.0])
    sky_share, ground = cover.diffuse(tilts)
    alone = [cover.diffuse(np.array([tilt])) for tilt in tilts]
    assert sky_share == pytest.approx([float(one.sky[0]) for one in alone], abs=1e-3)
    # below 10 deg hardly any light comes from the ground: 1 - cos 10 deg is 1.5 % of its half
    assert ground[1:] == pytest.approx([float(one.ground[0]) for one in alone[1:]], abs=4e-3)

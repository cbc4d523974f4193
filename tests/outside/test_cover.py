"""Slanting light through the front of a module, by hand, by Fresnel's equations and by pvlib."""

import numpy as np
import pvlib
import pytest

from chainflow.equipment.sun.cover import Cover


def fresnel(degrees_off, index):
    """Reflectance of unpolarised light in the form of sines and tangents (textbook)."""
    off = np.radians(degrees_off)
    bent = np.arcsin(np.sin(off) / index)
    across = np.sin(off - bent) ** 2 / np.sin(off + bent) ** 2
    along = np.tan(off - bent) ** 2 / np.tan(off + bent) ** 2
    return 0.5 * (across + along), bent


def test_glass_by_hand():
    """n 1.526 at 60 deg, by hand: bent to 34.577 deg, reflects 18.548 and 0.145 %, 9.346 % mean.

    Straight on it reflects (0.526 / 2.526)^2 = 4.336 %, so 0.90654 / 0.95664 = 0.94763 gets in of
    what does straight on; 2 mm of 4 1/m take exp(-0.008 (1 / 0.82336 - 1)) = 0.998285 more.
    """
    assert float(Cover(extinction=0.0).beam(60.0)) == pytest.approx(0.94763, abs=1e-5)
    assert float(Cover().beam(60.0)) == pytest.approx(0.94763 * 0.998285, abs=1e-5)


@pytest.mark.parametrize("index", [1.3, 1.526, 2.4])
def test_glass_by_the_equations_of_fresnel(index):
    angles = np.array([5.0, 20.0, 45.0, np.degrees(np.arctan(index)), 70.0, 85.0, 89.0])
    reflected, bent = fresnel(angles, index)
    straight = 1.0 - ((index - 1.0) / (index + 1.0)) ** 2
    absorbed = np.exp(-0.008 * (1.0 / np.cos(bent) - 1.0))
    found = Cover(index=index).beam(angles)
    assert found == pytest.approx((1.0 - reflected) / straight * absorbed, rel=1e-9)


def test_straight_light_gets_in_and_light_along_the_glass_does_not():
    for cover in (Cover(), Cover(coating=1.29), Cover(model="ashrae")):
        assert cover.beam(np.array([0.0, 90.0, 135.0])) == pytest.approx([1.0, 0.0, 0.0], abs=1e-12)
        falling = cover.beam(np.linspace(0.0, 90.0, 200))
        assert (np.diff(falling) <= 1e-12).all()


def test_a_coating_lets_more_slanting_light_in():
    """An index of 1.29 on glass: pvlib's function of a coated glass."""
    angles = np.array([40.0, 60.0, 75.0])
    coated = Cover(coating=1.29).beam(angles)
    assert coated == pytest.approx(pvlib.iam.physical(angles, n_ar=1.29), rel=1e-12)
    assert (coated > Cover().beam(angles)).all()


def test_slanting_light_by_one_number():
    """1 - 0.05 (1 / cos 60 deg - 1) = 0.95; of an even sky on a level plane 1 / 1.05 gets in.

    The integral of ((1 + b) c - b) 2 dc from c = b / (1 + b) to 1 is 1 / (1 + b) exactly; pvlib's
    sum over rings of 1 deg leaves 1e-3.
    """
    cover = Cover(model="ashrae")
    assert float(cover.beam(60.0)) == pytest.approx(0.95, abs=1e-12)
    level = cover.diffuse(np.array([0.0]))
    assert float(level.sky[0]) == pytest.approx(1.0 / 1.05, abs=1e-3)


def test_slanting_light_of_sky_and_ground():
    """Marion, Solar Energy 147 (2017) 344, at a tilt of 20 deg: as the manual of pvlib prints."""
    found = Cover().diffuse(np.array([20.0]))
    assert float(found.sky[0]) == pytest.approx(0.9539178294, rel=1e-6)
    assert float(found.ground[0]) == pytest.approx(0.6387140118, rel=1e-6)

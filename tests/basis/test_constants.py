"""Constants against scipy's CODATA table and against printed values."""

import pytest
import scipy.constants

from chainflow.basis import constants


@pytest.mark.parametrize(
    ("ours", "theirs"),
    [
        (constants.GAS_CONSTANT, scipy.constants.R),
        (constants.FARADAY, scipy.constants.physical_constants["Faraday constant"][0]),
        (constants.STEFAN_BOLTZMANN, scipy.constants.sigma),
        (constants.PLANCK, scipy.constants.h),
        (constants.LIGHT_SPEED, scipy.constants.c),
        (constants.ATMOSPHERE, scipy.constants.atm),
        (constants.ICE_POINT, scipy.constants.zero_Celsius),
        (constants.P_REFERENCE, scipy.constants.bar),
    ],
)
def test_constants_agree_with_codata(ours, theirs):
    # scipy.constants prints CODATA recommended values; derived ones are printed to ten digits
    assert ours == pytest.approx(theirs, rel=1e-9)


def test_normal_molar_volume_agrees_with_codata():
    # CODATA as printed by scipy.constants: exact digits cut off (not rounded) after 22.41396954
    name = "molar volume of ideal gas (273.15 K, 101.325 kPa)"
    published = scipy.constants.physical_constants[name][0]  # [m3/mol]
    assert constants.NORMAL_MOLAR_VOLUME == pytest.approx(published, rel=0, abs=1e-11)


def test_standard_volume_is_larger_by_the_ratio_of_temperatures():
    # ideal gas at equal pressure: 288.15 K / 273.15 K
    ratio = constants.STANDARD_MOLAR_VOLUME / constants.NORMAL_MOLAR_VOLUME
    assert ratio == pytest.approx(288.15 / 273.15, rel=1e-14)

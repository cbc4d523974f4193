"""The reference spectrum against the standard, and photons against integration outside.

ASTM G173-03: the values are trapezoids on the 2002 points of the standard as pvlib 0.16.1 ships
them; its documentation prints 1000.37 W/m2.
"""

import numpy as np
import pytest

from chainflow.equipment.sun.spectrum import gap_wavelength, of_sunlight, reference

CHARGE = 1.602176634e-19  # [C], exact (SI definition)


@pytest.mark.parametrize(
    ("column", "total", "tolerance"),
    [
        ("global", 1000.37, 2e-4),  # [W/m2]
        ("direct", 900.14, 2e-4),
        ("extraterrestrial", 1347.9, 5e-4),
    ],
)
def test_total_of_the_reference_spectra(column, total, tolerance):
    assert reference(column).total == pytest.approx(total, rel=tolerance)


@pytest.mark.parametrize(
    ("gap", "current"),  # [eV], [mA/cm2]; cut at hc/Eg with interpolation, 0.3 %
    [(1.12, 43.81), (1.70, 22.46), (2.10, 12.48), (3.00, 1.86)],
)
def test_photons_above_a_gap(gap, current):
    photons = reference().photon_flux(gap_wavelength(gap))
    assert CHARGE * photons / 10.0 == pytest.approx(current, rel=3e-3)


def test_a_spectrum_keeps_its_shape():
    dim, whole = of_sunlight(250.0), reference()
    assert dim.total == pytest.approx(250.0, rel=1e-12)
    assert dim.irradiance * whole.total == pytest.approx(whole.irradiance * 250.0, rel=1e-12)
    share = np.where(whole.wavelength > 700e-9, 0.7, 0.2)
    parts = whole.through(share).total + whole.through(1.0 - share).total
    assert parts == pytest.approx(whole.total, rel=1e-12)


def test_a_cut_outside_the_points_takes_all_or_nothing():
    assert reference().up_to(1.0).total == pytest.approx(reference().total, rel=1e-12)
    assert reference().photon_flux(1e-9) == 0.0


def test_photon_energy_of_one_micrometre():
    # 1.239841984 eV um: CODATA 2018, h c / e
    assert gap_wavelength(1.0) == pytest.approx(1.239841984e-6, rel=1e-9)


def test_the_file_that_pvlib_ships_is_what_pvlib_reads(monkeypatch):
    """Where the file is not found the library is asked, and gives the same numbers."""
    from chainflow.equipment.sun import spectrum

    quick = spectrum._table("direct")
    monkeypatch.setattr(spectrum, "find_spec", lambda name: None)
    for one, other in zip(quick, spectrum._table("direct"), strict=True):
        assert (one == other).all()

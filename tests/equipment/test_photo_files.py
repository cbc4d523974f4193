"""Measured curves and quantum efficiencies in CSV files: understood, or refused by line."""

import random
from itertools import pairwise

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pydantic import ValidationError

from chainflow.basis.faults import FileFault
from chainflow.equipment.photo.measured_points import PhotoCurve
from chainflow.equipment.photoelectrode import Photoelectrode
from tests.equipment.photo import codes, results

CURVE = [  # potential [V], current density [mA/cm2]: an invented oxide
    (0.2, 0.0),
    (0.4, 0.1),
    (0.6, 0.9),
    (0.8, 2.6),
    (1.0, 4.1),
    (1.2, 4.6),
    (1.4, 4.7),
]
HEAD = "potential [V],current density [mA/cm2]"


def written(tmp_path, rows, head=HEAD):
    path = tmp_path / "photo.csv"
    lines = [",".join(map(str, row)) for row in rows]
    path.write_text("\n".join([head, *lines]) + "\n")
    return path


def device(folder, *, curve="photo.csv", band_gap="2.4 eV", bias="0.9 V", **more):
    given = {"band_gap": band_gap, "curve": curve, "bias": bias, **more}
    return Photoelectrode.model_validate(given, context={"folder": str(folder)})


def density(piece):
    return results(piece)["current_density_A_m2"]


@pytest.fixture
def plain(tmp_path):
    written(tmp_path, CURVE)
    return density(device(tmp_path))


def said(tmp_path, rows, head=HEAD, **more):
    written(tmp_path, rows, head)
    with pytest.raises(ValidationError) as caught:
        device(tmp_path, **more)
    (error,) = caught.value.errors()
    return error["msg"]


def test_the_crossing_lies_on_the_measured_curve(tmp_path, plain):
    """0.9 V less overpotential and drop: between 0.8 V, 2.6 and 1.0 V, 4.1 mA/cm2."""
    piece = device(tmp_path)
    found = results(piece)
    volts = found["electrode_potential_V"]
    assert 0.8 < volts < 0.9
    assert plain == pytest.approx(26.0 + (volts - 0.8) / 0.2 * 15.0, abs=1e-6)


def test_any_order_of_lines_columns_and_units_is_understood(tmp_path, plain):
    rows = random.Random(1).sample(CURVE, len(CURVE))
    written(tmp_path, [(f"{10 * j:.6g}", f"{1e3 * v:.6g}") for v, j in rows], "j [A/m2],U [mV]")
    assert density(device(tmp_path)) == pytest.approx(plain, rel=1e-12)


def test_lists_in_the_flowsheet_are_understood(tmp_path, plain):
    lists = {
        "potential": [f"{v} V" for v, _ in CURVE],
        "current_density": [f"{j} mA/cm2" for _, j in CURVE],
    }
    assert density(device(tmp_path, curve=lists)) == pytest.approx(plain, rel=1e-12)


def test_either_sign_convention_is_understood(tmp_path, plain):
    written(tmp_path, [(v, -j) for v, j in CURVE])
    assert density(device(tmp_path)) == pytest.approx(plain, rel=1e-12)
    cathode = {"electrode": "photocathode", "band_gap": "1.6 eV", "bias": "1.5 V"}
    written(tmp_path, [(1.0 - v, -j) for v, j in CURVE])
    first = density(device(tmp_path, **cathode))
    written(tmp_path, [(1.0 - v, j) for v, j in CURVE])
    assert first > 0.0
    assert density(device(tmp_path, **cathode)) == pytest.approx(first, rel=1e-12)


def test_points_at_one_potential_are_averaged(tmp_path, plain):
    twice = [(v, j + 0.1) for v, j in CURVE] + [(v, j - 0.1) for v, j in CURVE]
    written(tmp_path, twice)
    assert density(device(tmp_path)) == pytest.approx(plain, rel=1e-9)


def test_scatter_is_levelled(tmp_path, plain):
    noise = random.Random(2)
    fine = [(0.2 + 0.01 * i, _between(0.2 + 0.01 * i) + noise.gauss(0, 0.08)) for i in range(121)]
    written(tmp_path, fine)
    piece = device(tmp_path)
    drives, densities = piece.curve.cleaned(1.0)
    assert list(drives) == sorted(drives)
    assert list(densities) == sorted(densities)
    assert density(piece) == pytest.approx(plain, rel=0.05)


def _between(volts):
    for (v, j), (w, k) in pairwise(CURVE):
        if v <= volts <= w + 1e-12:
            return j + (k - j) * (volts - v) / (w - v)
    raise AssertionError(volts)


def test_a_small_dark_current_before_the_onset_counts_as_none(tmp_path, plain):
    written(tmp_path, [(0.0, -0.3), (0.1, -0.1), *CURVE])
    assert density(device(tmp_path)) == pytest.approx(plain, rel=1e-12)


def test_the_light_it_was_measured_in_counts(tmp_path):
    written(tmp_path, [(v, 0.5 * j) for v, j in CURVE])
    half = results(device(tmp_path, measured_at="500 W/m2"))
    written(tmp_path, CURVE)
    assert half["electrode_limit_A_m2"] == results(device(tmp_path))["electrode_limit_A_m2"]


def test_beyond_the_last_point_the_current_stays_and_a_caution_says_so(tmp_path):
    written(tmp_path, CURVE)
    piece = device(tmp_path, bias="1.9 V")
    assert density(piece) == pytest.approx(47.0, rel=1e-9)
    assert "outside-the-curve" in codes(piece)
    written(tmp_path, CURVE[3:])
    assert "outside-the-curve" in codes(device(tmp_path, bias="0.82 V"))


@settings(max_examples=100, deadline=None, derandomize=True)
@given(
    st.lists(
        st.tuples(st.integers(-20, 40), st.floats(-5.0, 60.0, allow_nan=False)),
        min_size=3,
        max_size=25,
    )
)
def test_any_points_become_a_curve_that_rises_or_are_refused(points):
    from chainflow.equipment.csv_points import CurveFault

    curve = PhotoCurve(
        potential=tuple(v / 20.0 for v, _ in points), current_density=tuple(j for _, j in points)
    )
    try:
        drives, densities = curve.cleaned(1.0)
    except CurveFault as fault:
        assert str(fault)
        return
    assert list(drives) == sorted(set(drives))
    assert list(densities) == sorted(densities)
    assert densities[0] >= 0.0
    assert densities[-1] > 0.0


# --------------------------------------------------------------------------------- refused
def test_a_curve_of_the_other_kind_of_electrode(tmp_path):
    text = said(tmp_path, [(1.6 - v, j) for v, j in CURVE])
    assert text == (
        "'photo.csv', line 8: the current grows as the potential falls, that of a photocathode "
        "and not of a photoanode: change 'electrode' or turn the sign of the potentials"
    )
    text = said(tmp_path, CURVE, electrode="photocathode", band_gap="1.6 eV")
    assert "the current grows as the potential rises, that of a photoanode" in text


def test_a_branch_in_the_other_direction(tmp_path):
    text = said(tmp_path, [(-0.2, -3.0), *CURVE])
    assert text.startswith(
        "'photo.csv', line 2: -3 mA/cm2 runs against the rest (up to 4.7 mA/cm2)"
    )


def test_a_point_out_of_line(tmp_path):
    rows = [*CURVE[:4], (0.9, 0.4), *CURVE[4:]]
    text = said(tmp_path, rows)
    assert text.startswith("'photo.csv', line 5: 2.6 mA/cm2 at 0.8 V is out of line")


def test_two_sweeps_that_differ(tmp_path):
    text = said(tmp_path, [*CURVE, (0.8, 1.2)])
    assert text == (
        "'photo.csv', line 9 and line 5: 1.2 mA/cm2 and 2.6 mA/cm2 at 0.8 V: "
        "keep one of the two sweeps"
    )


@pytest.mark.parametrize(
    ("head", "says"),
    [
        ("potential,current density [mA/cm2]", "the heading 'potential' has no unit in brackets"),
        ("potential [V],current [mA]", "is a current, wanted a current density in mA/cm2: divide"),
        ("potential [V],current density [mA/m]", "wanted a current density in mA/cm2"),
        ("potential [V],U [V]", "two columns with a potential in V"),
        ("potential [Vv],current density [mA/cm2]", "'Vv' is not a known unit"),
    ],
)
def test_a_missing_or_wrong_unit(tmp_path, head, says):
    assert says in said(tmp_path, CURVE, head)


def test_a_value_that_is_no_number_is_named_by_line(tmp_path):
    rows = [*CURVE[:2], ("0.5", "n/a"), *CURVE[2:]]
    assert said(tmp_path, rows).startswith("'photo.csv', line 4: 'n/a' is no number")
    path = tmp_path / "photo.csv"
    path.write_text("potential [V];current density [mA/cm2]\n0,2;0\n0,4;1\n0,6;2\n")
    with pytest.raises(ValidationError, match="line 2: '0,2' is no number: write numbers with a"):
        device(tmp_path)


def test_too_few_points_or_none_that_works(tmp_path):
    assert "2 potentials are given, wanted at least three" in said(tmp_path, CURVE[:2])
    assert "every current is zero" in said(tmp_path, [(v, 0.0) for v, _ in CURVE])
    with pytest.raises(FileFault, match=r"cannot read the curve 'nowhere\.csv': No such file"):
        device(tmp_path, curve="nowhere.csv")


def test_more_current_than_photons(tmp_path):
    from tests.equipment.feeds import MATTER

    written(tmp_path, [(v, 3.0 * j) for v, j in CURVE])
    ((path, text),) = device(tmp_path).setting_faults(MATTER)
    assert path == ("curve",)
    assert text.startswith("the curve reaches 14.1 mA/cm2 in 1000 W/m2, but the photons absorbed")


def test_factors_that_the_measurement_holds_already(tmp_path):
    assert "'catalyst' is already in the measured 'curve'" in said(tmp_path, CURVE, catalyst="80 %")


# ------------------------------------------------------------------------- quantum efficiency
EFFICIENCY = [(350, 60), (400, 75), (450, 70), (500, 40), (540, 5), (560, 0)]


def by_wavelength(tmp_path, rows, head="wavelength [nm],quantum efficiency [%]", **more):
    path = tmp_path / "qe.csv"
    path.write_text("\n".join([head, *(",".join(map(str, row)) for row in rows)]) + "\n")
    given = {
        "band_gap": "2.2 eV",
        "shape": {"onset": "0.5 V", "half_wave": "0.8 V"},
        "bias": "1.5 V",
        "quantum_efficiency": "qe.csv",
        **more,
    }
    return Photoelectrode.model_validate(given, context={"folder": str(tmp_path)})


def test_a_quantum_efficiency_by_wavelength(tmp_path):
    """A constant one in a file is the constant; another lies between its ends."""
    flat = by_wavelength(tmp_path, [(250, 70), (700, 70)])
    constant = by_wavelength(tmp_path, [(250, 70), (700, 70)], quantum_efficiency="70 %")
    name = "electrode_limit_A_m2"
    assert results(flat)[name] == pytest.approx(results(constant)[name], rel=1e-9)
    real = results(by_wavelength(tmp_path, EFFICIENCY))[name]
    assert 0.3 * results(constant)[name] < real < results(constant)[name]


def test_order_units_and_repeated_wavelengths_of_a_quantum_efficiency(tmp_path):
    name = "electrode_limit_A_m2"
    plain = results(by_wavelength(tmp_path, EFFICIENCY))[name]
    rows = [(0.01 * e, w / 1000.0) for w, e in reversed(EFFICIENCY)]
    turned = by_wavelength(tmp_path, [*rows, (0.72, 0.45), (0.68, 0.45)], "QE [1],l [um]")
    assert results(turned)[name] == pytest.approx(plain, rel=1e-12)


def test_what_lies_below_the_gap_does_not_count(tmp_path):
    wide = [(350, 60), (450, 70), (700, 70)]
    assert "quantum-efficiency-below-gap" in codes(by_wavelength(tmp_path, wide))
    assert "quantum-efficiency-below-gap" not in codes(by_wavelength(tmp_path, EFFICIENCY))


@pytest.mark.parametrize(
    ("rows", "head", "says"),
    [
        (
            [(400, 70), (500, 60)],
            "l [nm],QE [1]",
            "line 2: a quantum efficiency of 70, wanted 0 to",
        ),
        ([(400, -3), (500, 60)], "l [nm],QE [%]", "line 2: a quantum efficiency of -0.03, wanted"),
        ([(400, 50), (500, 60)], "l,QE [%]", "the heading 'l' has no unit in brackets"),
        ([(400, 50), (500, 60)], "l [m],QE [%]", "line 2: a wavelength of 4e+11 nm"),
        ([(400, 50)], "l [nm],QE [%]", "one wavelength is given, wanted at least two"),
        (
            [(400, 50), (500, 60), (400, 70)],
            "l [nm],QE [%]",
            "line 2 and line 4: 0.5 and 0.7 at 400 nm: keep one of them",
        ),
    ],
)
def test_what_is_said_of_a_wrong_quantum_efficiency(tmp_path, rows, head, says):
    with pytest.raises(ValidationError) as caught:
        by_wavelength(tmp_path, rows, head)
    assert says in str(caught.value)
    assert "'qe.csv'" in str(caught.value)


def test_more_electrons_than_absorbed_photons(tmp_path):
    from tests.equipment.feeds import MATTER

    piece = by_wavelength(tmp_path, [(350, 60), (450, 97), (540, 10)])
    ((path, text),) = piece.setting_faults(MATTER)
    assert path == ("quantum_efficiency",)
    assert "reaches 97 %, but only 90.25 % of the photons are absorbed" in text


def test_a_device_is_made_again_from_its_own_settings(tmp_path):
    written(tmp_path, CURVE)
    by_wavelength(tmp_path, EFFICIENCY)
    for piece in (device(tmp_path), by_wavelength(tmp_path, EFFICIENCY)):
        again = Photoelectrode.model_validate(piece.model_dump())
        assert results(again) == results(piece)

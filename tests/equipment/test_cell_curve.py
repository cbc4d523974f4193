"""A solar cell by its measured curve: the crossing it leads to, what is understood and refused."""

import random
from itertools import pairwise

import numpy as np
import pvlib
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pydantic import ValidationError

from chainflow.basis.faults import FileFault
from chainflow.equipment.csv_points import CurveFault
from chainflow.equipment.photo.cell_curve import CellCurve, MeasuredCell
from chainflow.equipment.photoelectrode import Photoelectrode
from tests.equipment.feeds import MATTER
from tests.equipment.photo import OXIDE, codes, results

CURVE = [  # voltage [V], current density [mA/cm2]: an invented cell
    (0.0, 38.0),
    (0.2, 37.9),
    (0.4, 37.6),
    (0.5, 36.2),
    (0.55, 33.5),
    (0.6, 26.0),
    (0.64, 13.0),
    (0.67, -2.0),
]
HEAD = "voltage [V],current density [mA/cm2]"


def written(tmp_path, rows, head=HEAD):
    lines = [",".join(map(str, row)) for row in rows]
    (tmp_path / "cell.csv").write_text("\n".join([head, *lines]) + "\n")


def device(folder, *, curve="cell.csv", count=2, gaps=("1.1 eV",), **more):
    cell = {"gaps": list(gaps), "in_series": count, "curve": curve, **more}
    return Photoelectrode.model_validate({**OXIDE, "cell": cell}, context={"folder": str(folder)})


def density(piece):
    return results(piece)["current_density_A_m2"]


def said(tmp_path, rows, head=HEAD, **more):
    written(tmp_path, rows, head)
    with pytest.raises(ValidationError) as caught:
        device(tmp_path, **more)
    (error,) = caught.value.errors()
    return error["msg"]


@pytest.fixture
def plain(tmp_path):
    written(tmp_path, CURVE)
    return density(device(tmp_path))


# ------------------------------------------------------------------------------------ physics
DIODE = {"radiative_efficiency": "1 %", "ideality": 1.2, "series_resistance": "1 ohm*cm2"}
LEAKING = {**DIODE, "shunt_resistance": "0.5 ohm*m2"}


@pytest.mark.parametrize("shape", [DIODE, LEAKING], ids=["diode", "leaking"])
@pytest.mark.parametrize("place", ["behind", "beside"])
@pytest.mark.parametrize("measured_at", [700.0, 1000.0])
@pytest.mark.parametrize("irradiance", [400.0, 1000.0])
def test_a_diode_measured_in_the_sun_works_as_the_diode(shape, place, measured_at, irradiance):
    """Points of a one-diode cell by pvlib, in the open sun, against the diode in the device.

    Moving a curve to other light by procedure 1 of IEC 60891 is exact for one diode without a leak;
    4000 points joined by straight lines leave 1e-5. Through a leak the short-circuit current is
    R_s / R_shunt = 2e-4 below that of the light, which counts (1 - r) / r times, here up to thrice.
    """
    close = 2e-5 if shape is DIODE else 7e-4
    diode = Photoelectrode.model_validate(
        {**OXIDE, "cell": {"gaps": ["1.1 eV"], "in_series": 3, "place": place, **shape}}
    )
    alone = Photoelectrode.model_validate(  # the cell by itself: the light of a cell beside
        {**OXIDE, "reflection": 0.0, "cell": {"gaps": ["1.1 eV"], "place": "beside", **shape}}
    )
    (junction,) = alone.circuit(measured_at).junctions
    part = alone.cell.beside
    five = (junction.light / part, junction.dark / part, junction.series * part)
    volts = np.append(np.linspace(0.0, 0.6, 1000), np.linspace(0.6, 0.95, 3000)[1:])
    amperes = pvlib.pvsystem.i_from_v(
        volts, *five, junction.shunt * part if junction.shunt < 1e9 else np.inf, junction.level
    )
    curve = {"voltage": tuple(volts), "current_density": tuple(amperes)}
    cell = {"gaps": ["1.1 eV"], "in_series": 3, "place": place, "curve": curve}
    cell |= {"measured_at": measured_at, "series_resistance": "1 ohm*cm2"}
    piece = Photoelectrode.model_validate({**OXIDE, "cell": cell})
    one, other = results(diode, irradiance), results(piece, irradiance)
    for name in ("current_density_A_m2", "cell_V", "solar_to_hydrogen", "cell_limit_A_m2"):
        assert other[name] == pytest.approx(one[name], rel=close)
    for name in ("current_by_cell", "current_by_electrode", "current_per_volt_S_m2"):
        assert other[name] == pytest.approx(one[name], rel=0.02, abs=1e-5)


def test_a_crossing_by_hand(tmp_path):
    """The current is that which the light leaves: 38 mA/cm2 times passed photons per all photons.

    Over 1.1 eV the sun has 44.2 mA/cm2 and over 2.0 eV 14.59 (integration of G173); behind an
    oxide that takes 95 % of 95 % of the latter 0.95 (44.2 - 0.95 * 14.59) = 28.8 are left, so 38
    become 24.8 mA/cm2 of one cell and half of that of two that share the area.
    """
    written(tmp_path, CURVE)
    found = results(device(tmp_path))
    assert found["cell_limit_A_m2"] == pytest.approx(248.0 / 2.0, rel=5e-3)
    above = 10.0 * 38.0 - 2.0 * found["cell_limit_A_m2"]  # what the measured light had more
    wanted = 2.0 * found["current_density_A_m2"] + above  # of the measured curve
    volts, amperes = zip(*CURVE, strict=True)
    by_hand = np.interp(-wanted / 10.0, -np.array(amperes), volts)
    moved = by_hand + 1e-4 * above
    assert found["cell_V"] == pytest.approx(2.0 * moved, abs=1e-5)
    assert "junction_1_V" in found


def test_open_circuit_lies_between_two_points():
    """0.64 V at 13 and 0.67 V at -2 mA/cm2: 0.64 + 0.03 * 13 / 15 = 0.666 V."""
    voltage, current = zip(*CURVE, strict=True)
    curve = CellCurve(voltage=voltage, current_density=tuple(10.0 * j for j in current))
    points = curve.cleaned()
    assert points.voltages[-1] == pytest.approx(0.666, abs=1e-6)
    assert points.short == pytest.approx(380.0, rel=1e-9)


def test_measured_in_the_light_that_is_passed(tmp_path):
    """The curve counts as it is where it was measured; half of its current in half the sun."""
    rows = [(v, round(0.6 * j, 4)) for v, j in CURVE]
    written(tmp_path, rows)
    piece = device(tmp_path, measured_in="passed-light", measured_at="900 W/m2")
    assert results(piece, 900.0)["cell_limit_A_m2"] == pytest.approx(0.6 * 380.0 / 2, rel=1e-9)
    assert results(piece, 450.0)["cell_limit_A_m2"] == pytest.approx(0.3 * 380.0 / 2, rel=1e-9)


def test_two_junctions_under_one_curve(tmp_path):
    """The one with fewer photons tells how much light there is; no voltage of each is known."""
    rows = [(1.9 * v, 0.35 * j) for v, j in CURVE]
    written(tmp_path, rows)
    found = results(device(tmp_path, count=1, gaps=("1.5 eV", "0.9 eV")))
    assert "junction_1_V" not in found
    assert 0.0 < found["cell_limit_A_m2"] < 0.35 * 380.0
    assert found["current_density_A_m2"] > 0.0


def test_slopes_of_a_measured_cell_agree_with_differences():
    voltage, current = zip(*CURVE, strict=True)
    curve = CellCurve(voltage=voltage, current_density=tuple(10.0 * j for j in current))

    def at(ratio):
        return MeasuredCell(curve.cleaned(), ratio, 3, 0.4, 1e-4)

    cell, step = at(0.7), 1e-6
    for density in (2.0, 17.0, 31.0):
        found = (cell.voltage(density + step) - cell.voltage(density - step)) / (2 * step)
        assert cell.steepness(density) == pytest.approx(found, rel=1e-6)
        more, less = at(0.7 + 1e-7), at(0.7 - 1e-7)
        change = (more.voltage(density) - less.voltage(density)) / (more.light - less.light)
        assert cell.by_light(density) == pytest.approx(change, rel=1e-5)


def test_more_light_than_it_was_measured_in_is_told(tmp_path):
    """Little of the current flows, so the measured curve would be needed beyond open circuit."""
    written(tmp_path, [(v, 0.1 * j) for v, j in CURVE])
    dim = {"gaps": ["1.1 eV"], "curve": "cell.csv", "measured_at": "100 W/m2"}
    given = {**OXIDE, "bias": "0.9 V", "cell": dim}
    piece = Photoelectrode.model_validate(given, context={"folder": str(tmp_path)})
    assert "outside-the-curve" in codes(piece)
    assert "outside-the-curve" not in codes(piece, 100.0)


def test_a_curve_without_its_short_circuit(tmp_path):
    """What is measured above 0.5 V only is enough above it, and told below."""
    written(tmp_path, CURVE[3:])
    piece = device(tmp_path, count=4)
    assert results(piece)["cell_V"] / 4 < 0.5
    assert "outside-the-curve" in codes(piece)


# --------------------------------------------------------------------------------- understood
def test_any_order_of_lines_columns_and_units_is_understood(tmp_path, plain):
    rows = random.Random(1).sample(CURVE, len(CURVE))
    written(tmp_path, [(f"{10 * j:.6g}", f"{1e3 * v:.6g}") for v, j in rows], "j [A/m2],U [mV]")
    assert density(device(tmp_path)) == pytest.approx(plain, rel=1e-12)


def test_lists_in_the_flowsheet_are_understood(tmp_path, plain):
    lists = {
        "voltage": [f"{v} V" for v, _ in CURVE],
        "current_density": [f"{j} mA/cm2" for _, j in CURVE],
    }
    assert density(device(tmp_path, curve=lists)) == pytest.approx(plain, rel=1e-12)


def test_either_sign_convention_and_what_lies_beyond(tmp_path, plain):
    """Also with a long branch beyond open circuit, larger than the light's own current."""
    beyond = [*CURVE, (0.7, -60.0), (0.75, -400.0), (-0.5, 38.2), (-0.1, 38.05)]
    for sign in (1.0, -1.0):
        written(tmp_path, [(v, sign * j) for v, j in beyond])
        assert density(device(tmp_path)) == pytest.approx(plain, rel=1e-9)


def test_points_at_one_voltage_are_averaged(tmp_path, plain):
    written(tmp_path, [(v, j + 0.3) for v, j in CURVE] + [(v, j - 0.3) for v, j in CURVE])
    assert density(device(tmp_path)) == pytest.approx(plain, rel=1e-9)


def test_scatter_is_levelled(tmp_path, plain):
    noise = random.Random(3)
    volts, amperes = zip(*CURVE, strict=True)
    fine = np.linspace(0.0, 0.67, 200)
    rows = [(v, float(np.interp(v, volts, amperes)) + noise.gauss(0, 0.3)) for v in fine]
    written(tmp_path, rows)
    piece = device(tmp_path)
    points = piece.cell.curve.cleaned()
    assert all(a < b for a, b in pairwise(points.voltages))
    assert all(a > b for a, b in pairwise(points.densities))
    assert density(piece) == pytest.approx(plain, rel=0.03)


@settings(max_examples=300, deadline=None, derandomize=True)
@given(
    st.lists(
        st.tuples(st.integers(-10, 40), st.floats(-60.0, 60.0, allow_nan=False)),
        min_size=3,
        max_size=25,
    )
)
def test_any_points_become_a_curve_that_falls_or_are_refused(points):
    curve = CellCurve(
        voltage=tuple(v / 40.0 for v, _ in points), current_density=tuple(j for _, j in points)
    )
    try:
        found = curve.cleaned()
    except CurveFault as fault:
        assert str(fault)
        return
    assert all(a < b for a, b in pairwise(found.voltages))
    assert all(a > b for a, b in pairwise(found.densities))
    assert found.voltages[0] >= 0.0
    assert found.densities[-1] >= 0.0
    cell = MeasuredCell(found, 1.0, 1, 1.0, 0.0)
    for volts, amperes in zip(found.voltages, found.densities, strict=True):
        assert cell.voltage(amperes) == pytest.approx(volts, abs=1e-9)


# ------------------------------------------------------------------------------------ refused
@pytest.mark.parametrize(
    ("rows", "says"),
    [
        ([(-v, j) for v, j in CURVE], "'cell.csv', line 9: no voltage is above zero"),
        (
            [(0.67 - v, j) for v, j in CURVE[:7]],
            "'cell.csv', line 2: the current grows with the voltage, wanted one that falls",
        ),
        ([(v, 0.0) for v, _ in CURVE], "'cell.csv', no current flows at short circuit"),
        (CURVE[:2], "'cell.csv', 2 voltages are given, wanted at least three"),
        (
            [*CURVE[:3], (0.45, 20.0), *CURVE[3:]],
            "'cell.csv', line 6: 36.2 mA/cm2 at 0.5 V is out of line with its neighbours",
        ),
        (
            [*CURVE, (0.4, 20.0)],
            "'cell.csv', line 10 and line 4: 20 mA/cm2 and 37.6 mA/cm2 at 0.4 V: keep one",
        ),
        ([*CURVE, (0.5, "n/a")], "'cell.csv', line 10: 'n/a' is no number"),
    ],
)
def test_curves_that_cannot_be(tmp_path, rows, says):
    assert said(tmp_path, rows).startswith(says)


def test_a_curve_that_is_not_there(tmp_path):
    with pytest.raises(
        FileFault, match=r"cannot read the curve 'cell\.csv': No such file"
    ) as caught:
        device(tmp_path)
    assert caught.value.exit_code == 4


@pytest.mark.parametrize(
    ("head", "says"),
    [
        ("voltage,current density [mA/cm2]", "the heading 'voltage' has no unit in brackets"),
        ("voltage [V],current [mA]", "wanted a current density in mA/cm2: divide by the area of"),
        ("voltage [V],U [V]", "two columns with a voltage in V"),
    ],
)
def test_a_missing_or_wrong_unit(tmp_path, head, says):
    assert says in said(tmp_path, CURVE, head)


@pytest.mark.parametrize(
    ("more", "says"),
    [
        ({"quantum_efficiency": 0.8}, "'cell.quantum_efficiency' is already in the measured"),
        ({"ideality": 1.5}, "'cell.ideality' is already in the measured 'cell.curve'"),
        ({"curve": None, "measured_at": 900}, "'cell.measured_at' is of a measured 'cell.curve'"),
        (
            {"place": "beside", "measured_in": "passed-light"},
            "'cell.measured_in' is of a cell behind",
        ),
    ],
)
def test_what_does_not_go_together(tmp_path, more, says):
    assert says in said(tmp_path, CURVE, **more)


def test_more_current_than_photons_and_more_volts_than_gaps(tmp_path):
    written(tmp_path, [(2.0 * v, 1.5 * j) for v, j in CURVE])
    found = list(device(tmp_path).setting_faults(MATTER))
    assert [path for path, _ in found] == [("cell", "curve")] * 2
    assert found[0][1].startswith("the curve reaches 57 mA/cm2 in 1000 W/m2, but the photons")
    assert found[1][1].startswith("the curve reaches 1.332 V, but the gaps of its junctions add up")


def test_a_device_is_made_again_from_its_own_settings(tmp_path):
    written(tmp_path, CURVE)
    piece = device(tmp_path)
    again = Photoelectrode.model_validate(piece.model_dump())
    assert results(again) == results(piece)

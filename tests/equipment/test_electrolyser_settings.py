"""Electrolysers: curves from files, and what is said of wrong curves and settings."""

import numpy as np
import pytest
from pydantic import ValidationError

from chainflow.basis.faults import FileFault
from chainflow.equipment.cells.measured import MeasuredCurve
from chainflow.thermo.components import Matter
from tests.equipment.feeds import MATTER
from tests.equipment.stacks import at_work, electrolyser, rises, voltages

FULL = {"current_density": 2e4}


# ------------------------------------------------------------------------------------- measured
FILE = """temperature [degC],current density [A/cm2],voltage [V]
60,0.1,1.60
60,0.5,1.72
60,1.0,1.85
80,0.1,1.52
80,0.5,1.64
80,1.0,1.76
"""


@pytest.fixture
def curve_file(tmp_path):
    path = tmp_path / "stack.csv"
    path.write_text(FILE, encoding="utf-8")
    return path


def measured(path, celsius=70, **settings):
    return electrolyser("measured", celsius, 5, curve=str(path), current_density=5e3, **settings)


def test_a_curve_is_read_from_a_file_and_interpolated(curve_file):
    assert at_work(measured(curve_file, 60)).results["voltage_V"] == pytest.approx(1.72, abs=1e-12)
    assert at_work(measured(curve_file, 70)).results["voltage_V"] == pytest.approx(1.68, abs=1e-12)
    half = measured(curve_file, 80, faraday_efficiency=0.5)
    assert at_work(half).results["stack_efficiency_LHV"] == pytest.approx(
        0.5 * at_work(measured(curve_file, 80)).results["stack_efficiency_LHV"], rel=1e-12
    )


def test_a_measured_curve_passes_its_points_and_rises_between(curve_file):
    piece = measured(curve_file, 60)
    curve = MeasuredCurve.at(piece.curve, piece.temperature, piece.pressure, 1.0)
    assert voltages(curve, (0.1, 0.5, 1.0)) == pytest.approx([1.60, 1.72, 1.85], abs=1e-12)
    assert rises(voltages(curve, np.linspace(0.0, 1.5, 151)))
    assert curve.voltage(0.0) == pytest.approx(curve.losses(0.0).reversible)


def test_outside_the_measurements_there_is_a_caution(curve_file):
    far = electrolyser("measured", 70, 5, curve=str(curve_file), current_density=2e4)
    texts = [c.text for c in at_work(far).cautions if c.code == "outside-the-curve"]
    assert texts == ["2 A/cm2 is above the 1 A/cm2 that were measured: the last slope goes on"]
    hot = [c.text for c in at_work(measured(curve_file, 95)).cautions]
    assert hot == [
        "95 degC is outside the 60 to 80 degC that were measured: the nearest curve holds"
    ]


@pytest.mark.parametrize(
    ("content", "says"),
    [
        ("", "is empty, wanted headings such as current density [A/cm2], voltage [V]"),
        (
            "current [A],voltage [V]\n10,1.6\n",
            (
                "column 'current [A]' is a current, wanted a current density in A/cm2: "
                "divide by the active area of a cell"
            ),
        ),
        ("current density,voltage\n1,2\n", "the heading 'current density' has no unit in brackets"),
        ("i [A/cm2],i [A/m2],U [V]\n1,1,2\n", "has two columns with a current density in A/cm2"),
        ("i [A/cm2]\n1\n", "has the columns 'i [A/cm2]', wanted a voltage in V too"),
        ("i [A/cm2],U [V]\n", "has headings and no points below them"),
        ("i [A/cm2];U [V]\n0,5;1,6\n", "line 2: '0,5' is no number: write numbers with a decimal"),
        ("i [A/cm2],U [V]\n0.5,=1+1\n", "line 2: '=1+1' is no number"),
        ("i [A/cm2],U [V]\n0.5,nan\n", "line 2: 'nan' is no number"),
        ("i [A/cm2],U [V]\n0.5,1.6\n", "1 point is given, wanted at least two"),
        ("i [A/cm2],U [V]\n0.5,1.6\n0.5,1.7\n", "wanted rising current densities"),
        ("i [A/cm2],U [V]\n0.5,1.6\n0.6,1.5\n", "the voltage falls from 1.6 V to 1.5 V"),
        ("i [furlong],U [V]\n1,2\n1,2\n", "column 'i [furlong]' is a length"),
        ("i [A/cmm2],U [V]\n1,2\n", "'cmm' is not a known unit"),
    ],
)
def test_what_is_said_of_a_wrong_curve(tmp_path, content, says):
    path = tmp_path / "stack.csv"
    path.write_text(content, encoding="utf-8")
    with pytest.raises(ValidationError) as caught:
        measured(path)
    (error,) = caught.value.errors()
    assert says in error["msg"]
    assert "\n" not in error["msg"]


def test_a_file_that_is_too_large_or_no_text_is_refused(tmp_path):
    path = tmp_path / "stack.csv"
    path.write_bytes(b"i [A/cm2],U [V]\n" + b"1,2\n" * 300_000)
    with pytest.raises(ValidationError, match="is larger than 1000000 bytes"):
        measured(path)
    path.write_bytes(b"\xff\xfe\x00i")
    with pytest.raises(ValidationError, match="is not UTF-8 text"):
        measured(path)
    with pytest.raises(FileFault, match="cannot read the curve"):
        measured(tmp_path)


# ------------------------------------------------------------------------------- wrong settings
@pytest.mark.parametrize(
    ("settings", "says"),
    [
        ({"model": "pem"}, "model pem wants 'current_density' or 'cell_area'"),
        ({"model": "pem", "energy_use": 2e8, **FULL}, "'energy_use' is of another model than pem"),
        ({"model": "measured", **FULL}, "model measured wants 'curve'"),
        ({"energy_use": 2e8, **FULL}, "has no curve, so 'current_density' means nothing"),
        ({"model": "pem", "current_density": 7e4}, "wanted less than the limiting current of 6 A"),
        ({"model": "pem", "minimum_load": 0.1, **FULL}, "'minimum_load' is a share of 'rating'"),
        (
            {"model": "pem", "hydrogen": 1.0, "cell_area": 3.0, **FULL},
            "each two of them settle the third",
        ),
        ({"model": "pem", "rating": 1e6, "cell_area": 3.0, **FULL}, "remove one of them"),
        (
            {"model": "solid-oxide", "solid_oxide": {"thermoneutral": True}, **FULL},
            "finds the current density",
        ),
        (
            {"model": "solid-oxide", "solid_oxide": {"inlet_hydrogen": 0.01}, **FULL},
            "out of range: wanted at least 0.02",
        ),
        ({"model": "solid-oxide", "solid_oxide": {"conversion": "120 %"}, **FULL}, "below 100 %"),
        ({"model": "pem", "pem": {"set": "nobody-1900"}, **FULL}, "Input should be 'han-2015'"),
        ({"model": "pem", "pem": {"thicknes": 1e-4}, **FULL}, "Extra inputs are not permitted"),
    ],
)
def test_what_is_said_of_wrong_settings(settings, says):
    with pytest.raises(ValidationError) as caught:
        electrolyser(settings.pop("model", "specific-energy"), 80, 30, **settings)
    (error,) = caught.value.errors()
    assert says in error["msg"]


@pytest.mark.parametrize(
    ("piece", "says"),
    [
        (
            electrolyser("pem", 800, 30, **FULL),
            (
                "temperature is 800 degC, model pem works from 0 to 120 degC; "
                "at this temperature take model solid-oxide"
            ),
        ),
        (electrolyser("alkaline", 95, 30, **FULL), "model alkaline works from 20 to 90 degC"),
        (
            electrolyser("solid-oxide", 80, 30, **FULL),
            "works from 500 to 1000 degC; at this temperature take model pem",
        ),
        (electrolyser("pem", 100, 1, **FULL), "at 100 degC and 1 bar the water boils"),
        (
            electrolyser("pem", 80, 3, pem={"oxygen_pressure": 5e5}, **FULL),
            "'pem.oxygen_pressure' is above 'pressure'",
        ),
    ],
)
def test_what_is_said_of_a_wrong_temperature_or_pressure(piece, says):
    ((path, text),) = piece.setting_faults(MATTER)
    assert says in text
    assert path == ("temperature",)


def test_co_electrolysis_needs_carbon_monoxide_among_the_components():
    piece = electrolyser("solid-oxide", 800, 1, **FULL)
    ((_, text),) = piece.setting_faults(Matter.of(("H2", "O2", "H2O", "CO2")))
    assert text == "electrolysis needs CO among the components"


def test_the_sweep_port_is_there_only_for_hot_stacks():
    assert electrolyser("solid-oxide", 800, 1, **FULL).port("sweep", inlet=True) is not None
    assert electrolyser("pem", 80, 30, **FULL).port("sweep", inlet=True) is None

"""Sun, weather files, photovoltaic field and concentrator: settings, files, batches, sentences."""

from pathlib import Path

import numpy as np
import pvlib
import pytest
from pydantic import ValidationError

from chainflow.basis.faults import FileFault, NotSolved
from chainflow.equipment.base import Site
from chainflow.equipment.concentrator import Concentrator
from chainflow.equipment.electrolysis import Electrolyser
from chainflow.equipment.ports import Heat, Light, rate_of, times
from chainflow.equipment.pv_field import PvField
from chainflow.equipment.sun.hours import HOURS, HourFault, hour_of, name_of
from chainflow.equipment.sun.weather import WeatherFault, read_weather
from chainflow.equipment.sunlight import Sunlight, typical_hour
from tests.equipment.feeds import MATTER, NOON

DATA = Path(pvlib.__file__).parent / "data"
GREENSBORO = str(DATA / "723170TYA.CSV")
SITE = Site(MATTER)


def said(settings, cls, context=None):
    with pytest.raises(ValidationError) as caught:
        cls.model_validate(settings, context=context)
    return "\n".join(error["msg"] for error in caught.value.errors())


# ---------------------------------------------------------------------------------------- light
def test_light_says_which_aperture_it_falls_on():
    assert Light(8000.0, 800.0, 0.9, 298.15, 1.0).area == 10.0
    assert Light(0.0, 0.0, 0.9, 298.15, 1.0).area == 0.0
    batch = Light(np.array([8000.0, 0.0]), np.array([800.0, 0.0]), 0.9, 298.15, 1.0)
    assert batch.area.tolist() == [10.0, 0.0]
    assert batch.case(1) == Light(0.0, 0.0, 0.9, 298.15, 1.0)


def test_a_share_of_light_keeps_its_irradiance():
    half = times(NOON, 0.5)
    assert rate_of(half) == 0.5 * NOON.rate
    assert half.numbers[1:] == NOON.numbers[1:]


# ---------------------------------------------------------------------------------------- hours
def test_hours_are_named_by_their_end():
    assert hour_of("1 Jan 1:00") == 0
    assert hour_of("1 Jan 24:00") == hour_of("2 Jan 0:00") == 23
    assert hour_of("31 Dec 24:00") == hour_of("1 Jan 0:00") == HOURS - 1
    assert hour_of("21 jun 12:00") == 24 * (31 + 28 + 31 + 30 + 31 + 20) + 11


def test_every_hour_has_a_name_that_says_it():
    assert [hour_of(name_of(hour)) for hour in range(HOURS)] == list(range(HOURS))
    with pytest.raises(HourFault, match="outside the 8760"):
        name_of(HOURS)


@pytest.mark.parametrize(
    ("text", "sentence"),
    [
        ("noon", "is no hour, wanted day, month and the end of an hour, as in '21 Jun 12:00'"),
        ("21 Juni 12:00", "is no hour"),
        ("21 Jux 12:00", "there is no month Jux, wanted one of Jan, Feb"),
        ("29 Feb 12:00", "Feb has the days 1 to 28 (a year of weather has no leap day)"),
        ("0 Mar 12:00", "Mar has the days 1 to 31"),
        ("21 Jun 25:00", "hours end at 1:00, 2:00 ... 24:00"),
        ("21 Jun 12:30", "hours end at 1:00, 2:00 ... 24:00"),
    ],
)
def test_what_is_no_hour(text, sentence):
    settings = {"weather": GREENSBORO, "aperture": "1 m2", "hour": text}
    assert sentence in said(settings, Sunlight)
    assert "or 'brightest' or 'typical'" in said(settings, Sunlight)


# ------------------------------------------------------------------------------------- sunlight
def test_only_one_thing_says_how_much_light_there_is():
    place = {"latitude": "45 deg", "longitude": "8 deg"}
    none = said({"aperture": "1 m2"}, Sunlight)
    assert none.endswith("'weather' says how much light there is, found none of them")
    both = {"aperture": "1 m2", "irradiance": "800 W/m2", "place": place}
    assert "found 'irradiance' and 'place'" in said(both, Sunlight)


@pytest.mark.parametrize(
    ("settings", "sentence"),
    [
        ({"irradiance": 800, "hour": "21 Jun 12:00"}, "'hour' means nothing beside 'irradiance'"),
        ({"irradiance": 800, "plane": {"tilt": 0.5}}, "'plane' means nothing beside 'irradiance'"),
        ({"weather": GREENSBORO, "air": 300}, "'air' means nothing beside 'weather'"),
        ({"weather": GREENSBORO, "wind": 3}, "'wind' means nothing beside 'weather'"),
        ({"weather": GREENSBORO, "direct": 0.5}, "'direct' means nothing beside 'weather'"),
    ],
)
def test_what_means_nothing_is_refused(settings, sentence):
    assert sentence in said({**settings, "aperture": 1}, Sunlight)


@pytest.mark.parametrize(
    ("plane", "sentence"),
    [
        ({"tilt": "200 deg"}, "'200 deg' is out of range: wanted at least 0 deg, at most 180 deg"),
        ({"tilt": "-5 deg"}, "'-5 deg' is out of range"),
        ({"tilt": "30"}, "has no unit"),
        ({"mount": "single-axis", "tilt": "30 deg"}, "'tilt' means nothing with mount single-axis"),
        ({"mount": "fixed", "ground_cover": 0.4}, "'ground_cover' means nothing with mount fixed"),
        ({"cover": {"slant_loss": 0.1}}, "'slant_loss' is of another model than fresnel"),
        ({"cover": {"model": "ashrae", "index": 1.5}}, "'index' is of another model than ashrae"),
        ({"cover": {"coating": 1.6}}, "wanted a lower index, as 1.29"),
    ],
)
def test_planes_that_cannot_be(plane, sentence):
    text = said({"weather": GREENSBORO, "aperture": 1, "plane": plane}, Sunlight)
    assert sentence in text


def test_a_stated_irradiance_imports_no_weather_library():
    import subprocess
    import sys

    code = (
        "import sys; from chainflow.flowsheet.building import read_flowsheet;"
        "from chainflow.solver.solve import solve_flowsheet;"
        "solve_flowsheet(read_flowsheet('flowsheets/hydrogen-direct-coupled.yaml'));"
        "print('pvlib' in sys.modules, 'pandas' in sys.modules)"
    )
    top = Path(__file__).parents[2]
    found = subprocess.run(
        [sys.executable, "-c", code], capture_output=True, text=True, check=True, cwd=top
    )
    assert found.stdout.split() == ["False", "False"]


def test_a_stated_irradiance_has_no_year():
    with pytest.raises(ValueError, match="has no year: give 'weather' or 'place'"):
        Sunlight(irradiance=800.0, aperture=1.0).year()


def sky(**more):
    return Sunlight.model_validate({"weather": GREENSBORO, "aperture": "600 m2", **more})


def test_the_hour_that_is_solved():
    year = sky(plane={"tilt": "30 deg"}).year()
    assert year.rate.shape == (HOURS,)
    brightest = sky(plane={"tilt": "30 deg"}).operate({}, {}, SITE).outlets["light"]
    assert brightest.irradiance == year.irradiance.max()
    noon = sky(plane={"tilt": "30 deg"}, hour="21 Jun 12:00").operate({}, {}, SITE)
    place = hour_of("21 Jun 12:00")
    assert noon.outlets["light"] == year.case(place)
    assert noon.results["hour_of_year"] == place + 1


def test_half_of_the_year_s_light_is_brighter_than_the_typical_hour():
    year = sky().year()
    level = year.irradiance[typical_hour(year.irradiance)]
    above = year.irradiance[year.irradiance > level].sum()
    assert above == pytest.approx(0.5 * year.irradiance.sum(), rel=2e-3)
    assert typical_hour(np.zeros(5)) == 0


def test_a_dark_hour_is_cautioned():
    outcome = sky(hour="21 Jun 2:00").operate({}, {}, SITE)
    assert rate_of(outcome.outlets["light"]) == 0.0
    assert [(c.code, c.text) for c in outcome.cautions] == [
        ("dark-hour", "in the hour that ends at 21 Jun 2:00 no light falls on the aperture")
    ]


def test_following_the_sun_gains_and_the_beam_is_whole_on_two_axes():
    sums = [
        sky(plane=plane).operate({}, {}, SITE).results
        for plane in ({}, {"mount": "single-axis"}, {"mount": "two-axis"})
    ]
    totals = [found["year_in_plane_J_m2"] for found in sums]
    assert totals == sorted(totals)
    assert sums[2]["year_direct_in_plane_J_m2"] == pytest.approx(
        sums[2]["year_direct_J_m2"], rel=5e-3
    )
    crowded = sky(plane={"mount": "single-axis", "ground_cover": "50 %"})
    assert crowded.operate({}, {}, SITE).results["year_in_plane_J_m2"] < totals[1]


def test_light_parts_into_beam_and_sky():
    year = sky(plane={"tilt": "40 deg", "sky": "perez"}).year()
    assert np.isfinite(year.rate).all()
    assert ((year.direct >= 0.0) & (year.direct <= 1.0)).all()
    assert year.rate == pytest.approx(600.0 * year.irradiance, rel=1e-14)


# -------------------------------------------------------------------------------- weather files
def epw(rows=HOURS, **columns):
    """An invented year on a hill in the format EPW: the same day for a year."""
    values = {"ghi": 300, "dni": 400, "dhi": 100, "temp": 12.5, "wind": 2.5, **columns}
    head = [
        "LOCATION,Invented Hill,-,none,invented,999999,46.40,9.60,1.0,1500.0",
        *(f"{word},0" for word in ("DESIGN CONDITIONS", "TYPICAL/EXTREME PERIODS")),
        "GROUND TEMPERATURES,0",
        "HOLIDAYS/DAYLIGHT SAVINGS,No,0,0,0",
        "COMMENTS 1,invented",
        "COMMENTS 2,invented",
        "DATA PERIODS,1,1,Data,Sunday, 1/ 1,12/31",
    ]
    lines = []
    for hour in range(rows):
        day = np.datetime64("2001-01-01") + hour // 24
        year, month, date = str(day).split("-")
        cells = [year, int(month), int(date), hour % 24 + 1, 60, "?", values["temp"], 5.0, 60]
        cells += [85000, 0, 0, 300, values["ghi"], values["dni"], values["dhi"], 0, 0, 0, 0]
        cells += [180, values["wind"], 3, 3, 20, 77777, 9, "999999999", 10, 0.1, 0, 88, 0.2, 0, 0]
        lines.append(",".join(map(str, cells)))
    return "\n".join([*head, *lines]) + "\n"


@pytest.fixture
def folder(tmp_path):
    return tmp_path


def written(folder, text, name="hill.epw"):
    (folder / name).write_text(text, encoding="utf-8")
    return name


def test_an_epw_file_beside_the_flowsheet(folder):
    name = written(folder, epw())
    sun = Sunlight.model_validate(
        {"weather": name, "aperture": "10 m2"}, context={"folder": str(folder)}
    )
    found = sun.weather
    assert found.horizontal.sum() == 300.0 * HOURS
    assert (found.air[0], found.wind[0]) == (pytest.approx(285.65), 2.5)
    place = found.place
    assert (place.latitude, place.longitude, place.altitude, place.zone) == (46.4, 9.6, 1500, 1)


def test_a_weather_file_that_is_not_there(folder):
    with pytest.raises(FileFault) as caught:
        read_weather("hill.epw", folder)
    assert str(caught.value) == "cannot read the weather file 'hill.epw': No such file or directory"
    assert caught.value.exit_code == 4


@pytest.mark.parametrize(
    ("text", "sentence"),
    [
        (epw(rows=100), "'hill.epw' has 100 rows, wanted the 8760 hours of a year"),
        (
            epw(ghi=9999),
            (
                "'hill.epw': 8760 of its hours have no global irradiance, the first is "
                "1 Jan 1:00 with 9999 W/m2, wanted 0 to 1500 W/m2: fill the gaps or take "
                "another file"
            ),
        ),
        (epw(temp=99.9), "have no air temperature, the first is 1 Jan 1:00 with 99.9 degC"),
        (epw(wind=999), "have no wind speed"),
        ("LOCATION,nowhere\n", "is no weather file: by its first line it would be EPW"),
        ("a,b\n1,2\n", "is no weather file: by its first line it would be TMY3"),
        ("dear diary\n", "is no weather file: by its first line it would be TM2"),
        ("", "is no weather file: by its first line it would be TM2"),
    ],
)
def test_what_is_no_year_of_weather(folder, text, sentence):
    name = written(folder, text)
    with pytest.raises(WeatherFault) as caught:
        read_weather(name, folder)
    assert sentence in str(caught.value)
    assert str(caught.value).startswith("'hill.epw'")
    settings = {"weather": name, "aperture": "10 m2"}
    assert sentence in said(settings, Sunlight, {"folder": str(folder)})


def test_a_leap_day_is_left_out(folder):
    name = written(folder, epw(rows=HOURS + 24))
    assert read_weather(name, folder).air.shape == (HOURS,)


# -------------------------------------------------------------------------------------- pv-field
@pytest.mark.parametrize(
    ("settings", "sentence"),
    [
        ({}, "'efficiency' is missing: write efficiency: 20 %, or model: one-diode"),
        ({"efficiency": 0.2, "series": 10}, "'series' is of model one-diode"),
        ({"model": "one-diode", "efficiency": 0.2}, "'efficiency' is of model constant-efficiency"),
        (
            {"model": "one-diode", "converter": 0.9, "coupling": {"load": "s", "cells": 10}},
            "with 'coupling' there is no converter",
        ),
        (
            {"model": "one-diode", "cell_temperature": {"model": "noct", "wind_loss": 3.0}},
            "'wind_loss' is of another model than noct",
        ),
        (
            {"model": "one-diode", "cell_temperature": {"model": "noct", "noct": "15 degC"}},
            "'noct' is not above the 20 degC",
        ),
        (
            {"model": "one-diode", "cell_temperature": {"mounting": "roof"}},
            "'mounting' is of another model than faiman: remove it",
        ),
        (
            {
                "model": "one-diode",
                "cell_temperature": {"model": "back-of-module", "mounting": "garage"},
            },
            "'open-rack', 'open-rack-glass', 'roof' or 'insulated'",
        ),
        ({"model": "one-diode", "module": {"table": "no such *"}}, "fits no module of the table"),
        (
            {"model": "one-diode", "module": {"table": "*"}},
            "modules of the table, wanted one: narrow it with more of the name",
        ),
        ({"model": "one-diode", "module": {"table": 7}}, "'table' is a pattern of names in quotes"),
    ],
)
def test_fields_that_cannot_be(settings, sentence):
    assert sentence in said(settings, PvField)


def test_a_pattern_that_fits_many_modules_names_none_of_them():
    table = pvlib.pvsystem.retrieve_sam("CECMod").columns
    text = said({"model": "one-diode", "module": {"table": "*a*"}}, PvField)
    many = sum("a" in name.lower() for name in table)
    assert text.startswith(f"'*a*' fits {many} modules of the table")
    assert not any(name in text or name.partition("_")[0] in text.split() for name in table)


def test_more_modules_than_the_light_falls_on():
    piece = PvField.model_validate({"model": "one-diode", "series": 20, "strings": 30})
    outcome = piece.operate({"light": NOON}, {}, SITE)
    assert outcome.unmet["light"] == (
        "the light falls on 555.556 m2, but 30 strings of 20 modules have 1020 m2: enlarge the "
        "aperture of the light, or take fewer strings"
    )
    batch = Light(np.array([0.0, NOON.rate]), np.array([0.0, 900.0]), 0.9, 293.15, 1.0)
    assert piece.run({"light": batch}).unmet == outcome.unmet


def pem(**more):
    settings = {"model": "pem", "temperature": "60 degC", "pressure": "10 bar"}
    return Electrolyser.model_validate({**settings, "cell_area": "4 m2", **more})


def hanging(stack, cells=330, **more):
    field = {"model": "one-diode", "series": 20, "coupling": {"load": "stack", "cells": cells}}
    return PvField.model_validate({**field, **more}).seeing({"stack": stack})


@pytest.mark.parametrize(
    ("stack", "sentence"),
    [
        (pem(current_density="1 A/cm2"), "'stack' says itself how much it makes"),
        (pem(rectifier="95 %"), "'stack' draws power beside that of its cells"),
        (
            pem(model="solid-oxide", temperature="750 degC", pressure="1 bar"),
            "the curve of 'stack' hangs on what it is fed with",
        ),
        (Concentrator(temperature=1000.0), "'stack' is no electrolyser"),
    ],
    ids=["sized twice", "rectifier", "hot", "no stack"],
)
def test_what_cannot_hang_on_a_field(stack, sentence):
    with pytest.raises(ValueError, match=sentence):
        hanging(stack)


def test_a_field_that_was_not_told_of_its_stack():
    field = PvField.model_validate(
        {"model": "one-diode", "coupling": {"load": "stack", "cells": 9}}
    )
    with pytest.raises(NotSolved, match="nobody said what 'stack' is"):
        field.operate({"light": NOON}, {}, SITE)


@pytest.mark.parametrize(
    "stack",
    [
        pem(),
        pem(model="alkaline", pressure="1 bar"),
        pem(
            model="measured",
            curve=[{"current_density": [1.0, 5e3, 2e4], "voltage": [1.5, 1.8, 2.2]}],
        ),
        pem(model="voltage", voltage="1.9 V", cell_area=None),
        pem(model="specific-energy", energy_use="52 kWh/kg", cell_area=None),
        pem(cell_area=None, current_density="1 A/cm2"),
        pem(cell_area=None, current_density="1 A/cm2", rating="100 kW"),
    ],
    ids=["pem", "alkaline", "measured", "voltage", "specific-energy", "one density", "rated"],
)
@pytest.mark.parametrize("irradiance", [150.0, 500.0, 1050.0])
def test_every_curve_is_met_where_it_is(stack, irradiance):
    """The stack ends at the field's current and voltage, whatever its model."""
    field = hanging(stack)
    light = Light(irradiance * 600.0, irradiance, 0.9, 293.15, 1.0)
    outcome = field.operate({"light": light}, {}, SITE)
    assert not outcome.unmet
    from tests.equipment.feeds import WATER

    worked = stack.operate({"power": (outcome.outlets["power"],), "water": WATER}, {}, SITE)
    assert worked.results["voltage_V"] * 330 == pytest.approx(
        outcome.results["field_voltage_V"], rel=1e-9
    )
    current = worked.results["direct_current_W"] / worked.results["voltage_V"] / 330
    assert current == pytest.approx(outcome.results["field_current_A"], rel=1e-9)
    assert 0.0 <= outcome.results["coupling_loss"] < 1.0


@pytest.mark.parametrize("cells", [1, 30, 200, 330, 400, 440, 480])
def test_a_crossing_is_found_wherever_there_is_one(cells):
    """From near short circuit to near open circuit; beyond, none is."""
    field = hanging(pem(), cells)
    light = Light(900.0 * 600.0, 900.0, 0.9, 293.15, 1.0)
    outcome = field.operate({"light": light}, {}, SITE)
    opened, least = outcome.results["open_voltage_V"], 1.2487 * cells  # reversible, 60 degC, 10 bar
    assert bool(outcome.unmet) == (opened < least)
    assert (outcome.outlets["power"] > 0.0) == (opened > least)


def test_curves_that_do_not_cross_are_told():
    outcome = hanging(pem(), 700).operate({"light": NOON}, {}, SITE)
    assert outcome.unmet["power"].startswith("these curves do not cross: 20 modules in series give")
    assert "at most where 700 cells of 'stack' need 874.1 V" in outcome.unmet["power"]


def test_a_year_at_once_is_its_hours_one_by_one():
    """8760 hours of a field on a stack; the hours that are compared are every 97th."""
    year = sky(plane={"tilt": "36 deg"}).year()
    field = hanging(pem())
    together = field.run({"light": year})
    assert together.outlets["power"].shape == (HOURS,)
    assert not together.unmet
    for hour in range(0, HOURS, 97):
        alone = field.run({"light": year.case(hour)})
        assert together.outlets["power"][hour] == pytest.approx(
            alone.outlets["power"], rel=1e-14, abs=1e-9
        )
    best = together.results["maximum_power_W"].sum()
    lost = 1.0 - together.outlets["power"].sum() / best
    assert 0.0 < lost < 0.15  # 3-15 % over a year, common practice, no source
    assert field.run({"light": year}).heat.sum() == pytest.approx(
        together.outlets["power"].sum() - year.rate.sum(), rel=1e-12
    )


def test_a_year_on_a_roof_is_its_hours_one_by_one():
    """Every hour of the year at once, and the roof is never cooler than the open rack."""
    year = sky(plane={"tilt": "36 deg"}).year()
    roof, rack = (
        PvField.model_validate(
            {
                "model": "one-diode",
                "cell_temperature": {"model": "back-of-module", "mounting": mounting},
            }
        )
        for mounting in ("roof", "open-rack")
    )
    together = roof.run({"light": year})
    for hour in range(0, HOURS, 97):
        alone = roof.run({"light": year.case(hour)})
        for name in ("cell_temperature_K", "maximum_power_W"):
            assert together.results[name][hour] == pytest.approx(
                alone.results[name], rel=1e-14, abs=1e-9
            )
    cooler = rack.run({"light": year})
    assert (together.results["cell_temperature_K"] >= cooler.results["cell_temperature_K"]).all()
    assert together.outlets["power"].sum() < cooler.outlets["power"].sum()


@pytest.mark.parametrize("hung", [True, False], ids=["on a stack", "at maximum power"])
@pytest.mark.parametrize(
    "more",
    [
        {},
        {"strings": 8},
        {"cell_temperature": {"model": "noct"}},
        {"cell_temperature": {"model": "back-of-module", "mounting": "roof"}},
        {"cell_temperature": {"model": "loss-factor"}},
        {"cell_temperature": {"model": "as-air"}},
    ],
    ids=["faiman", "strings", "noct", "back of module", "loss factor", "as air"],
)
def test_slopes_of_one_diode_agree_with_differences(hung, more):
    """By rate, irradiance, beam, air and wind; on a stack whose voltage grows with current."""
    field = (
        hanging(pem(), **more)
        if hung
        else PvField.model_validate({"model": "one-diode", "series": 20, **more})
    )
    numbers = np.array(NOON.numbers)

    def power(values):
        return field.operate({"light": Light(*values)}, {}, SITE).outlets["power"]

    outcome = field.operate({"light": NOON}, {}, SITE)
    assert not outcome.unmet
    given = field.slopes({"light": NOON}, {}, SITE, outcome)["light"]["power"][0]
    for place, slope in enumerate(given):
        step = 2e-5 * numbers[place]
        ahead, back = numbers.copy(), numbers.copy()
        ahead[place] += step
        back[place] -= step
        found = (power(ahead) - power(back)) / (2 * step)
        assert slope * numbers[place] == pytest.approx(
            found * numbers[place], abs=1e-6 * outcome.outlets["power"]
        )


def test_warm_modules_give_less_and_wind_cools_them():
    field = PvField.model_validate({"model": "one-diode"})

    def made(air, wind):
        light = Light(9e5, 900.0, 0.9, air, wind)
        return field.operate({"light": light}, {}, SITE).outlets["power"]

    assert made(283.15, 1.0) > made(293.15, 1.0) > made(313.15, 1.0)
    assert made(293.15, 5.0) > made(293.15, 1.0) > made(293.15, 0.0)


# ---------------------------------------------------------------------------------- concentrator
def receiver(**more):
    return Concentrator.model_validate({"temperature": "900 degC", **more})


def test_only_the_beam_is_concentrated():
    whole = Light(1e6, 800.0, 1.0, 293.15, 1.0)
    hazy = Light(2e6, 1600.0, 0.5, 293.15, 1.0)  # as much beam on as much mirror, and haze
    one, other = (receiver().operate({"light": sun}, {}, SITE) for sun in (whole, hazy))
    assert rate_of(other.outlets["heat"]) == pytest.approx(rate_of(one.outlets["heat"]), rel=1e-12)
    assert other.results["diffuse_W"] == pytest.approx(1e6, rel=1e-12)


def test_a_receiver_in_the_dark_or_too_hot_gives_nothing():
    dark = receiver().operate({"light": Light(0.0, 0.0, 0.0, 293.15, 1.0)}, {}, SITE)
    assert rate_of(dark.outlets["heat"]) == 0.0
    assert dark.cautions == ()
    dim = receiver().operate({"light": Light(1e5, 100.0, 0.9, 293.15, 1.0)}, {}, SITE)
    assert rate_of(dim.outlets["heat"]) == 0.0
    assert [caution.code for caution in dim.cautions] == ["receiver-shut"]
    assert dim.heat == pytest.approx(-1e5, rel=1e-12)


def test_heat_comes_at_the_receiver_s_temperature():
    heat = receiver().operate({"light": NOON}, {}, SITE).outlets["heat"]
    assert isinstance(heat, Heat)
    assert (heat.start, heat.end, heat.mean) == (1173.15, 1173.15, 1173.15)


def test_convection_takes_its_share():
    still, windy = (
        receiver(convection=h).operate({"light": NOON}, {}, SITE).results
        for h in ("0 W/(m2*K)", "30 W/(m2*K)")
    )
    area = NOON.rate / NOON.irradiance / 1000.0
    assert windy["convected_W"] == pytest.approx(30.0 * (1173.15 - NOON.air) * area, rel=1e-12)
    assert still["receiver_efficiency"] > windy["receiver_efficiency"]

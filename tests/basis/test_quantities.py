"""Quantities: the one-line grammar, its complaints, the field types, and the printed form."""

import math
import subprocess
import sys
import time
from typing import Annotated

import jsonschema
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pydantic import BaseModel, TypeAdapter, ValidationError

from chainflow.basis.constants import NORMAL_MOLAR_VOLUME, STANDARD_MOLAR_VOLUME
from chainflow.basis.quantities import (
    Amount,
    BandGap,
    BasedShare,
    Flow,
    Fraction,
    HeatingValueShare,
    OpenFraction,
    Pressure,
    PressureDrop,
    QuantityFault,
    QuantityType,
    Temperature,
    TemperatureDifference,
    format_quantity,
    measured,
    parse,
    quantity,
)


class Settings(BaseModel, frozen=True, extra="forbid"):
    temperature: Temperature = 298.15
    pressure: Pressure = 1e5
    drop: PressureDrop = 0.0
    approach: TemperatureDifference = 0.0
    flow: Flow | None = None
    share: Fraction = 0.5
    efficiency: OpenFraction = 1.0
    based: HeatingValueShare | None = None


def complaint(**given):
    with pytest.raises(ValidationError) as caught:
        Settings(**given)
    (error,) = caught.value.errors()
    return error["msg"]


# ------------------------------------------------------------------------------------ grammar
@pytest.mark.parametrize(
    ("text", "dimension", "value"),
    [
        ("25 bar", "Pa", 25e5),
        ("350 degC", "K", 623.15),
        ("850 W/m2", "W/m2", 850.0),
        ("4.2 kWh/m3", "J/m3", 15.12e6),
        ("21 %", "1", 0.21),
        ("21%", "1", 0.21),
        ("0.21", "1", 0.21),
        ("400 ppm", "1", 4e-4),
        ("  12   bar ", "Pa", 12e5),
        ("+1.5e3 kW", "W", 1.5e6),
        (".5 m", "m", 0.5),
        ("5. m", "m", 5.0),
        ("-3 degC", "K", 270.15),
        ("-5 MW", "W", -5e6),
        ("50 kmol/h", "mol/s", 50e3 / 3600),
        ("15 ohm*cm2", "ohm*m2", 15e-4),
        ("3 1/h", "1/s", 3 / 3600),
    ],
)
def test_quantities_that_are_read(text, dimension, value):
    assert parse(text, dimension) == pytest.approx(value, rel=1e-14)


@pytest.mark.parametrize(
    ("text", "dimension", "said"),
    [
        ("1,5 bar", "Pa", "decimal comma: write 1.5$"),
        ("1,500 bar", "Pa", r"write 1\.500 \(or 1500 if thousands are meant\)"),
        ("1 000 kg/h", "kg/s", "space inside the number"),
        ("1_000 kg/h", "kg/s", "separator inside the number"),
        ("1'000 kg/h", "kg/s", "separator inside the number"),
        ("12bar", "Pa", "write '12 bar'"),
        ("12barg", "Pa", "write '12 barg'|gauge"),
        ("12\u00a0bar", "Pa", "write '12 bar'"),
        ("12", "Pa", "has no unit: wanted a pressure.*for instance '12 bar'"),
        ("12", "W/m2", "has no unit: wanted a power per area"),
        ("", "Pa", "nothing does not start with a number"),
        ("bar", "Pa", "does not start with a number"),
        ("nan bar", "Pa", "not a finite number"),
        ("-.inf", "Pa", "not a finite number"),
        ("1e999 Pa", "Pa", "too large"),
        ("1e308 bar", "Pa", "too large"),
        ("9**9**9 Pa", "Pa", "not a plain decimal"),
        ("1+1 Pa", "Pa", "not a plain decimal"),
        ("0x10 Pa", "Pa", "not a plain decimal"),
        ("1.2.3 Pa", "Pa", "not a plain decimal"),
        ("--1 Pa", "Pa", "does not start with a number"),
        ("٣ bar", "Pa", "does not start with a number"),
        ("2 barg", "Pa", "gauge pressure.*1.013 bar"),
        ("5 kw", "W", "did you mean 'kW'"),
        ("5 PA", "Pa", "is a current, wanted a pressure.*did you mean 'Pa'"),
        ("25 C", "K", "did you mean 'degC'"),
        ("5 kWh", "W", "is an energy, wanted a power"),
        ("3 kWh/m3", "J/kg", "is an energy per volume, wanted an energy per mass"),
        ("12 %", "Pa", "is a plain number, wanted a pressure"),
        ("3 bar", "1", "is a pressure, wanted a share"),
        ("5 \x1b[31mbar", "Pa", r"\\x1b\[31m"),
        ("1" * 200 + " Pa", "Pa", "too long"),
    ],
)
def test_quantities_that_are_refused(text, dimension, said):
    with pytest.raises(QuantityFault, match=said) as caught:
        parse(text, dimension)
    assert "\n" not in str(caught.value)
    assert str(caught.value).isprintable()


def test_ranges_are_told_in_the_unit_of_the_text():
    with pytest.raises(QuantityFault, match=r"'-300 degC' is out of range: wanted above -273.15"):
        parse("-300 degC", "K", gt=0)
    with pytest.raises(QuantityFault, match="wanted at least 1 bar, below 100 bar"):
        parse("200 bar", "Pa", ge=1e5, lt=1e7)
    with pytest.raises(QuantityFault, match="for 85 % write '85 %'"):
        parse("85", "1", ge=0, le=1)


@pytest.mark.parametrize(
    ("limits", "inside", "outside"),
    [
        ({"gt": 1.0}, 1.0000001, 1.0),
        ({"ge": 1.0}, 1.0, 0.9999999),
        ({"lt": 1.0}, 0.9999999, 1.0),
        ({"le": 1.0}, 1.0, 1.0000001),
    ],
)
def test_the_edges_of_a_range(limits, inside, outside):
    assert parse(f"{inside!r} m", "m", **limits) == inside
    with pytest.raises(QuantityFault, match="out of range"):
        parse(f"{outside!r} m", "m", **limits)


def test_a_temperature_difference_has_no_zero_point():
    assert parse("10 K", "K", difference=True) == 10.0
    with pytest.raises(QuantityFault, match="wanted a temperature difference: write it in K"):
        parse("10 degC", "K", difference=True)


def test_absurd_texts_are_refused_at_once():
    start = time.perf_counter()
    for text in ("9" * 10**7 + " bar", "1 " + "a*" * 10**6, " " * 10**6, "1e" + "9" * 10**6):
        with pytest.raises(QuantityFault):
            parse(text, "Pa")
    assert time.perf_counter() - start < 2.0


@settings(max_examples=400)
@given(
    st.text(alphabet="0123456789.,eE+-_ %barPkWgN3/*^()", max_size=20)
    | st.text(max_size=120)
    | st.builds("{} {}".format, st.floats(), st.text(alphabet="kMWPabrdegC/m2*", max_size=6))
)
def test_any_text_is_a_finite_number_or_a_quantity_fault(text):
    for dimension in ("Pa", "1", "mol/s"):
        try:
            value = parse(text, dimension)
        except QuantityFault as fault:
            assert str(fault).isprintable()
        else:
            assert math.isfinite(value)


def is_written(value):
    """Whether a number is one that people write: not closer to zero than means anything."""
    return value == 0.0 or abs(value) > 1e-90


@pytest.mark.parametrize("text", ["1e-310 %", "3e-101 bar", "-1e-200 K"])
def test_a_number_too_close_to_zero_is_refused(text):
    with pytest.raises(QuantityFault, match="is too close to zero to mean anything: write 0"):
        parse(text, text.split()[1], difference=text.endswith("K"))


@settings(max_examples=200)
@given(
    st.floats(min_value=-1e12, max_value=1e12).filter(is_written),
    st.sampled_from(["bar", "Pa", "MPa", "atm"]),
)
def test_writing_and_reading_gives_the_same_pressure(value, unit):
    from chainflow.basis.quantities import convert

    text = f"{convert(value, unit)!r} {unit}"
    assert parse(text, "Pa") == pytest.approx(value, rel=1e-14, abs=1e-300)


# -------------------------------------------------------------------------------- field types
def test_text_becomes_si_and_si_stays():
    read = Settings(temperature="25 degC", pressure="3 bar", share="21 %")
    assert (read.temperature, read.pressure, read.share) == (298.15, 3e5, 0.21)
    assert Settings(temperature=298.15, pressure=300_000, share=np.float32(0.25)).share == 0.25


def test_every_complaint_is_collected():
    with pytest.raises(ValidationError) as caught:
        Settings(temperature="12", pressure="1,5 bar", drop="-1 bar", flow="3 m3/h", share="2")
    assert [error["loc"] for error in caught.value.errors()] == [
        ("temperature",),
        ("pressure",),
        ("drop",),
        ("flow",),
        ("share",),
    ]


@pytest.mark.parametrize("wrong", [True, None, [1.0], {}, b"3 bar", 1j])
def test_other_types_are_refused(wrong):
    assert "wanted a pressure" in complaint(pressure=wrong)


@pytest.mark.parametrize("wrong", [math.nan, math.inf, -math.inf])
def test_numbers_that_are_not_finite_are_refused(wrong):
    assert "not a finite number" in complaint(pressure=wrong)


def test_numbers_from_python_are_checked_against_the_range():
    assert complaint(pressure=0.0) == "0 Pa is out of range: wanted above 0 Pa"
    assert "above 0" in complaint(efficiency=0.0)
    assert Settings(share=0.0).share == 0.0


def test_messages_with_braces_survive_pydantic():
    assert "'{text} bar'" in complaint(pressure="{text} bar")


@pytest.mark.parametrize(
    ("text", "amount"),
    [
        ("10 mol/s", Amount(10.0, "mol")),
        ("36 kg/h", Amount(0.01, "kg")),
        ("100 Nm3/h", Amount(100 / 3600 / NORMAL_MOLAR_VOLUME, "mol")),
        ("100 Sm3/h", Amount(100 / 3600 / STANDARD_MOLAR_VOLUME, "mol")),
        (2.5, Amount(2.5, "mol")),
        (Amount(0.1, "kg"), Amount(0.1, "kg")),
    ],
)
def test_flows_by_amount_volume_and_mass(text, amount):
    flow = Settings(flow=text).flow
    assert flow.per == amount.per
    assert flow.value == pytest.approx(amount.value, rel=1e-14)
    assert flow.unit == f"{amount.per}/s"


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("3 m3/h", "volume flow.*Nm3 .at 0 degC. or Sm3"),
        ("3 bar", "is a pressure, wanted a flow"),
        ("3", "has no unit: wanted a flow in mol/s, kg/h, Nm3/h"),
        ("-3 kg/h", "wanted at least 0 kg/h"),
        (-3.0, "out of range"),
        (Amount(math.nan, "kg"), "not a finite"),
    ],
)
def test_flows_that_are_refused(text, said):
    import re

    assert re.search(said, complaint(flow=text))


@pytest.mark.parametrize(
    ("text", "share"),
    [
        ("42 % LHV", BasedShare(0.42, "LHV")),
        ("42% HHV", BasedShare(0.42, "HHV")),
        ("0.42 LHV", BasedShare(0.42, "LHV")),
        ("42 %", BasedShare(0.42, None)),
        (0.42, BasedShare(0.42, None)),
        (BasedShare(0.42, "HHV"), BasedShare(0.42, "HHV")),
    ],
)
def test_shares_of_a_heating_value(text, share):
    assert Settings(based=text).based == share


@pytest.mark.parametrize("text", ["142 % LHV", "42", "LHV", "42 % XHV", "0 % LHV", "42 % LHV LHV"])
def test_shares_of_a_heating_value_that_are_refused(text):
    assert complaint(based=text)


def test_the_marker_can_be_found_on_the_model():
    (marker,) = Settings.model_fields["pressure"].metadata
    assert isinstance(marker, QuantityType)
    assert marker.unit == "Pa"
    assert marker.described() == "a pressure in bar or another such unit; above 0 bar"


@pytest.mark.parametrize(
    ("marker", "value", "shown", "takes"),
    [
        (measured("1", gt=1, le=30), 22.0, "22", "a number; above 1, at most 30"),
        (measured("1", ge=-6, le=0), -3.5, "-3.5", "a number; at least -6, at most 0"),
        (
            measured("1", ge=0, le=1),
            0.3,
            "30 %",
            "a share, as '21 %' or 0.21; at least 0 %, at most 100 %",
        ),
        (measured("m2/A"), 0.01599, "0.01599 m2/A", "a value in m2/A or another such unit"),
        (
            measured("K", ge=423.15),
            523.15,
            "250 degC",
            "a temperature in degC or another such unit; at least 150 degC",
        ),
        (
            measured("K", gt=0),
            523.15,
            "250 degC",
            "a temperature in degC or another such unit; above 0 K",
        ),
    ],
)
def test_values_and_ranges_are_shown_as_a_reader_would_write_them(marker, value, shown, takes):
    assert marker.shown(value) == shown
    assert marker.described() == takes


def test_types_made_at_run_time_and_written_out_are_the_same():
    assert quantity("V", gt=0) == Annotated[float, measured("V", gt=0)]


@pytest.mark.parametrize(
    ("field", "good", "bad"),
    [
        ("pressure", ["12 bar", "1.5e3 kPa", "$drop", "-1 bar"], ["12", "12bar", "1,5 bar", "$A"]),
        ("share", ["12 %", "12%", "0.3", 0.3, "$x"], ["1,2 %", "x"]),
        ("flow", ["12 kg/h"], ["12kg/h"]),
        ("based", ["42 % LHV", "42 %", "0.4 HHV"], ["42 % XHV"]),
    ],
)
def test_the_json_schema_tells_good_text_from_bad(field, good, bad):
    schema = Settings.model_json_schema()
    assert schema["properties"]["pressure"]["x-unit"] == "Pa"
    for text in good:
        jsonschema.validate({field: text}, schema)
    for text in bad:
        with pytest.raises(jsonschema.ValidationError):
            jsonschema.validate({field: text}, schema)


def test_settings_go_out_as_plain_json():
    assert Settings(flow="36 kg/h").model_dump(mode="json")["flow"] == [0.01, "kg"]


# ----------------------------------------------------------------------------------- printing
@pytest.mark.parametrize(
    ("value", "unit", "shown"),
    [
        (12e5, "Pa", "12 bar"),
        (0.05e5, "Pa", "50 mbar"),
        (593.15, "K", "320 degC"),
        (5.1e6, "W", "5.1 MW"),
        (-1.1e6, "W", "-1.1 MW"),
        (0.0, "W", "0 kW"),
        (0.0, "Pa", "0 bar"),
        (99999.9, "W", "100 kW"),
        (27.0463, "mol/s", "27.05 mol/s"),
        (0.2, "1", "20 %"),
        (187.2e6, "J/kg", "52 kWh/kg"),
        (850.0, "W/m2", "850 W/m2"),
        (60000.0, "m2", "60000 m2"),
        (3.2, "J/(mol*K)", "3.2 J/(mol*K)"),
        (1.602176634e-19, "J", "1 eV"),  # elementary charge: SI, exact
        (math.nan, "W", "-"),
        (math.inf, "W", "-"),
    ],
)
def test_printed_quantities(value, unit, shown):
    assert format_quantity(value, unit) == shown


def test_a_difference_is_printed_in_kelvin():
    assert format_quantity(10.0, "K", difference=True) == "10 K"


def test_energy_per_volume_is_not_printed_as_a_pressure():
    assert format_quantity(50.72e6, "J/m3") == "50.72 MJ/m3"
    assert format_quantity(50.72e6, "Pa") == "507.2 bar"


def test_digits_are_significant_digits():
    assert format_quantity(27.0463, "mol/s", digits=3) == "27 mol/s"
    assert format_quantity(1234567.0, "mol/s", digits=3) == "1230000 mol/s"


@settings(max_examples=200)
@given(
    st.floats(min_value=-1e15, max_value=1e15).filter(is_written),
    st.sampled_from(["Pa", "W", "mol/s", "1", "m2", "J/kg", "s", "kg/s"]),
)
def test_what_is_printed_can_be_read_again(value, unit):
    shown = format_quantity(value, unit)
    assert shown.isascii()
    assert parse(shown, unit) == pytest.approx(value, rel=6e-4, abs=1e-300)


# --------------------------------------------------------------------------------- import cost
def test_common_quantities_never_import_pint():
    code = (
        "import sys; from chainflow.basis.quantities import parse, Temperature; "
        "parse('25 bar', 'Pa'); parse('52 kWh/kg', 'J/kg'); parse('100 Nm3/h', 'mol/s'); "
        "print([name for name in ('pint', 'numpy', 'pandas', 'cantera') if name in sys.modules])"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"


# --- band gaps -----------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("given", "says"),
    [
        ("2.1", "'2.1' has no unit: wanted a band gap in eV, as '1.1 eV'"),
        ("2.1 V", "'2.1 V' is a voltage, wanted a band gap in eV, as '1.1 eV'"),
        (
            "200 kJ/mol",
            "'200 kJ/mol' is an energy per amount, wanted a band gap in eV, as '1.1 eV'",
        ),
        ("5 eV", "'5 eV' is out of range: wanted at least 0.31 eV, at most 4.4 eV"),
        ("2.1eV", "'2.1eV' needs a space between number and unit: write '2.1 eV'"),
        (1e-18, "6.24151 eV is out of range: wanted at least 0.31 eV, at most 4.4 eV"),
        (True, "true or false is not a quantity"),
    ],
)
def test_what_is_said_of_a_wrong_band_gap(given, says):
    with pytest.raises(ValidationError) as caught:
        TypeAdapter(BandGap).validate_python(given)
    assert says in str(caught.value)


def test_a_band_gap_is_an_energy_in_joule():
    # 1 eV is 1.602176634e-19 J, exact (SI brochure, 9th edition)
    for text in ("1.1 eV", "1100 meV", "1.7623942974e-19 J"):
        found = TypeAdapter(BandGap).validate_python(text)
        assert found == pytest.approx(1.1 * 1.602176634e-19, rel=1e-12)

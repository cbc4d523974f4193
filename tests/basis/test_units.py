"""Units: the table against pint, compounds, look-ups in pint, and what is refused."""

import math
import time

import numpy as np
import pint
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from chainflow.basis.constants import NORMAL_MOLAR_VOLUME, STANDARD_MOLAR_VOLUME
from chainflow.basis.units import BASE_UNITS, SYMBOLS, UnitFault, convert, dimension_of, resolve

OURS_ALONE = {"Nm3", "kNm3", "Sm3", "kSm3", "kt", "Mt", "permille", "ppb", "GPU"}
PINT_NAMES = {"%": "percent", "permille": "permille"}


@pytest.fixture(scope="module")
def registry():
    return pint.UnitRegistry()


@pytest.mark.parametrize("symbol", sorted(set(SYMBOLS) - OURS_ALONE))
def test_every_symbol_of_the_table_agrees_with_pint(symbol, registry):
    # pint's default_en.txt carries the SI brochure and NIST SP 811 factors
    unit = resolve(symbol)
    name = PINT_NAMES.get(symbol, symbol)
    for number in (0.0, 1.0, 250.0):
        theirs = registry.Quantity(number, name).to_base_units()
        assert unit.to_si(number) == pytest.approx(theirs.magnitude, rel=1e-12, abs=1e-300)
    powers = zip(BASE_UNITS, unit.exponents, strict=True)
    product = "*".join(f"{base}**{power}" for base, power in powers if power) or "dimensionless"
    assert registry.parse_units(product).dimensionality == theirs.dimensionality


@pytest.mark.parametrize(
    ("symbol", "size", "si"),
    [
        ("Nm3", 1 / NORMAL_MOLAR_VOLUME, "mol"),  # DIN 1343: 0 degC, 1.01325 bar
        ("kNm3", 1e3 / NORMAL_MOLAR_VOLUME, "mol"),
        ("Sm3", 1 / STANDARD_MOLAR_VOLUME, "mol"),  # ISO 13443: 15 degC, 1.01325 bar
        ("kSm3", 1e3 / STANDARD_MOLAR_VOLUME, "mol"),
        ("kt", 1e6, "kg"),  # a thousand tonnes; pint reads a knot
        ("Mt", 1e9, "kg"),
        ("permille", 1e-3, "1"),
        ("ppb", 1e-9, "1"),
        # 1e-6 cm3 at 0 degC and 1 atm, per cm2, s and cmHg
        ("GPU", 1e-8 / (NORMAL_MOLAR_VOLUME * 1333.22387415), "mol/(m2*s*Pa)"),
    ],
)
def test_symbols_that_pint_reads_otherwise_or_not_at_all(symbol, size, si):
    assert resolve(symbol).to_si(1.0) == pytest.approx(size, rel=1e-14)
    assert dimension_of(symbol) == si


def test_the_list_of_symbols_pint_cannot_check_is_complete():
    assert set(SYMBOLS) >= OURS_ALONE


@pytest.mark.parametrize(
    ("text", "factor", "si"),
    [
        ("W/m2", 1.0, "W/m2"),
        ("kWh/kg", 3.6e6, "J/kg"),
        ("kWh/t", 3.6e3, "J/kg"),
        ("MJ/kg", 1e6, "J/kg"),
        ("kJ/mol", 1e3, "J/mol"),
        ("kmol/h", 1 / 3.6, "mol/s"),
        ("t/d", 1000 / 86400, "kg/s"),
        ("Nm3/h", 1 / NORMAL_MOLAR_VOLUME / 3600, "mol/s"),
        ("A/cm2", 1e4, "A/m2"),
        ("ohm*cm2", 1e-4, "ohm*m2"),
        ("ohm cm2", 1e-4, "ohm*m2"),
        ("ohm.cm2", 1e-4, "ohm*m2"),
        ("J/(mol K)", 1.0, "J/(mol*K)"),
        ("J/mol/K", 1.0, "J/(mol*K)"),
        ("kg m-3", 1.0, "kg*m-3"),
        ("m^2", 1.0, "m2"),
        ("m**2", 1.0, "m2"),
        ("cm3", 1e-6, "m3"),
        ("km2", 1e6, "m2"),
        ("1/h", 1 / 3600, "s-1"),
        ("mol/mol", 1.0, "1"),
        ("m²", 1.0, "m2"),
        ("µm", 1e-6, "m"),
    ],
)
def test_compound_units(text, factor, si):
    assert resolve(text).to_si(1.0) == pytest.approx(factor, rel=1e-14)
    assert dimension_of(text) == si


def test_volumetric_energy_of_hydrogen_agrees_with_its_mass_based_value():
    # 1 kg of hydrogen is 11.1187 Nm3: molar mass 2.01588 g/mol (NIST WebBook) and a molar volume
    # of 22.41396954e-3 m3/mol (CODATA 2018)
    per_kilogram = resolve("kWh/kg").to_si(4.2 * 11.1187)  # [J/kg]
    per_normal = resolve("kWh/Nm3").to_si(4.2)  # [J/mol]
    assert per_normal / 2.01588e-3 == pytest.approx(per_kilogram, rel=1e-5)


@pytest.mark.parametrize(
    ("text", "si_value"),
    [
        ("psi", 6894.757),  # NIST SP 811 (2008), appendix B: 6.894 757 E+03 Pa
        ("torr", 133.3224),  # NIST SP 811 (2008), appendix B: 1.333 224 E+02 Pa
        ("horsepower", 745.6999),  # NIST SP 811 (2008), appendix B: 7.456 999 E+02 W
        ("hours", 3600.0),
    ],
)
def test_units_outside_the_table_come_from_pint(text, si_value):
    assert text not in SYMBOLS
    assert resolve(text).to_si(1.0) == pytest.approx(si_value, rel=1e-6)


def test_exact_fractions_give_round_numbers():
    assert resolve("%").to_si(35.0) == 0.35
    assert resolve("degC").to_si(25.0) == 298.15
    assert resolve("kWh/kg").to_si(52.0) == 187.2e6
    assert resolve("kg/h").to_si(200.0) == 200 / 3600


def test_fahrenheit_meets_celsius_where_it_should():
    # -40 degF is -40 degC, 212 degF is 100 degC: definition of the scales
    assert resolve("degF").to_si(-40.0) == pytest.approx(233.15, abs=1e-10)
    assert resolve("degF").to_si(212.0) == pytest.approx(373.15, abs=1e-10)


def test_conversion_takes_arrays():
    pressures = np.array([1e5, 30e5])
    assert convert(pressures, "bar") == pytest.approx([1.0, 30.0])


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("barg", "gauge pressure.*absolute pressure in bar"),
        ("psig", "gauge pressure"),
        ("bar(g)", "gauge pressure"),
        ("bar g", "gauge pressure"),
        ("bar a", "absolute, write bar"),
        ("bara", "absolute, write bar"),
        ("kw", "did you mean 'kW'"),
        ("Kwh", "did you mean 'kWh'"),
        ("Ws", "not a known unit"),
        ("Pas", "not a known unit"),
        ("J/mol K", "two ways"),
        ("degC/W", "write K"),
        ("degC2", "write K"),
        ("dBm", "not a known unit"),
        ("deltaT", "not a known unit"),
        ("pi", "not a known unit"),
        ("/h", "is not a unit"),
        ("h/", "is not a unit"),
        ("(kg)", "is not a unit"),
        ("kg//h", "is not a unit"),
        ("9**9**9", "is not a unit"),
        ("m99", "is not a unit"),
        ("", "is not a unit"),
        ("x" * 41, "too long"),
        ("__import__", "not a known unit"),
        ("planck_constant9 planck_constant9", "too large or too small"),
    ],
)
def test_units_that_are_refused_with_a_hint(text, said):
    with pytest.raises(UnitFault, match=said):
        resolve(text)


def test_a_unit_text_never_hangs_pint():
    start = time.perf_counter()
    for text in ("9**9**9 Pa", "Pa**9**9**9", "(" * 30, "m^" * 15, "a" * 40, "Pa^-9*Pa^-9*Pa^-9"):
        try:
            resolve(text)
        except UnitFault as fault:
            assert str(fault)
    assert time.perf_counter() - start < 3.0


@settings(max_examples=300)
@given(st.text(alphabet="kmMGPaWhbrdegCNS32/*.^()-_ 1%", max_size=15) | st.text(max_size=45))
def test_any_text_is_a_unit_or_a_unit_fault(text):
    try:
        unit = resolve(text)
    except UnitFault as fault:
        assert str(fault).isprintable()
    else:
        assert math.isfinite(unit.multiplier)
        assert unit.multiplier > 0
        assert unit.divisor > 0

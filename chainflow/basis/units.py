"""What does a unit measure, and how many SI units is it?

A unit is written as people write it: ``bar``, ``W/m2``, ``kWh/kg``, ``ohm*cm2``, ``J/(mol K)``.
Its grammar is small and read here, factor by factor; nothing is evaluated. A built-in table knows
the usual symbols, any other *single* symbol is looked up in pint (imported only then), so pint
never sees an expression.

``Nm3`` (0 degC) and ``Sm3`` (15 degC, both 1.01325 bar, ideal gas) are amounts: they measure mol.
A year ``a`` has 365.25 d, ``kt`` is a thousand tonnes and not a knot. Factors are exact fractions
wherever the unit is one, so that ``35 %`` is 0.35 and not 0.35000000000000003.
"""

import re
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from types import MappingProxyType
from typing import TYPE_CHECKING, Any, Final, TypeVar

from chainflow.basis.constants import NORMAL_MOLAR_VOLUME, STANDARD_MOLAR_VOLUME
from chainflow.basis.names import shorten, suggest

if TYPE_CHECKING:
    import pint

Exponents = tuple[int, int, int, int, int, int, int]
"""Powers of kg, m, s, A, K, mol, rad, in this order."""

Number = TypeVar("Number", float, Any)

BASE_UNITS: Final = ("kg", "m", "s", "A", "K", "mol", "rad")
LONGEST_UNIT: Final = 40
"""Longest unit text that is read, in characters."""


class UnitFault(ValueError):
    """A unit that cannot be read; the text is one sentence without a place."""


@dataclass(frozen=True, slots=True)
class Unit:
    """A unit as written: SI value = number * multiplier / divisor + offset."""

    text: str
    exponents: Exponents
    multiplier: float
    divisor: float = 1.0
    offset: float = 0.0

    def to_si(self, number: Number) -> Number:
        """Convert a number (or array) in this unit to SI."""
        return number * self.multiplier / self.divisor + self.offset

    def from_si(self, value: Number) -> Number:
        """Convert an SI value (or array) to a number in this unit."""
        return (value - self.offset) * self.divisor / self.multiplier


@dataclass(frozen=True, slots=True)
class Symbol:
    """One symbol of the table: what it measures and its exact size in SI units."""

    exponents: Exponents
    factor: Fraction
    offset: Fraction = Fraction(0)


_NONE: Exponents = (0, 0, 0, 0, 0, 0, 0)
_PREFIXES: Final = MappingProxyType(
    {
        "": Fraction(1),
        "n": Fraction(1, 10**9),
        "u": Fraction(1, 10**6),
        "m": Fraction(1, 10**3),
        "c": Fraction(1, 10**2),
        "d": Fraction(1, 10),
        "h": Fraction(10**2),
        "k": Fraction(10**3),
        "M": Fraction(10**6),
        "G": Fraction(10**9),
        "T": Fraction(10**12),
    }
)
_ICE = Fraction("273.15")
_GPU = 1 / (10**8 * Fraction("1333.22387415") * Fraction(NORMAL_MOLAR_VOLUME))

# symbol, prefixes it is used with, powers of (kg, m, s, A, K, mol, rad), size, zero point [K]
_ROWS: Final[tuple[tuple[str, str, Exponents, Fraction, Fraction], ...]] = tuple(
    (symbol, prefixes, exponents, Fraction(size), Fraction(offset))
    for symbol, prefixes, exponents, size, offset in (
        ("g", "umkM", (1, 0, 0, 0, 0, 0, 0), "0.001", 0),
        ("t", "kM", (1, 0, 0, 0, 0, 0, 0), 1000, 0),
        ("m", "numcdk", (0, 1, 0, 0, 0, 0, 0), 1, 0),
        ("ha", "", (0, 2, 0, 0, 0, 0, 0), 10**4, 0),
        ("l", "m", (0, 3, 0, 0, 0, 0, 0), "0.001", 0),
        ("L", "m", (0, 3, 0, 0, 0, 0, 0), "0.001", 0),
        ("s", "num", (0, 0, 1, 0, 0, 0, 0), 1, 0),
        ("min", "", (0, 0, 1, 0, 0, 0, 0), 60, 0),
        ("h", "", (0, 0, 1, 0, 0, 0, 0), 3600, 0),
        ("d", "", (0, 0, 1, 0, 0, 0, 0), 86400, 0),
        ("a", "", (0, 0, 1, 0, 0, 0, 0), 31557600, 0),
        ("Hz", "kM", (0, 0, -1, 0, 0, 0, 0), 1, 0),
        ("A", "mk", (0, 0, 0, 1, 0, 0, 0), 1, 0),
        ("Ah", "k", (0, 0, 1, 1, 0, 0, 0), 3600, 0),
        ("K", "m", (0, 0, 0, 0, 1, 0, 0), 1, 0),
        ("degC", "", (0, 0, 0, 0, 1, 0, 0), 1, _ICE),
        ("degF", "", (0, 0, 0, 0, 1, 0, 0), Fraction(5, 9), _ICE - 32 * Fraction(5, 9)),
        ("mol", "umkM", (0, 0, 0, 0, 0, 1, 0), 1, 0),
        ("Nm3", "k", (0, 0, 0, 0, 0, 1, 0), 1 / NORMAL_MOLAR_VOLUME, 0),
        ("Sm3", "k", (0, 0, 0, 0, 0, 1, 0), 1 / STANDARD_MOLAR_VOLUME, 0),
        ("rad", "m", (0, 0, 0, 0, 0, 0, 1), 1, 0),
        ("deg", "", (0, 0, 0, 0, 0, 0, 1), 0.017453292519943295, 0),  # pi / 180
        ("N", "mkM", (1, 1, -2, 0, 0, 0, 0), 1, 0),
        ("Pa", "mhkMG", (1, -1, -2, 0, 0, 0, 0), 1, 0),
        ("bar", "umk", (1, -1, -2, 0, 0, 0, 0), 10**5, 0),
        ("atm", "", (1, -1, -2, 0, 0, 0, 0), 101325, 0),
        ("J", "mkMGT", (1, 2, -2, 0, 0, 0, 0), 1, 0),
        ("Wh", "mkMGT", (1, 2, -2, 0, 0, 0, 0), 3600, 0),
        ("eV", "m", (1, 2, -2, 0, 0, 0, 0), "1.602176634e-19", 0),  # exact, SI definition
        ("W", "mkMGT", (1, 2, -3, 0, 0, 0, 0), 1, 0),
        ("V", "umk", (1, 2, -3, -1, 0, 0, 0), 1, 0),
        ("ohm", "umkM", (1, 2, -3, -2, 0, 0, 0), 1, 0),
        ("S", "um", (-1, -2, 3, 2, 0, 0, 0), 1, 0),
        ("%", "", _NONE, "0.01", 0),
        # permeance: 1e-6 cm3(0 degC, 1 atm) / (cm2 s cmHg); 1 cmHg = 1333.22387415 Pa
        ("GPU", "", (-1, -1, 1, 0, 0, 1, 0), _GPU, 0),
        ("permille", "", _NONE, "0.001", 0),
        ("ppm", "", _NONE, Fraction(1, 10**6), 0),
        ("ppb", "", _NONE, Fraction(1, 10**9), 0),
    )
)

SYMBOLS: Final = MappingProxyType(
    {
        prefix + symbol: Symbol(exponents, size * _PREFIXES[prefix], offset)
        for symbol, prefixes, exponents, size, offset in _ROWS
        for prefix in ("", *prefixes)
    }
)
"""Every symbol that is known without pint, prefixes included."""

# SI unit, what it is called, and the unit a reader would write
_NAMED: Final = (
    ("Pa", "a pressure", "bar"),
    ("K", "a temperature", "degC"),
    ("W", "a power", "kW"),
    ("J", "an energy", "kWh"),
    ("1", "a share", "%"),
    ("m", "a length", "m"),
    ("m2", "an area", "m2"),
    ("m3", "a volume", "m3"),
    ("s", "a time", "h"),
    ("kg", "a mass", "kg"),
    ("mol", "an amount", "mol"),
    ("A", "a current", "A"),
    ("V", "a voltage", "V"),
    ("rad", "an angle", "deg"),
    ("W/m2", "a power per area", "W/m2"),
    ("J/kg", "an energy per mass", "kWh/kg"),
    ("J/mol", "an energy per amount", "kJ/mol"),
    ("mol/s", "a molar flow", "mol/s"),
    ("kg/s", "a mass flow", "kg/h"),
    ("m3/s", "a volume flow", "m3/h"),
    ("A/m2", "a current density", "A/cm2"),
    ("mol/(m2*s*Pa)", "a permeance", "GPU"),
    ("ohm*m2", "an area resistance", "ohm*cm2"),
    ("kg/J", "a mass per energy", "kg/kWh"),
    ("m3/J", "a volume per energy", "L/kWh"),
    ("s-1", "a rate", "%/d"),
    ("m/s", "a speed", "m/s"),
    ("ohm", "a resistance", "ohm"),
    ("W/(m2*K)", "a heat transfer coefficient", "W/(m2*K)"),
    ("J/(mol*K)", "a molar heat capacity", "J/(mol*K)"),
)

_PLAIN_SIGNS = str.maketrans({"²": "2", "³": "3", "·": "*", "µ": "u", "μ": "u", "°": "deg"})
_FACTOR = re.compile(r"(k?[NS]m3|%|[A-Za-z_]+)(?:(?:\^|\*\*)?(-?[1-9]))?")
_PRESSURE = r"(?P<unit>bar|mbar|Pa|hPa|kPa|MPa|psi)"
_GAUGE = re.compile(_PRESSURE + r"(?:g|_g|\s*\([gG]\)|\s+[gG]|\s+gauge)")
_ABSOLUTE = re.compile(_PRESSURE + r"(?:a|_a|\s*\([aA]\)|\s+[aA]|\s+abs\.?)")


@lru_cache(maxsize=4096)
def resolve(text: str) -> Unit:
    """Return what a unit text stands for.

    Raises
    ------
    UnitFault
        If the text is no unit; with a hint for gauge pressures and near misses.
    """
    if len(text) > LONGEST_UNIT:
        raise UnitFault(f"{shorten(text)} is too long for a unit")
    _refuse_gauge(text)
    plain = text.translate(_PLAIN_SIGNS)
    if plain == "1":
        return Unit(text, _NONE, 1.0)
    if plain in SYMBOLS:
        return _as_unit(text, SYMBOLS[plain])
    return _as_unit(text, _compound(plain, text))


def dimension_of(text: str) -> str:
    """Return the SI unit of what a unit measures: "Pa" for "bar", "1" for a share."""
    return si_unit(resolve(text).exponents)


def convert(value: Number, unit: str) -> Number:
    """Convert an SI value (or array) to a number in `unit`, as tables need it."""
    return resolve(unit).from_si(value)


def si_unit(exponents: Exponents) -> str:
    """Return the SI unit with these powers of the base units, by its usual symbol if it has one."""
    return _names().get(exponents, (_spelled(exponents),))[0]


def noun(exponents: Exponents) -> str:
    """Say what is measured: "a pressure", or "something in kg*m-3" where there is no word."""
    named = _names().get(exponents)
    return named[1] if named else f"something in {_spelled(exponents)}"


def is_named(exponents: Exponents) -> bool:
    """Return whether there is a word for what is measured."""
    return exponents in _names()


def usual_unit(exponents: Exponents) -> str:
    """Return the unit a reader would write for this: "bar" for a pressure."""
    named = _names().get(exponents)
    return named[2] if named else _spelled(exponents)


@lru_cache(maxsize=1)
def _names() -> dict[Exponents, tuple[str, str, str]]:
    return {resolve(row[0]).exponents: row for row in _NAMED}


def _spelled(exponents: Exponents) -> str:
    factors = zip(BASE_UNITS, exponents, strict=True)
    return "*".join(f"{base}{'' if power == 1 else power}" for base, power in factors if power)


def _refuse_gauge(text: str) -> None:
    if gauge := _GAUGE.fullmatch(text):
        raise UnitFault(
            f"{shorten(text)} is a gauge pressure: write the absolute pressure in "
            f"{gauge['unit']}, that is, add 1.013 bar"
        )
    if absolute := _ABSOLUTE.fullmatch(text):
        raise UnitFault(
            f"{shorten(text)} is not needed: every pressure is absolute, write {absolute['unit']}"
        )


def _as_unit(text: str, symbol: Symbol) -> Unit:
    """Turn an exact factor into floats: numerator and denominator apart where both are exact."""
    factor = symbol.factor
    offset = float(symbol.offset)
    if max(factor.numerator, factor.denominator) < 2**53:
        return Unit(
            text, symbol.exponents, float(factor.numerator), float(factor.denominator), offset
        )
    try:
        multiplier = float(factor)
    except OverflowError:
        multiplier = 0.0
    if multiplier == 0.0:
        raise UnitFault(f"{shorten(text)} is too large or too small for a unit")
    return Unit(text, symbol.exponents, multiplier, 1.0, offset)


def _compound(plain: str, text: str) -> Symbol:
    """Read ``product / factor / (product)``: exact size and powers of the base units."""
    numerator, *divisors = _split_at_slashes(plain, text)
    parts = [] if numerator == "1" and divisors else _factors(numerator, 1, text)
    for divisor in divisors:
        bracketed = divisor.startswith("(") and divisor.endswith(")")
        found = _factors(divisor[1:-1] if bracketed else divisor, -1, text)
        if len(found) > 1 and not bracketed:
            raise UnitFault(
                f"{shorten(text)} can be read in two ways: put what is divided by in brackets, "
                "as in J/(mol*K)"
            )
        parts += found
    return _multiplied(parts, text)


def _split_at_slashes(plain: str, text: str) -> list[str]:
    pieces = [piece.strip() for piece in plain.split("/")]
    if "" in pieces:
        raise UnitFault(f"{shorten(text)} is not a unit")
    return pieces


def _factors(product: str, sign: int, text: str) -> list[tuple[str, int]]:
    """Split ``ohm*cm2`` (also with spaces or dots) into symbols and their powers."""
    found = []
    for piece in re.split(r"(?<!\*)\*(?!\*)|[ .]+", product.strip()):
        match = _FACTOR.fullmatch(piece)
        if match is None:
            raise UnitFault(f"{shorten(text)} is not a unit")
        found.append((match[1], sign * int(match[2] or 1)))
    return found


def _multiplied(parts: list[tuple[str, int]], text: str) -> Symbol:
    size = Fraction(1)
    exponents = [0] * len(BASE_UNITS)
    offset = Fraction(0)
    for name, power in parts:
        symbol = SYMBOLS[name] if name in SYMBOLS else _from_pint(name)
        size *= symbol.factor**power
        exponents = [
            total + power * one for total, one in zip(exponents, symbol.exponents, strict=True)
        ]
        if symbol.offset and (len(parts) > 1 or power != 1):
            raise UnitFault(f"{shorten(text)}: {name} cannot stand beside other units, write K")
        offset = symbol.offset
    kg, m, s, ampere, kelvin, mol, rad = exponents
    return Symbol((kg, m, s, ampere, kelvin, mol, rad), size, offset)


# ---------------------------------------------------------------------------- pint, if need be
_PINT_BASES: Final = MappingProxyType(
    {
        "[mass]": 0,
        "[length]": 1,
        "[time]": 2,
        "[current]": 3,
        "[temperature]": 4,
        "[substance]": 5,
    }
)


@lru_cache(maxsize=1)
def _registry() -> "pint.UnitRegistry":
    import pint

    return pint.UnitRegistry()


@lru_cache(maxsize=1024)
def _from_pint(name: str) -> Symbol:
    """Look one symbol (letters and underscores only) up in pint."""
    registry = _registry()
    unknown = UnitFault(f"{shorten(name)} is not a known unit{suggest(name, SYMBOLS)}")
    readings = registry.parse_unit_name(name)
    if not readings or _is_symbol_with_s(registry, name):
        raise unknown
    prefix, unit, _ = readings[0]
    exponents = _pint_exponents(registry, prefix + unit)
    if exponents is None or exponents == _NONE:
        raise unknown
    size, offset = _pint_line(registry, prefix + unit)
    if size is None:
        raise unknown
    return Symbol(exponents, Fraction(size), Fraction(offset))


def _is_symbol_with_s(registry: "pint.UnitRegistry", name: str) -> bool:
    """Find plurals of symbols: pint reads Pas as pascals, the writer meant pascal seconds.

    Plurals of whole words (hours, bars) are words and stay.
    """
    singular = name.removesuffix("s")
    if singular == name:
        return False
    alone = registry.parse_unit_name(singular)
    if not alone or alone[0] != registry.parse_unit_name(name)[0]:
        return False
    return not singular.endswith(alone[0][1])


def _pint_exponents(registry: "pint.UnitRegistry", unit: str) -> Exponents | None:
    """Return the powers of our base units, or None if the unit has others or broken ones."""
    powers = [0] * len(BASE_UNITS)
    dimensionality: dict[str, Any] = dict(registry.get_dimensionality(unit))
    for base, power in dimensionality.items():
        if base not in _PINT_BASES or power != int(power):
            return None
        powers[_PINT_BASES[base]] = int(power)
    kg, m, s, ampere, kelvin, mol, rad = powers
    return (kg, m, s, ampere, kelvin, mol, rad)


def _pint_line(registry: "pint.UnitRegistry", unit: str) -> tuple[float | None, float]:
    """Return size and zero point in SI, or None as size if the unit is no straight line."""
    zero, one, two = (
        float(registry.Quantity(number, unit).to_base_units().magnitude)
        for number in (0.0, 1.0, 2.0)
    )
    size = one - zero
    if abs(two - zero - 2 * size) > 1e-9 * abs(size):
        return None, 0.0
    return size, zero

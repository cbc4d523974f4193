"""How is a text such as ``25 bar`` turned into a checked SI number?

The grammar is one line: *number, space, unit*; a percent sign may follow the number directly. The
number is a plain decimal (``12``, ``1.5e3``): no comma, no separators, nothing is evaluated. What
does not fit is answered with one sentence that says what to write instead. Pressures are absolute.
"""

import math
import re
from dataclasses import dataclass
from typing import Final

from chainflow.basis.names import shorten, suggest
from chainflow.basis.units import SYMBOLS, Unit, UnitFault, is_named, noun, resolve, usual_unit

LONGEST_QUANTITY: Final = 100
SMALLEST: Final = 1e-100  # magnitude; products of smaller shares lose digits to underflow
"""Longest text that is read as a quantity, in characters."""

NUMBER_PATTERN: Final = r"[+-]?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+-]?[0-9]{1,3})?"
_NUMBER = re.compile(NUMBER_PATTERN)
_NOT_FINITE = re.compile(r"[+-]?\.?(nan|inf|infinity)\b", re.IGNORECASE)


class QuantityFault(ValueError):
    """A text that is no quantity of the wanted kind; one sentence, without a place."""


@dataclass(frozen=True, slots=True)
class Limits:
    """Range of an SI value; None leaves a side open."""

    gt: float | None = None
    ge: float | None = None
    lt: float | None = None
    le: float | None = None

    def broken_by(self, value: float) -> tuple[str, float] | None:
        """Return words and limit of the side that a value breaks, None if it is inside."""
        if self.gt is not None and not value > self.gt:
            return "above", self.gt
        if self.ge is not None and not value >= self.ge:
            return "at least", self.ge
        if self.lt is not None and not value < self.lt:
            return "below", self.lt
        if self.le is not None and not value <= self.le:
            return "at most", self.le
        return None

    def words(self, unit: Unit) -> str:
        """Spell the range in a unit: "above 0 bar, at most 100 bar"; empty if it is open."""
        sides = (
            ("above", self.gt),
            ("at least", self.ge),
            ("below", self.lt),
            ("at most", self.le),
        )
        return ", ".join(
            f"{word} {plain_number(unit.from_si(limit), unit.text)}"
            for word, limit in sides
            if limit is not None
        )


def plain_number(number: float, unit: str) -> str:
    """Join a number and its unit, without the "1" of a share."""
    shown = f"{number:.6g}"
    return shown if unit == "1" else f"{shown} {unit}"


OPEN: Final = Limits()
"""No limits at all."""


def parse(
    text: str,
    dimension: str,
    *,
    gt: float | None = None,
    ge: float | None = None,
    lt: float | None = None,
    le: float | None = None,
    difference: bool = False,
) -> float:
    """Return the SI value of a text such as ``25 bar``.

    Parameters
    ----------
    text : str
        Number, space, unit; a share may also be a bare number.
    dimension : str
        Any unit of what is wanted: "Pa" and "bar" both want a pressure.
    gt, ge, lt, le : float, optional
        Range of the SI value.
    difference : bool
        A temperature difference: K only, no zero point.

    Raises
    ------
    QuantityFault
        With one sentence: what was found, what was wanted, what to write.
    """
    wanted = resolve(dimension)
    number, unit = read_number(text, wanted)
    if unit.exponents != wanted.exponents:
        raise QuantityFault(_mismatch(text, unit, wanted))
    if difference and unit.offset:
        raise QuantityFault(
            f"{shorten(text)} is a temperature, wanted a temperature difference: write it in K"
        )
    value = finite(unit.to_si(number), text)
    check_range(value, Limits(gt, ge, lt, le), unit, shorten(text))
    return value


def read_number(text: str, wanted: Unit, words: str = "") -> tuple[float, Unit]:
    """Split a text into number and unit; the unit of a bare share is "1"."""
    number, unit_text = _split(text, wanted, words or wanted_words(wanted))
    value = finite(float(number), text)
    try:
        return value, resolve(unit_text or "1")
    except UnitFault as fault:
        raise QuantityFault(f"{shorten(text)}: {fault}") from None


def _split(text: str, wanted: Unit, words: str) -> tuple[str, str]:
    """Split at the space, or say what is wrong with the number."""
    stripped = text.strip()
    if len(stripped) > LONGEST_QUANTITY:
        raise QuantityFault(f"{shorten(stripped)} is too long for a number with a unit")
    match = _NUMBER.match(stripped)
    if match is None:
        raise QuantityFault(_no_number(stripped, words))
    number, rest = match[0], stripped[match.end() :]
    unit_text = rest.strip()
    if rest and not rest.startswith((" ", "%")):
        raise QuantityFault(_badly_joined(stripped, number, rest))
    if re.match(r"[0-9.,]", unit_text) and not unit_text.startswith("1/"):
        raise QuantityFault(
            f"{shorten(stripped)} has a space inside the number: write it without separators"
        )
    if not unit_text and any(wanted.exponents):
        raise QuantityFault(
            f"{shorten(stripped)} has no unit: wanted {words}, "
            f"for instance '{number} {usual_unit(wanted.exponents)}'"
        )
    return number, unit_text


def wanted_words(wanted: Unit) -> str:
    """Say what is wanted: "a pressure in bar or another such unit"."""
    if not any(wanted.exponents):
        return "a share, as '21 %' or 0.21"
    if not is_named(wanted.exponents):
        return f"a value in {wanted.text} or another such unit"
    usual = usual_unit(wanted.exponents)
    name = noun(wanted.exponents)
    return name if usual in name else f"{name} in {usual} or another such unit"


def _no_number(stripped: str, words: str) -> str:
    found = shorten(stripped) if stripped else "nothing"
    if _NOT_FINITE.match(stripped):
        return f"{found} is not a finite number: wanted {words}"
    return f"{found} does not start with a number: wanted {words}"


def _badly_joined(stripped: str, number: str, rest: str) -> str:
    """Explain what follows a number without a space."""
    found = shorten(stripped)
    if comma := re.match(r",([0-9]+)", rest):
        decimal = f"{number}.{comma[1]}"
        thousand = f" (or {number}{comma[1]} if thousands are meant)" if len(comma[1]) == 3 else ""
        return f"{found} has a decimal comma: write {decimal}{thousand}"
    if rest[0] in "_'":
        return f"{found} has a separator inside the number: write it without"
    if rest[0].isspace() or (rest[0].isalpha() and _is_unit(rest)):
        return f"{found} needs a space between number and unit: write '{number} {_tail(rest)}'"
    return f"{found} is not a plain decimal number with a unit"


def _is_unit(text: str) -> bool:
    try:
        resolve(text)
    except UnitFault as fault:
        return "gauge" in str(fault)
    return True


def _tail(rest: str) -> str:
    return shorten(rest.strip())[1:-1]


def finite(value: float, text: str) -> float:
    """Hand a number through that can be reckoned with; raise QuantityFault for any other."""
    if not math.isfinite(value):
        raise QuantityFault(f"{shorten(text)} is too large to be a number")
    if 0.0 < abs(value) < SMALLEST:
        raise QuantityFault(f"{shorten(text)} is too close to zero to mean anything: write 0")
    return value


def _mismatch(text: str, unit: Unit, wanted: Unit) -> str:
    found = f"{shorten(text)} is {noun(unit.exponents)}"
    if unit.text.endswith("/m3") and unit.exponents == resolve("Pa").exponents:
        found = f"{shorten(text)} is an energy per volume"
    if not any(unit.exponents):
        found = f"{shorten(text)} is a plain number"
    return f"{found}, wanted {wanted_words(wanted)}{_mismatch_hint(unit, wanted)}"


def _mismatch_hint(unit: Unit, wanted: Unit) -> str:
    if wanted.exponents == resolve("K").exponents and unit.text in ("C", "F"):
        return f" (did you mean 'deg{unit.text}'?)"
    if not unit.text.isalpha():
        return ""
    alike = (name for name, symbol in SYMBOLS.items() if symbol.exponents == wanted.exponents)
    return suggest(unit.text, alike)


def check_range(value: float, limits: Limits, unit: Unit, found: str) -> None:
    """Raise QuantityFault, in the unit of the text, if an SI value is out of range."""
    broken = limits.broken_by(value)
    if broken is None:
        return
    hint = ""
    if unit.text == "1" and limits.le == 1.0 and 1.0 < value <= 100.0:
        hint = f"; for {value:g} % write '{value:g} %'"
    raise QuantityFault(f"{found} is out of range: wanted {limits.words(unit)}{hint}")

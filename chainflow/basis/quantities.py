"""Which kinds of quantity can a setting have?

Text in the file is ``number, space, unit`` (see ``chainflow.basis.parsing``); values are SI floats
inside and pressures are absolute. This module is the front for everything about quantities.

Settings of equipment are declared with the types at the end of this module, or with
``quantity("W/m2", ge=0)``. Such a field takes text in the grammar or, from Python, a number that
is already SI. Every complaint is a pydantic validation error, so all of them are collected.
"""

import math
import re
from dataclasses import dataclass
from numbers import Real
from typing import Annotated, Any, Literal, NamedTuple

from pydantic_core import PydanticCustomError, core_schema

from chainflow.basis.constants import ELEMENTARY_CHARGE
from chainflow.basis.formatting import format_number, format_quantity
from chainflow.basis.names import shorten
from chainflow.basis.parsing import (
    LONGEST_QUANTITY,
    NUMBER_PATTERN,
    OPEN,
    Limits,
    QuantityFault,
    check_range,
    finite,
    parse,
    plain_number,
    read_number,
    wanted_words,
)
from chainflow.basis.units import (
    Unit,
    UnitFault,
    convert,
    dimension_of,
    is_named,
    noun,
    resolve,
    usual_unit,
)

__all__ = [
    "Amount",
    "Area",
    "BandGap",
    "BandGapType",
    "BasedShare",
    "CurrentDensity",
    "Energy",
    "Flow",
    "Fraction",
    "HeatingValueShare",
    "Irradiance",
    "Length",
    "Limits",
    "MolarEnergy",
    "OpenFraction",
    "Power",
    "Pressure",
    "PressureDrop",
    "QuantityFault",
    "QuantityType",
    "SpecificEnergy",
    "Temperature",
    "TemperatureDifference",
    "Time",
    "Voltage",
    "Volume",
    "convert",
    "dimension_of",
    "format_quantity",
    "measured",
    "parse",
    "quantity",
]


@dataclass(frozen=True, slots=True)
class QuantityType:
    """The marker behind every ready type: unit, range and how text becomes a value.

    Found in ``model.model_fields[name].metadata``, for printing what a setting takes.
    """

    unit: str
    limits: Limits = OPEN
    difference: bool = False

    def read(self, given: object) -> object:
        """Turn text in the grammar, or an SI number, into a checked SI value."""
        if isinstance(given, str):
            return parse(
                given,
                self.unit,
                gt=self.limits.gt,
                ge=self.limits.ge,
                lt=self.limits.lt,
                le=self.limits.le,
                difference=self.difference,
            )
        return self.checked(given)

    def checked(self, given: object) -> float:
        """Check a number from Python, already in SI."""
        value = self.unlimited(given)
        unit = resolve(self.unit)
        check_range(value, self.limits, unit, plain_number(value, self.unit))
        return value

    def unlimited(self, given: object) -> float:
        """Check that something from Python is a number, whatever its size."""
        if isinstance(given, bool) or not isinstance(given, Real):
            raise QuantityFault(f"{_shown(given)} is not a quantity: wanted {self.means()}")
        value = float(given)
        if not math.isfinite(value):
            raise QuantityFault(f"{value} is not a finite number: wanted {self.means()}")
        return value

    @property
    def is_factor(self) -> bool:
        """Whether it is a plain number that may be above one or below zero: no per cent."""
        above_one = self.limits.lt is None and (self.limits.le is None or self.limits.le > 1.0)
        below_zero = self.limits.ge is not None and self.limits.ge < 0.0
        return (above_one or below_zero) and not any(resolve(self.unit).exponents)

    def means(self) -> str:
        """Say what is wanted, with the range: "a pressure in bar or another such unit"."""
        unit = resolve(self.unit)
        if self.difference:
            return "a temperature difference in K"
        return "a number" if self.is_factor else wanted_words(unit)

    def shown(self, value: float) -> str:
        """Return a value [SI] as text for people: "30 bar", "22", "0.016 m2/A"."""
        unit = resolve(self.unit)
        if self.is_factor:
            return format_number(value)
        if not any(unit.exponents) or is_named(unit.exponents):
            return format_quantity(value, self.unit, difference=self.difference)
        return f"{format_number(value)} {self.unit}"

    def described(self) -> str:
        """Return one line for help and schema: what is wanted and its range."""
        limits = self.limits.words(self._usual())
        return f"{self.means()}; {limits}" if limits else self.means()

    def _usual(self) -> Unit:
        """The unit in which a reader would write the range; kelvin where it starts at zero."""
        own = resolve(self.unit)
        absolute = self.unit == "K" and (self.difference or 0.0 in (self.limits.gt, self.limits.ge))
        if self.is_factor or absolute or not is_named(own.exponents):
            return own
        return resolve(usual_unit(own.exponents))

    def pattern(self) -> str:
        """Return the regular expression an editor can check; a knob may stand instead."""
        spaced = r" +\S.*"
        tail = spaced if any(resolve(self.unit).exponents) else rf"(?: *%|{spaced})?"
        return rf"^(?:\$[a-z][a-z0-9_-]*|{NUMBER_PATTERN}{tail})$"

    def _validated(self, given: object) -> object:
        try:
            return self.read(given)
        except (QuantityFault, UnitFault) as fault:
            raise PydanticCustomError("quantity", "{text}", {"text": str(fault)}) from None

    def __get_pydantic_core_schema__(self, source: object, handler: object) -> Any:
        """Hand pydantic one plain function: text or number in, value out."""
        return core_schema.no_info_plain_validator_function(self._validated)

    def __get_pydantic_json_schema__(self, schema: object, handler: object) -> dict[str, Any]:
        """Describe the text form, with the SI unit, for editors."""
        is_share = not any(resolve(self.unit).exponents)
        return {
            "type": ["string", "number"] if is_share else "string",
            "pattern": self.pattern(),
            "description": self.described(),
            "x-unit": self.unit,
        }


def measured(
    unit: str,
    *,
    gt: float | None = None,
    ge: float | None = None,
    lt: float | None = None,
    le: float | None = None,
    difference: bool = False,
) -> QuantityType:
    """Return the marker for ``Annotated[float, measured("K", gt=0)]``; limits are SI values.

    Written out like this, a type checker sees the float behind it.
    """
    return QuantityType(unit, Limits(gt, ge, lt, le), difference)


def quantity(
    unit: str,
    *,
    gt: float | None = None,
    ge: float | None = None,
    lt: float | None = None,
    le: float | None = None,
    difference: bool = False,
) -> Any:
    """Return a field type, ``Annotated[float, measured(...)]``, for models made at run time.

    Text with a unit in the file, SI float inside; limits are SI values.
    """
    return Annotated[float, measured(unit, gt=gt, ge=ge, lt=lt, le=le, difference=difference)]


def _shown(given: object) -> str:
    if given is None:
        return "nothing"
    kind = type(given).__name__
    words = {"dict": "a map", "bool": "true or false"}
    return shorten(given) if isinstance(given, str) else words.get(kind, f"a {kind}")


class Amount(NamedTuple):
    """A flow of material: `value` in mol/s or, if ``per == "kg"``, in kg/s."""

    value: float
    per: Literal["mol", "kg"] = "mol"

    @property
    def unit(self) -> str:
        """The SI unit of the value."""
        return f"{self.per}/s"


@dataclass(frozen=True, slots=True)
class FlowType(QuantityType):
    """A flow by amount, normal volume (both become mol/s) or mass (stays kg/s).

    A mass flow can be turned into mol/s only where the composition is known.
    """

    def read(self, given: object) -> object:
        """Turn text, an Amount, or a number [mol/s] into a checked Amount."""
        if isinstance(given, Amount):
            return Amount(self.checked(given.value), given.per)
        if not isinstance(given, str):
            return Amount(self.checked(given), "mol")
        number, unit = read_number(given, resolve("mol/s"), self.means())
        value = finite(unit.to_si(number), given)
        check_range(value, self.limits, unit, shorten(given))
        return Amount(value, self._per(given, unit))

    def means(self) -> str:
        """Say what is wanted."""
        return "a flow in mol/s, kg/h, Nm3/h or another such unit"

    def _per(self, text: str, unit: Unit) -> Literal["mol", "kg"]:
        if unit.exponents == resolve("mol/s").exponents:
            return "mol"
        if unit.exponents == resolve("kg/s").exponents:
            return "kg"
        hint = ""
        if unit.exponents == resolve("m3/s").exponents:
            hint = ": write Nm3 (at 0 degC) or Sm3 (at 15 degC), both at 1.01325 bar"
        raise QuantityFault(
            f"{shorten(text)} is {noun(unit.exponents)}, wanted {self.means()}{hint}"
        )


@dataclass(frozen=True, slots=True)
class BandGapType(QuantityType):
    """A band gap: an energy of one electron, in J inside and in eV for people."""

    def means(self) -> str:
        """Say what is wanted."""
        return "a band gap in eV, as '1.1 eV'"

    def read(self, given: object) -> object:
        """Turn text in the grammar, or an SI number, into a checked SI value."""
        if not isinstance(given, str):
            value = self.unlimited(given)
            check_range(value, self.limits, resolve("eV"), f"{resolve('eV').from_si(value):.6g} eV")
            return value
        if re.fullmatch(NUMBER_PATTERN, given.strip()):
            raise QuantityFault(f"{shorten(given)} has no unit: wanted {self.means()}")
        number, unit = read_number(given, resolve("eV"), self.means())
        if unit.exponents != resolve("eV").exponents:
            raise QuantityFault(
                f"{shorten(given)} is {noun(unit.exponents)}, wanted {self.means()}"
            )
        value = finite(unit.to_si(number), given)
        check_range(value, self.limits, resolve("eV"), shorten(given))
        return value

    def shown(self, value: float) -> str:
        """Return a value [J] as text for people: "1.1 eV"."""
        return f"{format_number(resolve('eV').from_si(value))} eV"

    def described(self) -> str:
        """Return one line for help and schema."""
        return f"{self.means()}; {self.limits.words(resolve('eV'))}"


class BasedShare(NamedTuple):
    """A share of a heating value: 0 to 1, and which heating value if the text said so."""

    value: float
    basis: Literal["LHV", "HHV"] | None = None


_BASED = re.compile(r"(?P<share>.*?)(?:\s+(?P<basis>LHV|HHV))?", re.DOTALL)


@dataclass(frozen=True, slots=True)
class BasedShareType(QuantityType):
    """A share of the lower or higher heating value: ``42 % LHV``."""

    def read(self, given: object) -> object:
        """Turn text, a BasedShare, or a number into a checked BasedShare."""
        if isinstance(given, BasedShare):
            return BasedShare(self.checked(given.value), given.basis)
        if not isinstance(given, str):
            return BasedShare(self.checked(given))
        if len(given) > LONGEST_QUANTITY:
            raise QuantityFault(f"{shorten(given)} is too long for a share")
        match = _BASED.fullmatch(given.strip())
        share = match["share"] if match else given
        basis = match["basis"] if match else None
        value = parse(share, "1", gt=self.limits.gt, ge=self.limits.ge, le=self.limits.le)
        return BasedShare(value, "LHV" if basis == "LHV" else "HHV" if basis else None)

    def means(self) -> str:
        """Say what is wanted."""
        return "a share of a heating value, as '42 % LHV'"

    def pattern(self) -> str:
        """Return the regular expression an editor can check; a knob may stand instead."""
        return rf"^(?:\$[a-z][a-z0-9_-]*|{NUMBER_PATTERN}(?: *%| +\S+)?(?: +[LH]HV)?)$"


Temperature = Annotated[float, measured("K", gt=0)]
TemperatureDifference = Annotated[float, measured("K", difference=True)]
Pressure = Annotated[float, measured("Pa", gt=0)]
PressureDrop = Annotated[float, measured("Pa", ge=0)]
Power = Annotated[float, measured("W")]
Energy = Annotated[float, measured("J")]
Fraction = Annotated[float, measured("1", ge=0, le=1)]
OpenFraction = Annotated[float, measured("1", gt=0, le=1)]
Area = Annotated[float, measured("m2", gt=0)]
Irradiance = Annotated[float, measured("W/m2", ge=0)]
SpecificEnergy = Annotated[float, measured("J/kg")]
MolarEnergy = Annotated[float, measured("J/mol")]
Voltage = Annotated[float, measured("V")]
CurrentDensity = Annotated[float, measured("A/m2", ge=0)]
Length = Annotated[float, measured("m", ge=0)]
Volume = Annotated[float, measured("m3", ge=0)]
Time = Annotated[float, measured("s", ge=0)]
BandGap = Annotated[  # the reference spectrum ends at 0.31 and 4.43 eV
    float, BandGapType("J", Limits(ge=0.31 * ELEMENTARY_CHARGE, le=4.4 * ELEMENTARY_CHARGE))
]
Flow = Annotated[Amount, FlowType("mol/s", Limits(ge=0))]
HeatingValueShare = Annotated[BasedShare, BasedShareType("1", Limits(gt=0, le=1))]

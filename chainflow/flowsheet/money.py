"""Amounts of money in a flowsheet: ``90000 crowns``, ``1200 crowns/kW``, ``40 crowns/MWh``.

The currency is a free word that the file names once; a number, a space, that word, and behind a
slash what it is paid for. Nothing is exchanged: another currency is a fault.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import Annotated, Any, Literal, NamedTuple

from pydantic_core import PydanticCustomError, core_schema

from chainflow.basis.names import shorten
from chainflow.basis.parsing import NUMBER_PATTERN, QuantityFault, parse
from chainflow.basis.units import UnitFault, resolve, si_unit

CURRENCY_PATTERN = r"[A-Za-z][A-Za-z_]*"
DEFAULT_CURRENCY = "money"
_FORM = re.compile(
    rf"(?P<number>{NUMBER_PATTERN}) +(?P<word>{CURRENCY_PATTERN})(?: */ *(?P<per>\S.*))?"
)
_YEAR = resolve("a")


class Money(NamedTuple):
    """An amount of money, or a price: `value` for one SI unit of what `per` names.

    `per` is "" for a plain amount and "share" for a share of something else, as a year's upkeep.
    """

    value: float
    per: str = ""


@dataclass(frozen=True, slots=True)
class MoneyType:
    """The marker of a setting that is money; `form` says what it may be paid for."""

    form: Literal["amount", "price", "yearly"]

    def read(self, given: object, currency: str) -> Money:
        """Turn text into money; raise QuantityFault with one sentence."""
        if isinstance(given, Money):
            return given
        text = str(given).strip() if isinstance(given, str) else ""
        if self.form == "yearly" and re.fullmatch(rf"{NUMBER_PATTERN} *%?", text):
            return Money(parse(text, "1", ge=0.0, le=1.0), "share")
        found = _FORM.fullmatch(text)
        if found is None:
            raise QuantityFault(f"{shorten(str(given))} is no money, wanted {self.means(currency)}")
        if found["word"] != currency:
            raise QuantityFault(
                f"{shorten(text)} is in {found['word']}, the costs are in {currency}: "
                "write all of them in one currency"
            )
        number = parse(found["number"], "1")
        if number < 0.0:
            raise QuantityFault(f"{shorten(text)} is negative, wanted {self.means(currency)}")
        return self._priced(number, found["per"], text, currency)

    def _priced(self, number: float, per: str | None, text: str, currency: str) -> Money:
        if per is None:
            if self.form == "amount":
                return Money(number)
            raise QuantityFault(f"{shorten(text)} is an amount, wanted {self.means(currency)}")
        unit = resolve(per)
        if self.form == "yearly":
            if unit.exponents != _YEAR.exponents:
                raise QuantityFault(
                    f"{shorten(text)} is not for a year, wanted {self.means(currency)}"
                )
            return Money(number / unit.to_si(1.0) * _YEAR.to_si(1.0), "a")
        return Money(number / (unit.to_si(1.0) - unit.offset), si_unit(unit.exponents))

    def means(self, currency: str = DEFAULT_CURRENCY) -> str:
        """Say what is wanted."""
        return {
            "amount": f"an amount as '90000 {currency}', or per size as '1200 {currency}/kW'",
            "price": f"a price as '40 {currency}/MWh' or '80 {currency}/t'",
            "yearly": f"a share of the installed cost a year as '3 %', or '5000 {currency}/a'",
        }[self.form]

    def described(self) -> str:
        """Return one line for help and schema."""
        return self.means()

    def _validated(self, given: object, info: Any) -> Money:
        currency = (info.context or {}).get("currency", DEFAULT_CURRENCY)
        try:
            return self.read(given, currency)
        except (QuantityFault, UnitFault) as fault:
            raise PydanticCustomError("quantity", "{text}", {"text": str(fault)}) from None

    def __get_pydantic_core_schema__(self, source: object, handler: object) -> Any:
        """Hand pydantic one plain function that knows the currency of the file."""
        return core_schema.with_info_plain_validator_function(self._validated)

    def __get_pydantic_json_schema__(self, schema: object, handler: object) -> dict[str, Any]:
        """Describe the text form for editors."""
        share = rf"|{NUMBER_PATTERN} *%" if self.form == "yearly" else ""
        number = rf"{NUMBER_PATTERN} +{CURRENCY_PATTERN}(?: */ *\S.*)?"
        return {
            "type": "string",
            "pattern": rf"^(?:{number}{share})$",
            "description": self.described(),
        }


Amount = Annotated[Money, MoneyType("amount")]
Price = Annotated[Money, MoneyType("price")]
Yearly = Annotated[Money, MoneyType("yearly")]

"""The costs of a plant as a file gives them: the optional block ``costs:``.

    costs:                          # every figure here is invented
      currency: crowns
      interest: 7 %
      lifetime: 20 a
      hours: 2000 h                 # full-load hours of a year
      year: 2023
      index: {2018: 603.1, 2023: 797.9}
      equipment:
        stack: {size: stack.direct_current, purchase: 900 crowns/kW, fixed: 3 %}
        press: {size: press.power.rate, reference: 200 kW, purchase: 500000 crowns,
                exponent: 0.7, year: 2018, installation: 1.5}
      bought: {power: 60 crowns/MWh, material: {carbon: 80 crowns/t}}
      sold: {material: {o2-tank: 30 crowns/t}}

Nothing has a price unless the file gives it one.
"""

from __future__ import annotations

import re
from typing import Annotated

from pydantic import AfterValidator, BaseModel, ConfigDict, Field
from pydantic_core import PydanticCustomError

from chainflow.basis.names import shorten
from chainflow.basis.quantities import measured
from chainflow.flowsheet.money import (
    CURRENCY_PATTERN,
    DEFAULT_CURRENCY,
    Amount,
    Price,
    Yearly,
)

YEAR = 31557600.0  # [s]
_Years = Annotated[float, measured("s", gt=0)]
_Hours = Annotated[float, measured("s", gt=0, le=YEAR)]
_CalendarYear = Annotated[int, Field(ge=1900, le=2200)]
_Factor = Annotated[float, Field(gt=0, le=100)]


def _one_word(currency: str) -> str:
    if not re.fullmatch(CURRENCY_PATTERN, currency):
        text = f"{shorten(currency)} is no name of a currency: wanted one word of letters"
        raise PydanticCustomError("currency", "{text}", {"text": text})
    return currency


class _Block(BaseModel):
    model_config = ConfigDict(frozen=True, extra="forbid")


class PieceCost(_Block):
    """What one piece of equipment costs."""

    size: str = Field(description="address of what its cost goes by, as stack.power.rate")
    purchase: Amount = Field(description="purchase cost at `reference`, or per size")
    reference: str | None = Field(
        None, description="size that `purchase` is for (not needed if it is per size)"
    )
    exponent: Annotated[float, Field(ge=0, le=2)] = Field(
        1.0, description="cost grows with (size / reference) to this power"
    )
    year: _CalendarYear | None = Field(None, description="year of `purchase`, for the index")
    installation: _Factor | None = Field(None, description="installed cost per purchase cost")
    lifetime: _Years | None = Field(None, description="years it lasts (default: the block's)")
    fixed: Yearly | None = Field(None, description="fixed cost a year (default: the block's)")
    variable: Price | None = Field(
        None, description="cost per what goes through it; counts what `size` or `per` names"
    )
    per: str | None = Field(None, description="address of the rate that `variable` counts")


class Prices(_Block):
    """Prices of what is bought, or of what is sold."""

    power: Price | None = Field(None, description="all electricity")
    heat: Price | None = Field(None, description="all heat")
    cold: Price | None = Field(None, description="all cooling below the ambient (bought only)")
    material: dict[str, Price] = Field(
        default_factory=dict, description="by the equipment that gets it from outside or delivers"
    )


class CostBlock(_Block):
    """All costs of a plant."""

    currency: Annotated[str, AfterValidator(_one_word)] = Field(
        DEFAULT_CURRENCY, description="any word; all amounts carry it"
    )
    interest: Annotated[float, measured("1", ge=0, le=1)] = Field(description="a year")
    lifetime: _Years = Field(description="years that equipment lasts unless it says otherwise")
    hours: _Hours = Field(description="full-load hours of a year: yearly amount / rate")
    year: _CalendarYear | None = Field(None, description="year of the money of the answer")
    index: dict[_CalendarYear, Annotated[float, Field(gt=0)]] = Field(
        default_factory=dict, description="cost index by year"
    )
    installation: _Factor = Field(1.0, description="installed cost per purchase cost")
    fixed: Yearly | None = Field(None, description="fixed cost a year (default: none)")
    equipment: dict[str, PieceCost] = Field(default_factory=dict, description="by name")
    bought: Prices = Field(default_factory=Prices, description="prices of what is bought")
    sold: Prices = Field(default_factory=Prices, description="prices of what else is sold")

    def index_ratio(self, year: int | None) -> float:
        """Return the cost of `year` in money of the block's year; 1 where no year is given."""
        if year is None or self.year is None or year == self.year:
            return 1.0
        return self.index[self.year] / self.index[year]

"""Shares and compositions that add up to one, of which one entry may be `rest`."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Annotated, Any

import numpy as np
from pydantic import AfterValidator
from pydantic_core import PydanticCustomError

from chainflow.basis.quantities import Limits, QuantityType
from chainflow.thermo.components import Matter

REST = "rest"
_ONE = 1e-6  # compositions are written with a few digits


@dataclass(frozen=True, slots=True)
class ShareType(QuantityType):
    """A share from 0 to 1, or the word `rest`."""

    def read(self, given: object) -> object:
        """Turn text or a number into a share; `rest` stays as it is."""
        return REST if given == REST else QuantityType.read(self, given)

    def pattern(self) -> str:
        """Return the regular expression an editor can check."""
        return f"^rest$|{QuantityType.pattern(self)}"


def _adds_up(shares: dict[str, Any]) -> dict[str, Any]:
    rests = [name for name, value in shares.items() if value == REST]
    if len(rests) > 1:
        raise PydanticCustomError(
            "shares",
            "{names} are all 'rest', wanted at most one of them",
            {"names": ", ".join(rests)},
        )
    total = sum(value for value in shares.values() if value != REST)
    if total > 1 + _ONE or (not rests and abs(total - 1) > _ONE):
        hint = "lower one of them" if rests else "write 'rest' for one of them"
        raise PydanticCustomError(
            "shares",
            "the shares add up to {total}, wanted 100 %; {hint}",
            {"total": f"{100 * total:.6g} %", "hint": hint},
        )
    if not shares:
        raise PydanticCustomError("shares", "no shares are given, wanted at least one", {})
    return shares


Share = Annotated[float, ShareType("1", Limits(ge=0, le=1))]
Shares = Annotated[dict[str, Share], AfterValidator(_adds_up)]


def resolved(shares: Mapping[str, Any]) -> dict[str, float]:
    """The shares as numbers that add up to exactly one."""
    given = {name: value for name, value in shares.items() if value != REST}
    total = float(sum(given.values()))
    if len(given) == len(shares):
        return {name: value / total for name, value in shares.items()}
    return {name: 1.0 - total if value == REST else value for name, value in shares.items()}


def fractions(shares: Mapping[str, Any], matter: Matter) -> np.ndarray:
    """Mole fractions of a composition, in the order of the components; shape (components,)."""
    vector = np.zeros(len(matter.components))
    for name, value in resolved(shares).items():
        vector[matter.index[name]] = value
    return vector

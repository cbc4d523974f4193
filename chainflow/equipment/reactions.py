"""Chemical equations as text, `CO2 + 3 H2 -> CH3OH + H2O`, and what they do to flows.

A reaction is a vector of stoichiometric numbers over the components, negative for what is used.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from typing import Annotated

import numpy as np
from pydantic import AfterValidator, BaseModel, ConfigDict, Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.quantities import Flow as FlowSetting
from chainflow.basis.quantities import Fraction
from chainflow.thermo.components import Matter

_TERM = re.compile(r"^(?:(\d+(?:\.\d+)?|\d+/\d+)\s*\*?\s+)?([A-Za-z][A-Za-z0-9,-]*)$")
_LONGEST = 200


def parse_equation(text: str) -> dict[str, float]:
    """Stoichiometric numbers by component; ValueError says what is wrong."""
    if len(text) > _LONGEST:
        raise ValueError("the equation is too long")
    sides = text.split("->")
    if len(sides) != 2:
        raise ValueError(
            f"'{text}' has no single '->', wanted an equation such as CO2 + 4 H2 -> CH4 + 2 H2O"
        )
    numbers: dict[str, float] = {}
    for sign, side in zip((-1.0, 1.0), sides, strict=True):
        for term in side.split(" + "):
            match = _TERM.match(term.strip())
            if match is None:
                raise ValueError(
                    f"cannot read '{term.strip()}' in '{text}', "
                    "wanted a number and a component such as 4 H2"
                )
            numbers[match[2]] = numbers.get(match[2], 0.0) + sign * _number(match[1])
    return numbers


def _number(text: str | None) -> float:
    if text is None:
        return 1.0
    top, _, bottom = text.partition("/")
    return float(top) / float(bottom or 1)


def _readable(text: str) -> str:
    try:
        parse_equation(text)
    except (ValueError, ZeroDivisionError) as problem:
        raise PydanticCustomError("equation", "{why}", {"why": str(problem)}) from None
    return text


class Reaction(BaseModel):
    """One reaction with its conversion (of one component of the feed) or its extent."""

    model_config = ConfigDict(frozen=True, extra="forbid")

    equation: Annotated[str, AfterValidator(_readable)] = Field(
        description="CO2 + 3 H2 -> CH3OH + H2O"
    )
    conversion: dict[str, Fraction] | None = Field(
        None, description="share of one component of the feed that this reaction uses, {CO2: 20 %}"
    )
    extent: FlowSetting | None = Field(None, description="extent of the reaction, 0.1 mol/s")

    @model_validator(mode="after")
    def _one_measure(self) -> Reaction:
        if (self.conversion is None) == (self.extent is None):
            raise PydanticCustomError("reaction", "give one of 'conversion' and 'extent'", {})
        if self.conversion is not None and len(self.conversion) != 1:
            raise PydanticCustomError(
                "reaction",
                "conversion names {count} components, wanted one",
                {"count": len(self.conversion)},
            )
        if self.extent is not None and self.extent.per != "mol":
            raise PydanticCustomError(
                "reaction", "extent is a molar flow, wanted for example 0.1 mol/s", {}
            )
        return self

    @property
    def numbers(self) -> dict[str, float]:
        return parse_equation(self.equation)

    def faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        """What is wrong with the reaction for these components: (path, sentence)."""
        if any(name not in matter.index for name in self.numbers):
            return  # named by component_names
        short = self.vector(matter) @ matter.formula.T
        lost = {e: float(v) for e, v in zip(matter.elements, short, strict=True) if abs(v) > 1e-9}
        if lost:
            listed = ", ".join(f"{element} {change:+g}" for element, change in lost.items())
            yield ("equation",), f"'{self.equation}' is not balanced: {listed} from left to right"
        for name in self.conversion or {}:
            if self.numbers.get(name, 0.0) >= 0.0:
                yield (
                    ("conversion", name),
                    f"'{name}' is not used by '{self.equation}', wanted one of its left side",
                )

    def vector(self, matter: Matter) -> np.ndarray:
        """Stoichiometric numbers in the order of the components; shape (components,)."""
        vector = np.zeros(len(matter.components))
        for name, value in self.numbers.items():
            vector[matter.index[name]] = value
        return vector

    def by_feed(self, matter: Matter) -> np.ndarray:
        """Extent per flow of each component in the feed; shape (components,)."""
        row = np.zeros(len(matter.components))
        for name, share in (self.conversion or {}).items():
            row[matter.index[name]] = share / -self.numbers[name]
        return row

    def extent_of(self, feed: np.ndarray, matter: Matter) -> float:
        """Extent [mol/s] of the reaction for a feed."""
        return float(self.by_feed(matter) @ feed) + (self.extent.value if self.extent else 0.0)

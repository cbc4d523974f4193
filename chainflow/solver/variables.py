"""The numbers behind a flowsheet: what a line, a state, an amount or a held setting is as a vector.

A variable is one node of the graph of information.  Matter is ``[n_i of the species that can be
there, H]``, so it is linear under mixing and splitting; its pressure is known.  Heat is
``[W, start, end, mean]`` of each of its parts, in as many places as it can have; light
``[W, W/m2, direct, air, wind]``, power and amounts are one number.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from chainflow.basis.constants import T_REFERENCE
from chainflow.equipment.ports import MOST_PARTS, Flow, Heat, Light, as_number
from chainflow.thermo.components import Matter
from chainflow.thermo.streams import Stream

ENTHALPY_SCALE = 1e5  # [J/mol], the size of a molar enthalpy
HEAT_NUMBERS = 4  # of each part of a heat flow
FORMS = {"material": "matter", "heat": "heat", "light": "light"}  # by content; else one number
_SIZES = {"heat": HEAT_NUMBERS * MOST_PARTS, "light": 5}


@dataclass(frozen=True, slots=True)
class Variable:
    """One unknown of the graph of information."""

    key: str
    form: str  # "matter", "heat", "light" or "number"
    places: np.ndarray | None = None  # component indices of the species that can be there
    pressure: float = 0.0  # [Pa]
    content: str = "material"  # what the number is about: material, power, heat, light, setting
    rate: bool = False  # a switchboard's rest, a good place to cut a loop

    @property
    def size(self) -> int:
        """How many numbers it is."""
        if self.form == "matter":
            assert self.places is not None
            return len(self.places) + 1
        return _SIZES.get(self.form, 1)

    def rows(self, matter: Matter) -> np.ndarray:
        """Rows of this variable in a full vector ``[n_1..n_C, H]``."""
        if self.form != "matter":
            return np.arange(self.size)
        assert self.places is not None
        return np.append(self.places, len(matter.components))

    def pack(self, value: Flow) -> np.ndarray:
        """The value as this variable's numbers."""
        if isinstance(value, Stream):
            flows = value.flows if self.places is None else value.flows[self.places]
            return np.append(flows, value.enthalpy)
        if isinstance(value, Heat):
            return _padded(heat_numbers(value))
        if isinstance(value, Light):
            return np.array(value.numbers)
        return np.array([as_number(value)])

    @property
    def idle(self) -> np.ndarray:
        """Its numbers while nothing flows; light that does not shine leaves the air warm."""
        if self.form == "light":
            return np.array([0.0, 0.0, 0.0, T_REFERENCE, 0.0])
        if self.form == "heat":
            return _padded(np.array([0.0, T_REFERENCE, T_REFERENCE, T_REFERENCE]))
        return np.zeros(self.size)

    def unpack(self, numbers: np.ndarray, matter: Matter, guess: float | None = None) -> Flow:
        """The value behind this variable's numbers; StateError if no temperature fits."""
        if self.form == "number":
            return float(numbers[0])
        if self.form == "heat":
            return _heat(numbers)
        if self.form == "light":
            return Light(*(float(x) for x in numbers))
        flows = np.zeros(len(matter.components))
        flows[self.places] = numbers[:-1]
        return Stream.from_enthalpy(matter, flows, float(numbers[-1]), self.pressure, guess)


def heat_numbers(heat: Heat) -> np.ndarray:
    """``[W, start, end, mean]`` of each part, one after the other."""
    rows = [(piece.rate, piece.start, piece.end, piece.mean) for piece in heat.pieces]
    return np.array(rows, dtype=float).ravel()


def _padded(numbers: np.ndarray) -> np.ndarray:
    """Numbers of as many parts as can be; what is left over is zero."""
    return np.append(numbers, np.zeros(HEAT_NUMBERS * MOST_PARTS - len(numbers)))


def _heat(numbers: np.ndarray) -> Heat:
    """The heat flow behind its numbers; places without a temperature hold no part."""
    rows = numbers.reshape(-1, HEAT_NUMBERS).tolist()
    parts = [Heat(rate, start, end, mean) for rate, start, end, mean in rows if mean > 0.0]
    return Heat.total(parts)

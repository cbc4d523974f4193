"""The numbers behind a flowsheet: what a line, a state, an amount or a held setting is as a vector.

A variable is one node of the graph of information.  Matter is ``[n_i of the species that can be
there, H]``, so it is linear under mixing and splitting; its pressure is known.  Heat is
``[W, start, end, mean]``, light ``[W, W/m2, direct, air, wind]``, power and amounts are one number.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from chainflow.basis.constants import T_REFERENCE
from chainflow.equipment.ports import Flow, Heat, Light, as_number
from chainflow.thermo.components import Matter
from chainflow.thermo.streams import Stream

ENTHALPY_SCALE = 1e5  # [J/mol], the size of a molar enthalpy
FORMS = {"material": "matter", "heat": "heat", "light": "light"}  # by content; else one number
_SIZES = {"heat": 4, "light": 5}


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
            return np.array([value.rate, value.start, value.end, value.mean])
        if isinstance(value, Light):
            return np.array(value.numbers)
        return np.array([as_number(value)])

    @property
    def idle(self) -> np.ndarray:
        """Its numbers while nothing flows; light that does not shine leaves the air warm."""
        if self.form == "light":
            return np.array([0.0, 0.0, 0.0, T_REFERENCE, 0.0])
        return np.zeros(self.size)

    def unpack(self, numbers: np.ndarray, matter: Matter, guess: float | None = None) -> Flow:
        """The value behind this variable's numbers; StateError if no temperature fits."""
        if self.form == "number":
            return float(numbers[0])
        if self.form == "heat":
            return Heat(*(float(x) for x in numbers))
        if self.form == "light":
            return Light(*(float(x) for x in numbers))
        flows = np.zeros(len(matter.components))
        flows[self.places] = numbers[:-1]
        return Stream.from_enthalpy(matter, flows, float(numbers[-1]), self.pressure, guess)

"""Where do the data of a substance come from?

From ``species.yaml`` beside this module and ``hydrocarbons.yaml`` (sources in their headers), each
read once per process when it is first needed. Lists of Cantera species are handed out for building
phases, and NASA polynomials as plain Python for the few scalar properties that need no phase.
Reference pressure of everything: 1 bar.
"""

from dataclasses import dataclass
from functools import cache
from math import log
from pathlib import Path
from typing import Any

import cantera as ct

from chainflow.basis.constants import GAS_CONSTANT
from chainflow.thermo.chains import HYDROCARBONS

DATA_FILE = Path(__file__).with_name("species.yaml")
HYDROCARBON_FILE = Path(__file__).with_name("hydrocarbons.yaml")
LOWEST_TEMPERATURE = 200.0  # [K], lower end of the gas polynomials
HIGHEST_TEMPERATURE = 6000.0  # [K], upper end of the gas polynomials


@cache
def component_species() -> dict[str, Any]:
    """Return the species that a flowsheet may name, long hydrocarbons last."""
    return {**small_species(), **hydrocarbon_species()}


@cache
def small_species() -> dict[str, Any]:
    """Return the species of up to four carbon atoms that a flowsheet may name."""
    return _read("components")


@cache
def hydrocarbon_species() -> dict[str, Any]:
    """Return the n-alkanes from C5, the 1-alkenes from C4 and the wax."""
    return _read("components", HYDROCARBON_FILE)


@cache
def flame_species() -> dict[str, Any]:
    """Return the species above and the radicals that only flames need."""
    return {**component_species(), **radicals()}


@cache
def radicals() -> dict[str, Any]:
    """Return the species that only flames need."""
    return _read("radicals")


def species_of(name: str) -> Any:
    """Return one species, component or radical; the long hydrocarbons are read only if needed."""
    if name in HYDROCARBONS:
        return hydrocarbon_species()[name]
    found = small_species().get(name)
    return radicals()[name] if found is None else found


@cache
def condensed_species() -> dict[str, Any]:
    """Return liquid water ``H2O(L)`` and graphite ``C(gr)``."""
    return _read("condensed")


def _read(section: str, file: Path = DATA_FILE) -> dict[str, Any]:
    found = ct.Species.list_from_file(str(file), section)
    return {species.name: species for species in found}


def gas_phase(names: tuple[str, ...], model: str = "ideal-gas") -> Any:
    """Return a new Cantera phase of the named gases; `model` as Cantera spells it."""
    return ct.Solution(thermo=model, species=[species_of(name) for name in names])


@dataclass(frozen=True, slots=True)
class Polynomial:
    """NASA seven-coefficient polynomial of one species at 1 bar.

    Outside its range the heat capacity of the nearest end holds, so that enthalpy and entropy
    stay consistent and rise steadily; callers that must not leave the range check it themselves.
    """

    low: tuple[float, ...]
    high: tuple[float, ...]
    joint: float  # [K], `low` below, `high` above
    lowest: float  # [K]
    highest: float  # [K]

    def heat_capacity(self, temperature: float) -> float:
        """Return cp [J/(mol K)] at a temperature [K]."""
        t = min(max(temperature, self.lowest), self.highest)
        a, b, c, d, e, _, _ = self.low if t <= self.joint else self.high
        return GAS_CONSTANT * (a + t * (b + t * (c + t * (d + t * e))))

    def enthalpy(self, temperature: float) -> float:
        """Return the enthalpy [J/mol], formation enthalpy included."""
        t = min(max(temperature, self.lowest), self.highest)
        a, b, c, d, e, f, _ = self.low if t <= self.joint else self.high
        inside = GAS_CONSTANT * (f + t * (a + t * (b / 2 + t * (c / 3 + t * (d / 4 + t * e / 5)))))
        return inside if t == temperature else inside + self.heat_capacity(t) * (temperature - t)

    def entropy(self, temperature: float) -> float:
        """Return the entropy [J/(mol K)] at 1 bar."""
        t = min(max(temperature, self.lowest), self.highest)
        a, b, c, d, e, _, g = self.low if t <= self.joint else self.high
        powers = t * (b + t * (c / 2 + t * (d / 3 + t * e / 4)))
        inside = GAS_CONSTANT * (a * log(t) + powers + g)
        return inside if t == temperature else inside + self.heat_capacity(t) * log(temperature / t)

    def gibbs(self, temperature: float) -> float:
        """Return the Gibbs energy [J/mol] at 1 bar."""
        return self.enthalpy(temperature) - temperature * self.entropy(temperature)


@cache
def polynomial(name: str) -> Polynomial:
    """Return the polynomial of a gas, of ``H2O(L)`` or of ``C(gr)``."""
    species = condensed_species()[name] if name.endswith(")") else species_of(name)
    data = species.input_data["thermo"]
    ranges, rows = data["temperature-ranges"], data["data"]
    low, high = tuple(rows[0]), tuple(rows[-1])
    return Polynomial(low, high, ranges[1], ranges[0], ranges[-1])

"""Which components are there, and what properties do their mixtures have?

`Matter` is one set of components. Its kernels take one case: flows (components,) [mol/s],
temperature [K], pressure [Pa], and give extensive values [W], [W/K], [m3/s]. Zero flow gives zero.

One enthalpy function serves every gas at every pressure: ideal mixture plus Redlich-Kwong
departure (Redlich and Kwong, Chem. Rev. 44 (1949) 233), always on the largest root of the cubic,
the vapour. Enthalpies carry formation enthalpies (elements at 298.15 K are zero); entropies are
absolute, at 1 bar. Liquid water is incompressible with Raoult's and Henry's laws for its contents;
liquid hydrocarbons are an ideal solution (`chainflow.thermo.oil`).
"""

from collections.abc import Sequence
from functools import cache
from math import log
from typing import Any, NamedTuple

import cantera as ct
import numpy as np
import numpy.typing as npt

from chainflow.basis.constants import GAS_CONSTANT, P_REFERENCE, T_REFERENCE
from chainflow.basis.names import suggest
from chainflow.thermo import water as wet
from chainflow.thermo.chains import (
    LONGEST_ALKANE,
    LONGEST_ALKENE,
    WAX,
    alkane,
    alkene,
    hydrocarbons,
)
from chainflow.thermo.oil import Oil
from chainflow.thermo.species import (
    HIGHEST_TEMPERATURE,
    LOWEST_TEMPERATURE,
    Polynomial,
    gas_phase,
    polynomial,
    small_species,
    species_of,
)
from chainflow.thermo.validity import StateError, require_amounts, require_state

Array = npt.NDArray[np.float64]

DEFAULT_COMPONENTS = ("H2", "O2", "N2", "Ar", "H2O", "CO", "CO2", "CH4")
ELEMENT_ORDER = ("C", "H", "O", "N", "Ar", "He")
WATER_MOLAR_VOLUME = 18.01528e-3 / 997.05  # [m3/mol], density 997.05 kg/m3 at 25 degC (IAPWS-95)


def known_components() -> tuple[str, ...]:
    """Return the names of all components that a file may use."""
    return (*small_species(), *hydrocarbons())


def known_in_words() -> str:
    """Return the same as a list for messages, the long chains by their ends."""
    chains = (
        f"{alkane(5)} to {alkane(LONGEST_ALKANE)}",
        f"{alkene(4)} to {alkene(LONGEST_ALKENE)}",
        WAX,
    )
    return ", ".join((*small_species(), *chains))


class GasState(NamedTuple):
    """Enthalpy [W], entropy [W/K] and heat capacity [W/K] of a gas."""

    enthalpy: float
    entropy: float
    heat_capacity: float


class GasPartial(NamedTuple):
    """Partial molar enthalpies [J/mol] and entropies [J/(mol K)], and the heat capacity [W/K]."""

    enthalpy: Array
    entropy: Array
    heat_capacity: float


class AqueousPartial(NamedTuple):
    """Partial molar enthalpies [J/mol] in liquid water; zero for what does not dissolve."""

    enthalpy: Array


class Matter:
    """One set of components with all their properties; make it with `Matter.of`.

    Attributes
    ----------
    components : tuple of names
    index : dict from name to place
    elements : tuple of names
    formula : array, shape (elements, components)
    molar_mass : array, shape (components,) [kg/mol]
    lhv, hhv : arrays, shape (components,) [J/mol]
        At 298.15 K as gases, nitrogen burning to N2; zero for all that does not take up oxygen.
    water, carbon_dioxide : place, or None if absent
    oil : the liquid hydrocarbons, or None if no long hydrocarbon is among the components
    temperature_range : (lowest, highest) [K] of the gas data
    """

    temperature_range = (LOWEST_TEMPERATURE, HIGHEST_TEMPERATURE)

    def __init__(self, components: tuple[str, ...]) -> None:
        _require_components(components)
        self.components = components
        self.index = {name: place for place, name in enumerate(components)}
        self.water = self.index.get("H2O")
        self.carbon_dioxide = self.index.get("CO2")
        species = [species_of(name) for name in components]
        used = [s.composition for s in species]
        self.elements = tuple(e for e in ELEMENT_ORDER if any(e in atoms for atoms in used))
        self.formula = _fixed([[atoms.get(e, 0.0) for atoms in used] for e in self.elements])
        self.molar_mass = _fixed([s.molecular_weight / 1e3 for s in species])
        self.lhv = _fixed(
            [_heating_value(atoms, name) for atoms, name in zip(used, components, strict=True)]
        )
        self.hhv = _fixed(self.lhv + _condensation_heat(used, self.lhv))
        self.nothing = _fixed(np.zeros(len(components)))
        self._polynomials = tuple(polynomial(name) for name in components)
        self._liquid = polynomial("H2O(L)")
        self._gas = gas_phase(components, "Redlich-Kwong")
        self._gas_is: tuple[float, float, bytes] | None = None  # the state it was last set to
        self._gas_total = 0.0  # and its flow
        self._insoluble = [
            (i, name) for i, name in enumerate(components) if name not in {"H2O", *wet.HENRY}
        ]
        self.oil = Oil.of(components)
        critical = [s.input_data["critical-parameters"] for s in species]
        # above this no root but the vapour exists for any component, so no reset is needed
        self._one_root = max(c["critical-temperature"] for c in critical) + 50.0
        self._solubles: dict[tuple[str, ...], wet.Solubles] = {}

    @classmethod
    def of(cls, names: Sequence[str]) -> "Matter":
        """Return the one `Matter` of these components; unknown names raise `ValueError`."""
        return _matter(tuple(names))

    def __reduce__(self) -> tuple[Any, tuple[tuple[str, ...]]]:
        return _matter, (self.components,)

    def __repr__(self) -> str:
        return f"Matter.of({list(self.components)})"

    def vector(self, amounts: dict[str, float]) -> Array:
        """Return amounts by name as an array in component order; unknown names raise."""
        flows = np.zeros(len(self.components))
        for name, amount in amounts.items():
            if name not in self.index:
                raise ValueError(
                    f"{name!r} is not among the components{suggest(name, self.components)}"
                )
            flows[self.index[name]] = amount
        return flows

    def solubles(self, dissolved: tuple[str, ...]) -> wet.Solubles:
        """Return water and the named gases as places in the flow vector."""
        found = self._solubles.get(dissolved)
        if found is None:
            found = self._solubles[dissolved] = wet.solubles(self, dissolved)
        return found

    def _set_gas(self, flows: Array, temperature: float, pressure: float) -> float:
        """Set the gas to a state and return the total flow [mol/s]; nothing is set for no flow.

        Cantera picks the root of the cubic by where the phase was before. Coming from a hot thin
        gas it is the vapour, whatever was asked earlier.
        """
        state = temperature, pressure, flows.tobytes()
        if state == self._gas_is:
            return self._gas_total
        require_state(temperature, pressure)
        total = require_amounts(flows, self.components)
        if total == 0.0:
            return 0.0
        self._gas_is = None
        gas = self._gas
        try:
            if temperature >= self._one_root:
                gas.TPX = temperature, pressure, flows
            else:
                self._start_thin(flows)
                gas.TP = temperature, pressure
        except ct.CanteraError as problem:  # its cubic solver fails where two roots meet
            raise StateError(liquefaction(temperature, pressure)) from problem
        self._gas_is, self._gas_total = state, total
        return total

    def _start_thin(self, flows: Array) -> None:
        """Bring the gas to a hot thin state; rarely Cantera's cubic solver fails at one of them."""
        try:
            self._gas.TPX = 1000.0, 1000.0, flows
        except ct.CanteraError:
            self._gas.TPX = 1500.0, 1e5, flows

    def gas_enthalpy(self, flows: Array, temperature: float, pressure: float) -> float:
        """Return the enthalpy of a gas [W]."""
        total = self._set_gas(flows, temperature, pressure)
        return total * self._gas.enthalpy_mole / 1e3 if total else 0.0

    def gas_entropy(self, flows: Array, temperature: float, pressure: float) -> float:
        """Return the entropy of a gas [W/K], mixing included."""
        total = self._set_gas(flows, temperature, pressure)
        return total * self._gas.entropy_mole / 1e3 if total else 0.0

    def gas_heat_capacity(self, flows: Array, temperature: float, pressure: float) -> float:
        """Return dH/dT of a gas at constant pressure [W/K]."""
        total = self._set_gas(flows, temperature, pressure)
        return total * self._gas.cp_mole / 1e3 if total else 0.0

    def gas_enthalpy_and_slope(
        self, flows: Array, temperature: float, pressure: float
    ) -> tuple[float, float]:
        """Return the enthalpy of a gas [W] and dH/dT at constant pressure [W/K]."""
        total = self._set_gas(flows, temperature, pressure) / 1e3
        if not total:
            return 0.0, 0.0
        return total * self._gas.enthalpy_mole, total * self._gas.cp_mole

    def gas_expansion(
        self, flows: Array, temperature: float, pressure: float
    ) -> tuple[float, float, float]:
        """Return volume [m3/s], thermal expansion (dV/dT)/V [1/K] and heat capacity [W/K]."""
        total = self._set_gas(flows, temperature, pressure) / 1e3
        if not total:
            return 0.0, 0.0, 0.0
        gas = self._gas
        return total * gas.volume_mole, gas.thermal_expansion_coeff, total * gas.cp_mole

    def gas_volume(self, flows: Array, temperature: float, pressure: float) -> float:
        """Return the volume flow of a gas [m3/s]."""
        total = self._set_gas(flows, temperature, pressure)
        return total * self._gas.volume_mole / 1e3 if total else 0.0

    def gas_density(self, flows: Array, temperature: float, pressure: float) -> float:
        """Return the density of a gas [kg/m3]; zero without flow."""
        return self._gas.density if self._set_gas(flows, temperature, pressure) else 0.0

    def gas_state(self, flows: Array, temperature: float, pressure: float) -> GasState:
        """Return enthalpy [W], entropy [W/K] and heat capacity [W/K] of a gas."""
        total = self._set_gas(flows, temperature, pressure) / 1e3
        if not total:
            return GasState(0.0, 0.0, 0.0)
        gas = self._gas
        return GasState(total * gas.enthalpy_mole, total * gas.entropy_mole, total * gas.cp_mole)

    def gas_partial(self, flows: Array, temperature: float, pressure: float) -> GasPartial:
        """Return partial molar enthalpies, entropies and the heat capacity of a gas.

        The enthalpies are also the slopes of the enthalpy by flow. The entropy of a component
        that is absent is large but finite. Without flow: enthalpies of the pure ideal gases,
        entropies zero.
        """
        total = self._set_gas(flows, temperature, pressure)
        if not total:
            return GasPartial(self.ideal_enthalpies(temperature), np.zeros(len(flows)), 0.0)
        gas = self._gas
        enthalpies, entropies = gas.partial_molar_enthalpies, gas.partial_molar_entropies
        return GasPartial(enthalpies / 1e3, entropies / 1e3, total * gas.cp_mole / 1e3)

    def ideal_enthalpies(self, temperature: float) -> Array:
        """Return the enthalpies of the pure ideal gases [J/mol], shape (components,)."""
        return np.array([p.enthalpy(temperature) for p in self._polynomials])

    def ideal_entropies(self, temperature: float) -> Array:
        """Return the entropies of the pure ideal gases at 1 bar [J/(mol K)]."""
        return np.array([p.entropy(temperature) for p in self._polynomials])

    def water_enthalpy(self, flows: Array, temperature: float, pressure: float) -> float:
        """Return the enthalpy of liquid water with what is dissolved in it [W]."""
        if not self._wet(flows, temperature, pressure):
            return 0.0
        amounts = zip(self.components, flows.tolist(), strict=True)
        return sum(
            amount * self._aqueous_enthalpy(name, temperature, pressure)
            for name, amount in amounts
            if amount > 0.0
        )

    def water_partial(
        self, temperature: float, pressure: float, names: tuple[str, ...] | None = None
    ) -> AqueousPartial:
        """Return the partial molar enthalpies in liquid water [J/mol].

        Water: the polynomial plus ``v (p - p0)``; gases: ideal gas plus ``R d ln k_H/d(1/T)``.
        With `names`, only those are worked out and the others are zero.
        """
        enthalpies = np.zeros(len(self.components))
        for name in ("H2O", *wet.HENRY) if names is None else names:
            if name in self.index:
                enthalpies[self.index[name]] = self._aqueous_enthalpy(name, temperature, pressure)
        return AqueousPartial(enthalpies)

    def _aqueous_enthalpy(self, name: str, temperature: float, pressure: float) -> float:
        if name == "H2O":
            return self._liquid_enthalpy(temperature, pressure)
        dissolution = GAS_CONSTANT * wet.henry_slope(name, temperature)
        return self._polynomials[self.index[name]].enthalpy(temperature) + dissolution

    def _liquid_enthalpy(self, temperature: float, pressure: float) -> float:
        compression = WATER_MOLAR_VOLUME * (pressure - P_REFERENCE)
        return self._liquid.enthalpy(temperature) + compression

    def water_entropy(self, flows: Array, temperature: float, pressure: float) -> float:
        """Return the entropy of liquid water with what is dissolved in it [W/K]."""
        return float(flows @ self.water_partial_entropies(flows, temperature, pressure))

    def water_partial_entropies(self, flows: Array, temperature: float, pressure: float) -> Array:
        """Return the partial molar entropies in a liquid [J/(mol K)]; zero for what is absent."""
        total = self._wet(flows, temperature, pressure)
        entropies = np.zeros(len(self.components))
        for place, amount in enumerate(flows.tolist() if total else ()):
            if amount <= 0.0:
                continue
            name, share = self.components[place], amount / total
            if name == "H2O":
                entropies[place] = self._liquid.entropy(temperature) - GAS_CONSTANT * log(share)
            else:
                entropies[place] = self.dissolved_entropy(name, temperature, share)
        return entropies

    def dissolved_entropy(self, name: str, temperature: float, share: float) -> float:
        """Return the partial molar entropy of a gas dissolved in water [J/(mol K)]."""
        pure = self._polynomials[self.index[name]].entropy(temperature)
        return pure + _dissolution_entropy(name, temperature, share)

    def water_heat_capacity(self, flows: Array, temperature: float, pressure: float) -> float:
        """Return dH/dT of liquid water with what is dissolved in it [W/K]."""
        capacity = 0.0
        amounts = flows.tolist() if self._wet(flows, temperature, pressure) else ()
        for place, amount in enumerate(amounts):
            if amount <= 0.0:
                continue
            name = self.components[place]
            if name == "H2O":
                capacity += amount * self._liquid.heat_capacity(temperature)
            else:
                pure = self._polynomials[place].heat_capacity(temperature)
                capacity += amount * (pure + _dissolution_heat_capacity(name, temperature))
        return capacity

    def oil_enthalpy(self, flows: Array, temperature: float, pressure: float) -> float:
        """Return the enthalpy of liquid hydrocarbons [W]."""
        if self.oil is None or not flows.any():
            return 0.0
        return float(flows @ self.oil.enthalpies(temperature, pressure))

    def oil_entropy(self, flows: Array, temperature: float) -> float:
        """Return the entropy of liquid hydrocarbons [W/K], mixing included."""
        if self.oil is None or not flows.any():
            return 0.0
        return float(flows @ self.oil.partial_entropies(flows, temperature))

    def _wet(self, flows: Array, temperature: float, pressure: float) -> float:
        """Check the state of a liquid and return its total flow [mol/s]."""
        require_state(temperature, pressure)
        total = require_amounts(flows, self.components)
        if total and temperature > wet.CRITICAL_TEMPERATURE:
            raise StateError(
                f"liquid water at {temperature:g} K: its critical temperature is "
                f"{wet.CRITICAL_TEMPERATURE:g} K"
            )
        amounts = flows.tolist()
        for place, name in self._insoluble:
            if amounts[place] > 0.0:
                raise StateError(f"{name} in liquid water: no Henry's constant is known for it")
        return total


def _dissolution_entropy(name: str, temperature: float, share: float) -> float:
    """Return what dissolving adds to the entropy of the pure gas at 1 bar [J/(mol K)]."""
    henry = wet.log_henry_constant(name, temperature)
    order = henry.value - log(P_REFERENCE) + log(share)
    return -GAS_CONSTANT * (order + temperature * henry.first)


def _dissolution_heat_capacity(name: str, temperature: float) -> float:
    """Return the slope of the heat of dissolution by temperature [J/(mol K)]."""
    henry = wet.log_henry_constant(name, temperature)
    return -GAS_CONSTANT * temperature * (2 * henry.first + temperature * henry.second)


def liquefaction(temperature: float, pressure: float) -> str:
    """Return the sentence for a gas that has no vapour root."""
    return (
        f"at {temperature:.5g} K and {pressure:g} Pa the gas would partly liquefy, and only water "
        "and hydrocarbons of five carbon atoms and more may condense here: raise the temperature "
        "or lower the pressure"
    )


@cache
def _matter(components: tuple[str, ...]) -> Matter:
    return Matter(components)


def _require_components(components: tuple[str, ...]) -> None:
    if not components:
        raise ValueError("a set of components cannot be empty")
    known = known_components()
    for place, name in enumerate(components):
        if name not in known:
            raise ValueError(
                f"{name!r} is not a known component{suggest(name, known)}; "
                f"known: {known_in_words()}"
            )
        if name in components[:place]:
            raise ValueError(f"the component {name!r} is named twice: name it once")


def _fixed(values: Any) -> Array:
    array = np.asarray(values, dtype=float)
    array.setflags(write=False)
    return array


def oxygen_demand(atoms: dict[str, float]) -> float:
    """Return the O2 that burns one molecule to CO2, H2O and N2 [mol/mol]; negative if it gives."""
    return atoms.get("C", 0.0) + atoms.get("H", 0.0) / 4 - atoms.get("O", 0.0) / 2


def _heating_value(atoms: dict[str, float], name: str) -> float:
    """Return the lower heating value [J/mol], or zero if nothing is left to burn."""
    demand = oxygen_demand(atoms)
    if demand <= 0.0:
        return 0.0

    def enthalpy(gas: str) -> float:
        pure: Polynomial = polynomial(gas)
        return pure.enthalpy(T_REFERENCE)

    products = atoms.get("C", 0.0) * enthalpy("CO2") + atoms.get("H", 0.0) / 2 * enthalpy("H2O")
    products += atoms.get("N", 0.0) / 2 * enthalpy("N2")
    return enthalpy(name) + demand * enthalpy("O2") - products


def _condensation_heat(used: Sequence[dict[str, float]], lower: Array) -> Array:
    """Return upper minus lower heating value [J/mol], shape (components,)."""
    heat = polynomial("H2O").enthalpy(T_REFERENCE) - polynomial("H2O(L)").enthalpy(T_REFERENCE)
    waters = np.array([atoms.get("H", 0.0) / 2 for atoms in used])
    return np.where(lower > 0.0, waters * heat, 0.0)

"""How hot does a flame get?

The adiabatic temperature at constant pressure with dissociation: equilibrium among the fed
components, the usual products and radicals (O, H, OH, HO2, NO and others), as an ideal gas.
One case: flows (components,) [mol/s], enthalpy [W], pressure [Pa]. No soot.
"""

from dataclasses import dataclass
from math import isfinite

import numpy as np

from chainflow.thermo.components import Array, Matter
from chainflow.thermo.reactants import TRACE, convertible, reactants_of
from chainflow.thermo.search import Bracket
from chainflow.thermo.species import polynomial, species_of
from chainflow.thermo.validity import StateError, require_state, without_round_off

FLAME_GASES = (
    *("H2", "O2", "N2", "H2O", "CO", "CO2", "CH4", "NH3", "NO", "NO2", "N2O"),
    *("H", "O", "OH", "HO2", "H2O2", "N", "HCO", "HCN"),
)
START_TEMPERATURE = 2200.0  # [K]
LAST_STEP = 1e-5  # [K]


def flame_temperature(matter: Matter, flows: Array, enthalpy: float, pressure: float) -> float:
    """Return the adiabatic flame temperature [K] of a mixture with a given enthalpy.

    Parameters
    ----------
    matter : Matter
        The components.
    flows : array, shape (components,)
        Fuel, oxidiser and moderator together [mol/s], before or after burning.
    enthalpy : float
        Of the mixture [W].
    pressure : float
        [Pa].

    Raises
    ------
    StateError
        No flow, or no temperature of the data has this enthalpy.
    """
    return flame_state(matter, flows, enthalpy, pressure)[0]


def flame_state(
    matter: Matter, flows: Array, enthalpy: float, pressure: float
) -> tuple[float, dict[str, float]]:
    """Return the flame temperature [K] and all amounts in the flame [mol/s], radicals included."""
    require_state(START_TEMPERATURE, pressure)
    flows = without_round_off(np.asarray(flows, dtype=float), matter.components)
    if not flows.any() or not isfinite(enthalpy):
        raise StateError(
            f"no flame of {flows.sum():g} mol/s with {enthalpy} W: give a flow and its enthalpy"
        )
    flame = _Flame.of(matter, flows)
    bracket, temperature = Bracket(), START_TEMPERATURE
    for _ in range(200):
        amounts, found, capacity = flame.at(temperature, pressure)
        excess = found - enthalpy
        step = -excess / capacity
        if abs(step) < LAST_STEP or bracket.empty:
            return temperature + step, amounts
        if bracket.outside(temperature, excess):
            break
        temperature = bracket.next_trial(temperature, excess, step)
    raise StateError(
        f"no flame temperature from {bracket.lowest:g} to {bracket.highest:g} K has an enthalpy of "
        f"{enthalpy / flows.sum():.6g} J per mol"
    )


@dataclass(frozen=True, slots=True)
class _Flame:
    """What burns and what only gets hot: species by name, amounts [mol/s]."""

    burning: dict[str, float]
    idle: dict[str, float]

    @classmethod
    def of(cls, matter: Matter, flows: Array) -> "_Flame":
        fed = {n: f for n, f in zip(matter.components, flows.tolist(), strict=True) if f > 0.0}
        burning = convertible(_possible(matter, flows, tuple(fed)))
        idle = {name: flow for name, flow in fed.items() if name not in burning}
        return cls({name: fed.get(name, 0.0) for name in burning}, idle)

    def at(self, temperature: float, pressure: float) -> tuple[dict[str, float], float, float]:
        """Return all amounts [mol/s], their enthalpy [W] and its slope by temperature [W/K]."""
        enthalpy = capacity = 0.0
        for name, amount in self.idle.items():
            enthalpy += amount * polynomial(name).enthalpy(temperature)
            capacity += amount * polynomial(name).heat_capacity(temperature)
        if not self.burning:
            return self.idle, enthalpy, capacity
        reactants = reactants_of(tuple(self.burning))
        fed = np.array(list(self.burning.values()))
        found, response = reactants.balance(fed, sum(self.idle.values()), temperature, pressure)
        heats = reactants.enthalpies(temperature)
        capacity += float(found @ reactants.heat_capacities(temperature))
        capacity += float(heats @ response.by_temperature)
        amounts = dict(zip(self.burning, found.tolist(), strict=True))
        return amounts | self.idle, enthalpy + float(found @ heats), capacity


def _possible(matter: Matter, flows: Array, fed: tuple[str, ...]) -> tuple[str, ...]:
    """Return the flame gases and the fed components whose elements are all there."""
    held = matter.formula @ flows
    present = {
        element
        for element, amount in zip(matter.elements, held, strict=True)
        if amount > TRACE * held.sum()
    }
    names = dict.fromkeys((*FLAME_GASES, *fed))
    return tuple(name for name in names if set(species_of(name).composition) <= present)

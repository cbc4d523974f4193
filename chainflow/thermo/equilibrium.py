"""What does a gas become when it reacts to equilibrium, and how does that answer to its feed?

Compositions are those of the ideal gas (`chainflow.thermo.reactants`); enthalpies are those of
the real gas used everywhere else. One case: flows (components,) [mol/s], temperature [K],
pressure [Pa], enthalpy [W]. Only the named species react, all others pass and dilute. No solid
carbon forms: `chainflow.thermo.carbon` says whether it would.
"""

from functools import cache
from math import isfinite
from typing import NamedTuple

import numpy as np

from chainflow.basis.constants import GAS_CONSTANT
from chainflow.basis.names import suggest
from chainflow.thermo.components import Array, Matter
from chainflow.thermo.reactants import TRACE, Reactants, convertible, reactants_of
from chainflow.thermo.search import Bracket
from chainflow.thermo.species import polynomial, species_of
from chainflow.thermo.validity import StateError, require_state, without_round_off

START_TEMPERATURE = 900.0  # [K], where a search begins without a guess
LAST_STEP = 1e-5  # [K]: the slopes take such a step with an error below round-off


class Equilibrium(NamedTuple):
    """A gas at equilibrium and its slopes.

    From `equilibrate` the slopes are at constant temperature and pressure and the last three are
    absent (None). From `equilibrate_adiabatic`, `by_feed` and `by_enthalpy` are at constant
    enthalpy and flows of the other, and `by_temperature` remains the slope at constant feed.
    """

    flows: Array  # (components,) [mol/s]
    by_feed: Array  # (components, components): d flows_i / d feed_j
    by_temperature: Array  # (components,) [mol/(s K)]
    temperature: float  # [K]
    by_enthalpy: Array | None = None  # (components,) [mol/J]
    temperature_by_feed: Array | None = None  # (components,) [K s/mol]
    temperature_by_enthalpy: float | None = None  # [K/W]


class _Selection(NamedTuple):
    """Which places of the flow vector react, and the species set; None if nothing does."""

    reacting: Array
    passing: Array
    reactants: Reactants | None
    block: tuple[Array, ...]  # reacting by reacting
    beside: tuple[Array, ...]  # reacting by passing
    unchanged: Array  # slopes if nothing reacted


def equilibrate(
    matter: Matter,
    flows: Array,
    temperature: float,
    pressure: float,
    species: tuple[str, ...] | None = None,
    composition_temperature: float | None = None,
) -> Equilibrium:
    """Return the gas after reaction to equilibrium at a temperature and pressure.

    Parameters
    ----------
    matter : Matter
        The components.
    flows : array, shape (components,)
        What is fed [mol/s].
    temperature, pressure : float
        [K], [Pa].
    species : tuple of names, optional
        Components that react with each other; all by default.
    composition_temperature : float, optional
        Temperature [K] at which the equilibrium constants are taken instead (a temperature
        approach); the slope by temperature is then the one at it.

    Raises
    ------
    StateError
        Amounts, temperature or pressure outside the data.
    ValueError
        A name in `species` that is not among the components.
    """
    require_state(temperature, pressure)
    if composition_temperature is not None:
        require_state(composition_temperature, pressure)
    feed = without_round_off(np.asarray(flows, dtype=float), matter.components)
    chosen = _selection(matter, feed, species)
    at = temperature if composition_temperature is None else composition_temperature
    return _equilibrium(chosen, feed, at, pressure)._replace(temperature=temperature)


def _equilibrium(
    chosen: _Selection, feed: Array, temperature: float, pressure: float
) -> Equilibrium:
    size = len(feed)
    reactants = chosen.reactants
    if reactants is None:
        return Equilibrium(feed, chosen.unchanged.copy(), np.zeros(size), temperature)
    reacting, passing = chosen.reacting, chosen.passing
    diluent = float(feed[passing].sum())
    amounts, response = reactants.balance(feed[reacting], diluent, temperature, pressure)
    flows, by_temperature = feed.copy(), np.zeros(size)
    flows[reacting] = amounts
    by_temperature[reacting] = response.by_temperature
    by_feed = chosen.unchanged.copy()
    by_feed[chosen.block] = response.by_element @ reactants.formula
    by_feed[chosen.beside] = response.by_diluent[:, np.newaxis]
    return Equilibrium(flows, by_feed, by_temperature, temperature)


def equilibrate_adiabatic(
    matter: Matter,
    flows: Array,
    enthalpy: float,
    pressure: float,
    species: tuple[str, ...] | None = None,
    approach: float = 0.0,
    guess: float | None = None,
) -> Equilibrium:
    """Return the gas at equilibrium whose enthalpy is given: temperature and composition.

    Parameters
    ----------
    matter : Matter
        The components.
    flows : array, shape (components,)
        What is fed [mol/s].
    enthalpy : float
        Of the product [W], formation enthalpies included.
    pressure : float
        [Pa].
    species : tuple of names, optional
        Components that react with each other; all by default.
    approach : float
        The constants are taken at the product's temperature plus this [K].
    guess : float, optional
        Temperature [K] where the search begins.

    Raises
    ------
    StateError
        No temperature of the data has this enthalpy, or amounts or pressure are wrong.
    """
    feed = without_round_off(np.asarray(flows, dtype=float), matter.components)
    if not isfinite(enthalpy):
        raise StateError(f"enthalpy is {enthalpy} W, wanted a finite number")
    bracket = Bracket()
    temperature = bracket.clip(START_TEMPERATURE if guess is None else guess)
    if not feed.any():
        return _without_flow(feed, temperature)
    chosen = _selection(matter, feed, species)
    for _ in range(200):
        found = _equilibrium(chosen, feed, bracket.clip(temperature + approach), pressure)
        partial = matter.gas_partial(found.flows, temperature, pressure)
        excess = float(found.flows @ partial.enthalpy) - enthalpy
        capacity = partial.heat_capacity + float(partial.enthalpy @ found.by_temperature)
        step = -excess / capacity
        if abs(step) < LAST_STEP or bracket.empty:
            return _adiabatic(found, partial.enthalpy, capacity, temperature, step)
        if bracket.outside(temperature, excess):
            break
        temperature = bracket.next_trial(temperature, excess, step)
    raise StateError(
        f"no temperature from {bracket.lowest:g} to {bracket.highest:g} K gives the equilibrium "
        f"gas an enthalpy of {enthalpy / feed.sum():.6g} J per mol fed"
    )


def _adiabatic(
    found: Equilibrium, enthalpies: Array, capacity: float, temperature: float, step: float
) -> Equilibrium:
    """Take the last step along the slopes, and turn them into those at constant enthalpy."""
    flows = (found.flows + found.by_temperature * step).clip(0.0)
    by_feed = -(enthalpies @ found.by_feed) / capacity
    return Equilibrium(
        flows,
        found.by_feed + np.outer(found.by_temperature, by_feed),
        found.by_temperature,
        temperature + step,
        found.by_temperature / capacity,
        by_feed,
        1.0 / capacity,
    )


def _without_flow(feed: Array, temperature: float) -> Equilibrium:
    nothing = np.zeros(len(feed))
    return Equilibrium(feed, np.eye(len(feed)), nothing, temperature, nothing, nothing.copy(), 0.0)


def _selection(matter: Matter, feed: Array, species: tuple[str, ...] | None) -> _Selection:
    """Return what reacts: species of the named ones whose elements are there."""
    names = matter.components if species is None else tuple(species)
    held = matter.formula @ feed
    present = tuple((held > TRACE * held.sum()).tolist())
    return _select(matter.components, names, tuple(matter.elements), present)


@cache
def _select(
    components: tuple[str, ...],
    species: tuple[str, ...],
    elements: tuple[str, ...],
    present: tuple[bool, ...],
) -> _Selection:
    for name in species:
        if name not in components:
            raise ValueError(f"{name!r} cannot react: not a component{suggest(name, components)}")
    there = {element for element, is_there in zip(elements, present, strict=True) if is_there}
    possible = [n for n in components if n in species and set(species_of(n).composition) <= there]
    names = convertible(tuple(possible))
    reacting = np.array([i for i, n in enumerate(components) if n in names], dtype=int)
    passing = np.array([i for i, n in enumerate(components) if n not in names], dtype=int)
    return _Selection(
        reacting,
        passing,
        reactants_of(names) if names else None,
        np.ix_(reacting, reacting),
        np.ix_(reacting, passing),
        np.eye(len(components)),
    )


def equilibrium_constant(reaction: dict[str, float], temperature: float) -> float:
    """Return K of a gas reaction at 1 bar; `reaction` holds coefficients, products positive.

    Graphite is ``C(gr)`` and liquid water ``H2O(L)``. K is for pressures in bar.
    """
    return float(np.exp(-reaction_gibbs(reaction, temperature) / (GAS_CONSTANT * temperature)))


def reaction_gibbs(reaction: dict[str, float], temperature: float) -> float:
    """Return the Gibbs energy of a reaction at 1 bar [J/mol]."""
    return sum(count * polynomial(name).gibbs(temperature) for name, count in reaction.items())


def reaction_enthalpy(reaction: dict[str, float], temperature: float) -> float:
    """Return the enthalpy of a reaction at 1 bar [J/mol]."""
    return sum(count * polynomial(name).enthalpy(temperature) for name, count in reaction.items())

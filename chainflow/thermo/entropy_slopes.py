"""How does the entropy of phases in equilibrium answer to flows and temperature?

One case: flows (components,) [mol/s], temperature [K], pressure [Pa].  The entropy of a first
trace n of a component goes with ``-R n ln n``, whose slope has no end; it is the same wherever the
flow is brought, so it is left out, and differences between states of one flow are right.
"""

from typing import NamedTuple

import numpy as np

from chainflow.basis.constants import GAS_CONSTANT
from chainflow.thermo.components import Array, Matter
from chainflow.thermo.three_phases import Split, liquid_slopes
from chainflow.thermo.validity import some
from chainflow.thermo.water import split_slopes

_ABSENT = GAS_CONSTANT * np.log(1e-300)  # Cantera counts that share of what is absent


class _Liquid(NamedTuple):
    """One liquid: what is in it, its entropies and how it answers to flows and temperature."""

    flows: Array
    entropies: Array  # partial molar [J/(mol K)]
    traces: Array  # those of a component at a share of one [J/(mol K)]
    by_flows: Array
    by_temperature: Array
    heat_capacity: float


def entropy_slopes(
    matter: Matter,
    found: Split,
    temperature: float,
    pressure: float,
    dissolved: tuple[str, ...],
) -> tuple[Array, float]:
    """Return dS/dn (components,) [J/(mol K)] and dS/dT [W/K2] of phases in equilibrium.

    Of an absent component the slope is that without ``-R ln n``.
    """
    vapour = matter.gas_partial(found.gas, temperature, pressure)
    by_flows, own, moved = vapour.entropy.copy(), vapour.heat_capacity, 0.0
    absent = (found.gas + found.water + found.oil) == 0.0
    by_flows[absent] = 0.0
    share = np.ones(len(by_flows))  # of a trace of each component that goes to the gas
    for liquid in _liquids(matter, found, temperature, pressure, dissolved):
        gain = np.where(liquid.flows > 0.0, liquid.entropies - vapour.entropy, 0.0)
        by_flows += gain @ liquid.by_flows
        moved += float(gain @ liquid.by_temperature)
        own += liquid.heat_capacity
        taken = liquid.by_flows.diagonal()
        share -= taken
        by_flows[absent] += _of_traces(taken, liquid.traces, float(liquid.flows.sum()))[absent]
    by_flows[absent] += _of_traces(share, vapour.entropy + _ABSENT, float(found.gas.sum()))[absent]
    return by_flows, own / temperature + moved


def _of_traces(share: Array, pure: Array, total: float) -> Array:
    """Return the entropies of traces of which a share is in a phase, without ``-R ln n``."""
    there = share > 0.0
    if total <= 0.0:
        return np.zeros(len(share))
    mixed = pure + GAS_CONSTANT * np.log(total / np.where(there, share, 1.0))
    return np.where(there, share * mixed, 0.0)


def _liquids(
    matter: Matter,
    found: Split,
    temperature: float,
    pressure: float,
    dissolved: tuple[str, ...],
) -> list[_Liquid]:
    gas, water, oil = found
    state = temperature, pressure, dissolved
    if some(oil):
        both = liquid_slopes(matter, found, *state)
        wet, heated = both.water_by_flows, both.water_by_temperature
    elif some(water):
        moved = split_slopes(matter, gas + water, gas, water, *state)
        wet, heated = moved.by_flows, moved.by_temperature
    liquids = []
    if some(water):
        traces = np.zeros(len(water))
        for place, name in zip(*matter.solubles(dissolved), strict=True):
            if name != "H2O":
                traces[place] = matter.dissolved_entropy(name, temperature, 1.0)
        entropies = matter.water_partial_entropies(water, temperature, pressure)
        capacity = matter.water_heat_capacity(water, temperature, pressure)
        liquids.append(_Liquid(water, entropies, traces, wet, heated, capacity))
    if some(oil):
        assert matter.oil is not None
        entropies = matter.oil.partial_entropies(oil, temperature)
        capacity = float(oil @ matter.oil.heat_capacities(temperature))
        pure, moves = matter.oil.entropies(temperature), both.oil_by_flows
        liquids.append(_Liquid(oil, entropies, pure, moves, both.oil_by_temperature, capacity))
    return liquids

"""How do the enthalpy, entropy and temperature of a stream answer to its flows and each other?

One case, closed forms; slopes of equipment, by ``[n_1..n_C, H]`` of what lines carry, are made of
these.
"""

from functools import lru_cache

import numpy as np

from chainflow.thermo import entropy_slopes as entropies
from chainflow.thermo import liquefied
from chainflow.thermo.components import Array
from chainflow.thermo.phases import Split, phase_slopes
from chainflow.thermo.streams import DISSOLVED, Stream, is_cold
from chainflow.thermo.validity import some

_KEPT = 128  # slopes of each kind


@lru_cache(maxsize=_KEPT)
def enthalpy_slopes(stream: Stream, dissolved: tuple[str, ...] = DISSOLVED) -> tuple[Array, float]:
    """Return dH/dn (components,) [J/mol] and dH/dT [W/K] of one stream, phases in equilibrium.

    The first at constant temperature and pressure, the second at constant flows. What boils alone
    (as many phases as components) has no such slopes: dH/dT is infinite and dH/dn is the mean
    enthalpy per mol.
    """
    temperature, pressure = float(stream.temperature), float(stream.pressure)
    if is_cold(stream):
        return _fixed(*_cold_slopes(stream)[:2])
    if _boils(stream):
        return _fixed(_boiling_slopes(stream), np.inf)
    found = phase_slopes(stream.matter, _split_of(stream), temperature, pressure, dissolved)
    return _fixed(*found)


def _cold_slopes(stream: Stream) -> liquefied.ColdSlopes:
    return liquefied.cold_slopes(
        stream.matter, stream.flows, float(stream.enthalpy), float(stream.pressure)
    )


def _split_of(stream: Stream) -> Split:
    return Split(stream.gas, stream.water, stream.liquid)


def _boiling_slopes(stream: Stream) -> Array:
    """Return the enthalpy per mol of each component over the phases it is in [J/mol]."""
    matter, level, pressure = stream.matter, float(stream.temperature), float(stream.pressure)
    if not some(stream.liquid):
        by_flows = matter.water_partial(level, pressure).enthalpy.copy()
        by_flows[matter.water] = float(stream.enthalpy) / float(stream.total)
        return by_flows
    assert matter.oil is not None
    vapour = matter.gas_partial(stream.gas, level, pressure).enthalpy.copy()
    held = stream.gas * vapour + stream.liquid * matter.oil.enthalpies(level, pressure)
    if some(stream.water):
        held = held + stream.water * matter.water_partial(level, pressure).enthalpy
    return np.divide(held, stream.flows, out=vapour, where=stream.flows > 0.0)


@lru_cache(maxsize=_KEPT)
def entropy_slopes(stream: Stream, dissolved: tuple[str, ...] = DISSOLVED) -> tuple[Array, float]:
    """Return dS/dn (components,) [J/(mol K)] and dS/dT [W/K2] of one stream, as above."""
    temperature, pressure = float(stream.temperature), float(stream.pressure)
    if is_cold(stream):
        return _fixed(*_cold_slopes(stream)[2:])
    if _boils(stream):
        by_flows = np.zeros(len(stream.flows))
        if not some(stream.liquid):
            by_flows[stream.matter.water] = float(stream.entropy) / float(stream.total)
        return _fixed(by_flows, np.inf)
    split = _split_of(stream)
    return _fixed(*entropies.entropy_slopes(stream.matter, split, temperature, pressure, dissolved))


@lru_cache(maxsize=_KEPT)
def temperature_slopes(
    stream: Stream, dissolved: tuple[str, ...] = DISSOLVED
) -> tuple[Array, float]:
    """Return dT/dn (components,) [K s/mol] at constant enthalpy, and dT/dH [K/W].

    Both at constant pressure; zero for pure boiling water and without flow.
    """
    by_flows, by_temperature = enthalpy_slopes(stream, dissolved)
    if by_temperature == 0.0 or np.isinf(by_temperature):
        return _fixed(np.zeros(len(by_flows)), 0.0)
    return _fixed(-by_flows / by_temperature, 1.0 / by_temperature)


def _fixed(slopes: Array, slope: float) -> tuple[Array, float]:
    """Return slopes that may be kept: nobody can write into them."""
    slopes.setflags(write=False)
    return slopes, slope


def _boils(stream: Stream) -> bool:
    """Return whether the stream has as many phases as components, as pure boiling water."""
    if some(stream.liquid):
        parts = (stream.gas, stream.water, stream.liquid)
        count = sum(bool(some(part)) for part in parts)
        return bool(np.count_nonzero(stream.flows) < count)
    place = stream.matter.water
    if place is None or not stream.water[place] > 0.0 or not stream.gas[place] > 0.0:
        return False
    return bool(stream.flows[place] == stream.flows.sum())

"""What is the least work of a separation, and at which temperature do its outlets leave?

SI throughout: flows [mol/s], temperature [K], pressure [Pa], work and enthalpy [W].
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from chainflow.equipment.base import Array, Caution
from chainflow.thermo.components import Matter
from chainflow.thermo.exergy import Environment
from chainflow.thermo.stream_slopes import enthalpy_slopes
from chainflow.thermo.streams import Stream
from chainflow.thermo.validity import StateError

_MOST_STEPS = 60
_SETTLED = 1e-13  # relative, of a temperature


def minimum_work(entering: Sequence[Stream], leaving: Sequence[Stream]) -> float:
    """Return the exergy that leaves less the exergy that enters [W]."""
    environment = Environment()
    out = sum(float(s.exergy(environment)) for s in leaving)
    return out - sum(float(s.exergy(environment)) for s in entering)


def worth_of(work: float, heat: float, level: float, ambient: float) -> float:
    """Return the work [W] that stated work and heat at a temperature [K] could do at most."""
    return work + heat * max(0.0, 1.0 - ambient / level)


def free_separation(worth: float, least: float) -> tuple[Caution, ...]:
    """Return the idealisation of a separation that takes less than the least work."""
    if worth >= least - 1e-9 * abs(least) or least <= 0.0:
        return ()
    text = (
        f"separates for {worth / 1e3:.4g} kW of work, the least that any separation takes is "
        f"{least / 1e3:.4g} kW"
    )
    return (Caution("free-separation", text),)


def at_one_temperature(
    matter: Matter,
    parts: Sequence[tuple[Array, float]],
    enthalpy: float,
    guess: float,
) -> list[Stream]:
    """Return streams of (flows, pressure) at the one temperature at which they hold an enthalpy.

    Newton inside a bracket; enthalpy rises steadily with temperature.  The last round-off of the
    enthalpy is given to the largest stream, so that energy closes.
    """
    level, low, high = guess, 0.0, np.inf
    for _ in range(_MOST_STEPS):
        streams = [Stream.at(matter, flows, level, pressure) for flows, pressure in parts]
        missing = enthalpy - sum(float(s.enthalpy) for s in streams)
        capacity = sum(enthalpy_slopes(s)[1] for s in streams if float(s.total) > 0.0)
        if capacity == 0.0:
            return streams
        low, high = (level, high) if missing > 0.0 else (low, level)
        step = missing / capacity
        better = level + step
        if not low <= better <= high:
            better = 0.5 * (low + high) if np.isfinite(high) else 2.0 * level
        if abs(better - level) <= _SETTLED * level:
            return _closed(streams, missing)
        level = better
    return _closed(streams, missing)


def _closed(streams: list[Stream], missing: float) -> list[Stream]:
    """Give the last round-off to the largest stream."""
    sizes = [float(s.total) for s in streams]
    scale = sum(abs(float(s.enthalpy)) + 2500.0 * float(s.total) for s in streams)
    if abs(missing) > 1e-9 * scale:
        raise StateError("no temperature gives the outlets of a separation their enthalpy")
    largest = sizes.index(max(sizes))
    streams[largest] = replace(
        streams[largest], enthalpy=float(streams[largest].enthalpy) + missing
    )
    return streams


def one_temperature_blocks(streams: Sequence[Stream], parts: Sequence[Array]) -> list[Array] | None:
    """Return the slopes of outlets that leave at the one temperature that closes energy.

    `parts` says how the flows of each outlet answer to those of the inlet, (components,
    components); what comes back is by ``[n_1..n_C, H]`` of the inlet.  None where something boils
    alone, so that temperature and flows do not fix its state.
    """
    found = [enthalpy_slopes(stream) for stream in streams]
    capacity = sum(by_level for _, by_level in found)
    if not np.isfinite(capacity) or capacity == 0.0:
        return None
    fixed = [by_flow @ part for (by_flow, _), part in zip(found, parts, strict=True)]
    level = np.append(-sum(fixed), 1.0) / capacity
    blocks = []
    for part, row, (_, by_level) in zip(parts, fixed, found, strict=True):
        size = len(part)
        block = np.zeros((size + 1, size + 1))
        block[:size, :size] = part
        block[size] = np.append(row, 0.0) + by_level * level
        blocks.append(block)
    return blocks

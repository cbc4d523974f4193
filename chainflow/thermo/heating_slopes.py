"""How does the heating value of a stream answer to what flows, and to its enthalpy?

Gas burns as it is; what is in the oil burns from the liquid, so the phases count.  One case.
"""

import numpy as np

from chainflow.thermo.components import Array
from chainflow.thermo.stream_slopes import enthalpy_slopes, temperature_slopes
from chainflow.thermo.streams import DISSOLVED, Stream
from chainflow.thermo.three_phases import Split, liquid_slopes
from chainflow.thermo.validity import some


def heating_value_slopes(stream: Stream, *, upper: bool) -> Array:
    """Return the slopes of the heating value [W] by ``[n_1..n_C, H]`` of one stream.

    Not finite where one component boils alone: there the phases have no slopes.
    """
    matter = stream.matter
    slopes = np.append(matter.hhv if upper else matter.lhv, 0.0)
    if matter.oil is None or not some(stream.liquid):
        return slopes
    heats = matter.oil.vaporisation
    if not some(stream.gas) and not some(stream.water):
        slopes[:-1] -= heats
        return slopes
    if not np.isfinite(enthalpy_slopes(stream)[1]):
        return np.full(len(slopes), np.nan)
    phases = Split(stream.gas, stream.water, stream.liquid)
    level, pressure = float(stream.temperature), float(stream.pressure)
    moved = liquid_slopes(matter, phases, level, pressure, DISSOLVED)
    by_level = float(heats @ moved.oil_by_temperature)
    to_flow, to_enthalpy = temperature_slopes(stream)
    slopes[:-1] -= heats @ moved.oil_by_flows + by_level * to_flow
    slopes[-1] = -by_level * to_enthalpy
    return slopes

"""Which voltage splits water, from the Gibbs energies of the species table?

Two electrons per molecule, gases at 1 bar: ``E = dG/2F`` and ``E_tn = dH/2F`` [V], temperature [K].
"""

from math import log
from typing import Literal

from chainflow.basis.constants import FARADAY, GAS_CONSTANT, P_REFERENCE
from chainflow.thermo.species import polynomial
from chainflow.thermo.validity import require_state
from chainflow.thermo.water import CRITICAL_TEMPERATURE

WaterPhase = Literal["liquid", "steam"]


def reversible_voltage(temperature: float, phase: WaterPhase = "liquid") -> float:
    """Return the voltage below which water cannot be split [V], everything at 1 bar."""
    return _splitting(temperature, phase, "gibbs") / (2 * FARADAY)


def thermoneutral_voltage(temperature: float, phase: WaterPhase = "liquid") -> float:
    """Return the voltage at which the cell neither takes nor gives heat [V]."""
    return _splitting(temperature, phase, "enthalpy") / (2 * FARADAY)


def nernst_shift(
    temperature: float, hydrogen: float, oxygen: float, steam: float | None = None
) -> float:
    """Return what partial pressures [Pa] add to the reversible voltage [V].

    ``RT/2F ln(p_H2 p_O2^0.5 / p_H2O)`` in bar; liquid water has activity one (`steam` None).
    """
    order = log(hydrogen / P_REFERENCE) + 0.5 * log(oxygen / P_REFERENCE)
    order -= 0.0 if steam is None else log(steam / P_REFERENCE)
    return GAS_CONSTANT * temperature / (2 * FARADAY) * order


def _splitting(temperature: float, phase: WaterPhase, which: str) -> float:
    """Return the change of a property in H2O -> H2 + 1/2 O2 [J/mol]."""
    require_state(temperature, P_REFERENCE)
    names = {"liquid": "H2O(L)", "steam": "H2O"}
    if phase not in names:
        raise ValueError(f"phase is {phase!r}, wanted 'liquid' or 'steam'")
    if phase == "liquid" and temperature > CRITICAL_TEMPERATURE:
        raise ValueError(f"liquid water at {temperature:g} K: take phase='steam'")
    values = [getattr(polynomial(n), which)(temperature) for n in ("H2", "O2", names[phase])]
    return float(values[0] + values[1] / 2 - values[2])

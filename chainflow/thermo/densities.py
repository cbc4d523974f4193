"""How dense is a pure gas or liquid that is stored, and would a gas liquefy?

Densities from the reference equations of state in Cantera's pure fluids (Reynolds, Thermodynamic
Properties in SI, 1979; hydrogen, methane and others within 0.2 % of newer ones), where
Redlich-Kwong is up to 4 % off. They are used for densities only: their enthalpies and entropies
do not share the reference state of the species table. [K], [Pa], [kg/m3].
"""

from functools import cache
from math import exp
from typing import Any

import cantera as ct
import numpy as np

from chainflow.thermo.components import Array, Matter
from chainflow.thermo.species import LOWEST_TEMPERATURE, species_of
from chainflow.thermo.validity import StateError, require_amounts, require_state

PURE_FLUIDS = {
    "H2": "Hydrogen",
    "O2": "Oxygen",
    "N2": "Nitrogen",
    "H2O": "Water",
    "CO2": "CarbonDioxide",
    "CH4": "Methane",
}


def pure_density(name: str, temperature: float, pressure: float) -> float:
    """Return the density of a pure component [kg/m3], gas, liquid or supercritical.

    Components without a reference equation of state take Redlich-Kwong, as a gas. Raises
    `StateError` where the equation does not hold.
    """
    if name not in PURE_FLUIDS:
        require_state(temperature, pressure)
        return Matter.of((name,)).gas_density(np.ones(1), temperature, pressure)
    fluid = _pure_fluid(name)
    if not fluid.min_temp <= temperature <= fluid.max_temp or not pressure > 0.0:
        raise StateError(
            f"density of {name} at {temperature:g} K and {pressure:g} Pa: wanted "
            f"{fluid.min_temp:g} to {fluid.max_temp:g} K and a pressure above zero"
        )
    try:
        reset(fluid)
        fluid.TP = temperature, pressure
    except ct.CanteraError as problem:
        raise StateError(
            f"density of {name} at {temperature:g} K and {pressure:g} Pa: the equation of state "
            "has no answer there; change temperature or pressure a little"
        ) from problem
    return float(fluid.density)


def reset(fluid: Any) -> None:
    """Bring a pure fluid to a warm thin state, so that what follows does not depend on the past."""
    fluid.TD = 1.5 * fluid.critical_temperature, 0.1 * fluid.critical_density


@cache
def _pure_fluid(name: str) -> Any:
    return getattr(ct, PURE_FLUIDS[name])()


def liquefying(
    matter: Matter, flows: Array, temperature: float, pressure: float
) -> tuple[str, ...]:
    """Return the components, water apart, whose partial pressure is above saturation.

    The gas model keeps them as vapour all the same, so the answer is worth a caution. Saturation
    by the corresponding states of Ambrose and Walton (see `vapour_pressure`); mixtures may liquefy
    a little earlier.
    """
    total = require_amounts(flows, matter.components)
    if total == 0.0 or temperature < LOWEST_TEMPERATURE:  # colder gases have a reference equation
        return ()
    found = []
    for name, flow in zip(matter.components, flows.tolist(), strict=True):
        partial = max(flow, 0.0) / total * pressure
        if name != "H2O" and partial > vapour_pressure(name, temperature):
            found.append(name)
    return tuple(found)


def vapour_pressure(name: str, temperature: float) -> float:
    """Return the saturation pressure of a pure component [Pa]; infinite above its critical point.

    ``ln p_r = f0 + omega f1 + omega^2 f2``: Ambrose and Walton, Pure Appl. Chem. 61 (1989) 1395,
    as given in Poling, Prausnitz and O'Connell, 5th edition, eq. 7-4.2. Within 2 % for CO2 and
    light hydrocarbons between 0.1 bar and the critical point; too low for methanol (by a third at
    280 K) and ammonia (4 % at 220 K), which errs towards the caution.
    """
    data = species_of(name).input_data["critical-parameters"]
    ratio = temperature / data["critical-temperature"]
    if ratio >= 1.0:
        return float("inf")
    tau = 1.0 - ratio
    powers = np.array([tau, tau**1.5, tau**2.5, tau**5])
    terms = _AMBROSE_WALTON @ powers / ratio
    omega = data["acentric-factor"]
    logarithm = terms[0] + omega * terms[1] + omega**2 * terms[2]
    return float(data["critical-pressure"] * exp(logarithm))


_AMBROSE_WALTON = np.array(
    [
        [-5.97616, 1.29874, -0.60394, -1.06841],
        [-5.03365, 1.11505, -5.41217, -7.46628],
        [-0.64771, 2.41539, -4.26979, 3.25259],
    ]
)

"""Feeds as they come in a plant, for the cases of every kind.  SI inside, degC and bar here."""

import numpy as np

from chainflow.equipment.ports import Heat, Light, rate_of, times
from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.streams import Stream

MATTER = Matter.of(DEFAULT_COMPONENTS)
METHANOL = Matter.of(("H2", "N2", "H2O", "CO", "CO2", "CH3OH"))
AMMONIA = Matter.of(("H2", "O2", "N2", "H2O", "NH3"))


def stream(amounts, celsius=25.0, bar=1.0, matter=MATTER):
    """A stream of components [mol/s] at a temperature [degC] and pressure [bar]."""
    return Stream.at(matter, matter.vector(amounts), celsius + 273.15, bar * 1e5)


def partly_boiled():
    """Water at 5 bar of which half has boiled off."""
    flows = MATTER.vector({"H2O": 2.0})
    ends = [stream({"H2O": 2.0}, celsius, 5.0).enthalpy for celsius in (150.0, 153.0)]
    return Stream.from_enthalpy(MATTER, flows, sum(ends) / 2, 5e5)


WATER = stream({"H2O": 1.0}, bar=30.0)
OXYGEN = stream({"O2": 0.98, "H2O": 0.02}, 40.0, 1.2)
AIR = stream({"N2": 0.772, "O2": 0.207, "Ar": 0.009, "CO2": 0.0004, "H2O": 0.0116}, 25.0, 1.2)
CARBON = stream({"CO2": 0.99, "N2": 0.01}, 25.0, 30.0)
HYDROGEN = stream({"H2": 4.0, "H2O": 0.02}, 60.0, 30.0)
FUEL = stream({"CH4": 0.9, "H2": 0.3, "CO2": 0.1, "N2": 0.01}, 20.0, 1.2)
MODERATOR = stream({"CO2": 6.0, "H2O": 0.3, "O2": 0.05, "N2": 0.02}, 45.0, 1.2)
SYNTHESIS = stream(
    {"H2": 4.0, "CO2": 1.0, "CO": 0.2, "CH4": 0.3, "H2O": 0.1, "N2": 0.02}, 220.0, 12.0
)
PRODUCT = stream({"CH4": 1.0, "H2O": 2.0, "H2": 0.2, "CO2": 0.05, "N2": 0.02}, 320.0, 12.0)
FLUE = stream({"CO2": 6.5, "H2O": 3.0, "O2": 0.1, "CO": 0.01, "N2": 0.05}, 1400.0, 1.2)
HOT = Heat(8e4, 900.0, 500.0, 680.0)
WARM = Heat(3e4, 420.0, 350.0, 384.0)
NOON = Light(5e5, 900.0, 0.85, 293.15, 2.0)


# condensing: most of its heat near its cold end
CONDENSING = Heat.total(
    [
        Heat.between(1e4, 600.0, 433.0),
        Heat.between(3e4, 433.0, 400.0),
        Heat.between(2e4, 400.0, 360.0),
        Heat.between(1e4, 360.0, 305.0),
    ]
)
# steam raised and superheated: most of the heat at one temperature
STEAM = Heat.total(
    [
        Heat.between(8e3, 298.15, 453.0),
        Heat(4e4, 453.0, 453.0, 453.0),
        Heat.between(6e3, 453.0, 560.0),
    ]
)


def numbers(flow):
    """A flow as numbers: flows, enthalpy, temperature and pressure; heat; or W."""
    if isinstance(flow, Stream):
        return np.concatenate([flow.flows, [flow.enthalpy, flow.temperature, flow.pressure]])
    if isinstance(flow, Heat):
        return heat_numbers(flow)
    return np.array(flow.numbers if isinstance(flow, Light) else [float(flow)])


def heat_numbers(heat):
    """Rate, start, end and mean of every piece of a heat flow."""
    return np.ravel([(p.rate, p.start, p.end, p.mean) for p in heat.pieces])


def rate(flow):
    """What heat, power or light carries [W]; matter carries none of them."""
    return rate_of(flow)


def enlarged(flow, factor):
    """The same flow in another amount."""
    if isinstance(flow, tuple):
        return tuple(enlarged(part, factor) for part in flow)
    return times(flow, factor)

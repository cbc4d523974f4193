"""Electrolysers and fuel cells as the tests run them: feeds, a stack at work, curves."""

import math

import numpy as np

from chainflow.equipment.base import Site
from chainflow.equipment.electrolysis import Electrolyser
from chainflow.equipment.fuel_cell import FuelCell
from tests.equipment.feeds import MATTER, stream

WATER = stream({"H2O": 1.0}, 25.0, 90.0)
STEAM = stream({"H2O": 1.0}, 160.0, 1.6)
AIR = stream({"N2": 0.79, "O2": 0.21}, 25.0, 1.6)
HYDROGEN = stream({"H2": 1.0, "H2O": 0.02}, 25.0, 5.0)


def electrolyser(model, celsius, bar, **settings):
    return Electrolyser.model_validate(
        {
            "model": model,
            "temperature": celsius + 273.15,
            "pressure": bar * 1e5,
            **settings,
        }
    )


def fuel_cell(model, celsius, bar, **settings):
    return FuelCell.model_validate(
        {"model": model, "temperature": celsius + 273.15, "pressure": bar * 1e5, **settings}
    )


def at_work(piece, *, power=1e6, water=None, sweep=None, fuel=HYDROGEN, air=AIR):
    """The outcome of a stack with one megawatt, or of a fuel cell with one mol/s of fuel."""
    if isinstance(piece, FuelCell):
        feeds = {"fuel": (fuel,), "oxidiser": air}
    else:
        hot = piece.model == "solid-oxide"
        feeds = {"water": water or (STEAM if hot else WATER)}
        if sweep is not None:
            feeds["sweep"] = sweep
        if not piece.calls_for_power:
            feeds["power"] = (power,)
    return piece.operate(feeds, {}, Site(MATTER, 298.15, frozenset(feeds), frozenset()))


def voltages(curve, densities):
    """Cell voltages [V] at current densities [A/cm2]."""
    return [curve.voltage(1e4 * density) for density in densities]


def heat_supplied(outcome):
    """Heat that comes from outside [W], electric or not."""
    return sum(d.heat for d in outcome.duties if d.heat > 0.0 and d.met_by != "own")


def rises(values):
    return bool(np.all(np.diff(values) > 0.0)) and all(math.isfinite(v) for v in values)

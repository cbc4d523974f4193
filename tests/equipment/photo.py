"""Photoelectrodes as the tests run them: a device in the light, its outcome, its results."""

from chainflow.equipment.base import Light, Site
from chainflow.equipment.photoelectrode import Photoelectrode
from tests.equipment.feeds import MATTER, stream

WATER = stream({"H2O": 1.0}, 25.0, 2.0)
OXIDE = {"band_gap": "2.0 eV", "shape": {"onset": "0.5 V", "half_wave": "0.8 V"}}
TANDEM = {**OXIDE, "cell": {"gaps": ["1.1 eV"], "in_series": 2}}
BUDGET = (
    "not_absorbed_W",
    "passed_W",
    "not_collected_W",
    "thermalised_W",
    "voltage_not_used_W",
    "hydrogen_work_W",
)


def sun(irradiance=1000.0, area=100.0):
    return Light(irradiance * area, irradiance, 0.9, 298.15, 1.0)


def device(**settings):
    return Photoelectrode.model_validate(settings)


def at_work(piece, irradiance=1000.0, area=100.0):
    feeds = {"light": sun(irradiance, area), "water": WATER}
    return piece.operate(feeds, {}, Site(MATTER, 298.15, frozenset(feeds), frozenset()))


def results(piece, irradiance=1000.0, area=100.0):
    return at_work(piece, irradiance, area).results


def codes(piece, irradiance=1000.0):
    return {caution.code for caution in at_work(piece, irradiance).cautions}

"""Cases of the sky, the photovoltaic field and the concentrator."""

from chainflow.equipment.electrolysis import Electrolyser
from chainflow.equipment.ports import Light
from tests.equipment.feeds import NOON

MORNING = Light(8e4, 120.0, 0.5, 281.15, 0.0)
FACING = Light(2e6, 850.0, 1.0, 293.15, 2.0)  # on mirrors that follow the sun
HILL = {"latitude": "46.4 deg", "longitude": "9.6 deg", "altitude": "1500 m"}
WARM = {"temperature": "60 degC", "pressure": "30 bar"}


def sunlight(add):
    clear = {"place": HILL, "aperture": "600 m2"}
    sized = {"extensive": (("aperture",),)}
    add("clear sky, brightest hour", "sunlight", clear, **sized)
    add(
        "clear sky, tilted, by the hour",
        "sunlight",
        {**clear, "hour": "21 Dec 15:00", "plane": {"tilt": "45 deg", "sky": "perez"}},
        **sized,
    )
    add(
        "clear sky, following",
        "sunlight",
        {**clear, "hour": "typical", "plane": {"mount": "single-axis", "ground_cover": "40 %"}},
        **sized,
    )
    glass = {"tilt": "30 deg", "cover": {"coating": 1.29}}
    add(
        "clear sky, through glass",
        "sunlight",
        {**clear, "hour": "21 Dec 10:00", "plane": glass},
        **sized,
    )
    add("clear sky, at night", "sunlight", {**clear, "hour": "3 Mar 2:00"}, **sized)
    field(add)
    concentrator(add)


def field(add):
    diode = {"model": "one-diode"}
    add("one diode, noon", "pv-field", diode, {"light": NOON})
    cool = {"module": {"series_resistance": "0.4 ohm"}, "cell_temperature": {"model": "noct"}}
    add("one diode, morning", "pv-field", {**diode, **cool, "series": 15}, {"light": MORNING})
    add("one diode, night", "pv-field", diode, {"light": Light(0.0, 0.0, 0.0, 275.15, 1.0)})
    add(
        "one diode, light beside the modules",
        "pv-field",
        {**diode, "strings": 10, "cell_temperature": {"model": "loss-factor"}},
        {"light": NOON},
        extensive=(("strings",),),
    )
    roof = {"model": "back-of-module", "mounting": "roof", "front_over_back": "2 K"}
    add("one diode on a roof", "pv-field", {**diode, "cell_temperature": roof}, {"light": NOON})
    stack = Electrolyser.model_validate({"model": "voltage", "voltage": "1.9 V", **WARM})
    hung = {**diode, "series": 10, "coupling": {"load": "stack", "cells": 155}}
    add("on a stack", "pv-field", hung, {"light": NOON}, others={"stack": stack})
    many = {**hung, "coupling": {"load": "stack", "cells": 250}}
    add("on too many cells", "pv-field", many, {"light": NOON}, others={"stack": stack}, unmet=True)


def concentrator(add):
    hot = {"temperature": "900 degC"}
    add("field of mirrors", "concentrator", hot, {"light": FACING})
    dish = {"concentration": 2000, "optical_efficiency": "85 %", "convection": "20 W/(m2*K)"}
    add("dish", "concentrator", {**hot, **dish}, {"light": FACING})
    add("half of it from the sky", "concentrator", hot, {"light": NOON})
    add("too hot", "concentrator", {"temperature": "1500 degC"}, {"light": MORNING})

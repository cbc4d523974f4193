"""The range in which each knob of the shipped flowsheets makes sense: (low, high, unit).

The same ranges stand as comments behind the knobs in the files; a test keeps the two alike.
"""

Range = tuple[float, float, str]

SUN = {"sun": (100, 1100, "W/m2"), "aperture": (1000, 500000, "m2")}

HYDROGEN: dict[str, Range] = {**SUN, "energy_use": (45, 60, "kWh/kg")}
METHANE = {
    **SUN,
    "energy_use": (45, 60, "kWh/kg"),
    "hot": (260, 450, "degC"),
    "purge": (0, 10, "%"),
    "inert": (0, 2, "%"),
}

CYCLE = {
    **SUN,
    "hot": (260, 400, "degC"),
    "recycle": (0, 90, "%"),
    "purge": (0, 5, "%"),
    "inert": (0, 2, "%"),
    "capture": (0, 100, "%"),
    "flame": (900, 1500, "degC"),
    "keep": (50, 250, "bar"),
}

LIT = {**SUN, "strip": (4, 15, "%"), "onset": (0.2, 0.6, "V")}

RANGES: dict[str, dict[str, Range]] = {
    "hydrogen-store": {
        **SUN,
        "field": (12, 28, "%"),
        "energy_use": (45, 60, "kWh/kg"),
        "keep": (50, 700, "bar"),
        "engine": (30, 48, "% LHV"),
    },
    "methane-store": {
        **SUN,
        "hot": (260, 450, "degC"),
        "purge": (0, 10, "%"),
        "inert": (0, 2, "%"),
        "keep": (50, 300, "bar"),
    },
    "methane-compressed": {
        **METHANE,
        "keep": (50, 300, "bar"),
        "engine": (30, 48, "% LHV"),
    },
    "methane-liquid": {
        **METHANE,
        "machine": (15, 50, "%"),
        "boil_off": (0, 10, "%"),
        "engine": (30, 48, "% LHV"),
    },
    "methane-cycle": {**CYCLE, "shift": (800, 1000, "degC"), "regain": (150, 700, "degC")},
    "methane-cycle-direct": CYCLE,
    "hydrogen-direct-coupled": {
        "sun": (200, 1100, "W/m2"),
        "aperture": (10000, 40000, "m2"),
        "air": (0, 40, "degC"),
        "cells": (100, 250, "m2"),
        "keep": (50, 500, "bar"),
        "engine": (30, 48, "% LHV"),
    },
    "methane-direct-coupled": {
        "sun": (200, 1100, "W/m2"),
        "aperture": (10000, 40000, "m2"),
        "air": (0, 40, "degC"),
        "cells": (100, 250, "m2"),
        "hot": (260, 450, "degC"),
        "purge": (0, 10, "%"),
        "inert": (0, 2, "%"),
        "keep": (50, 300, "bar"),
    },
    "solar-heat-syngas": {
        "beam": (400, 1000, "W/m2"),
        "sun": (200, 1100, "W/m2"),
        "aperture": (5000, 100000, "m2"),
        "hot": (900, 1200, "degC"),
        "shift": (750, 890, "degC"),
        "spare": (1, 200, "kW"),
    },
    "hydrogen-fuel-cell": {
        **HYDROGEN,
        "keep": (50, 700, "bar"),
        "current": (0.1, 1.2, "A/cm2"),
        "warm": (60, 80, "degC"),
    },
    "hydrogen-700-bar": {**HYDROGEN, "keep": (350, 900, "bar"), "each": (55, 85, "%")},
    "hydrogen-liquid": {
        **HYDROGEN,
        "machine": (15, 45, "%"),
        "boil_off": (0, 10, "%"),
        "current": (0.1, 1.2, "A/cm2"),
    },
    "steam-methane": {
        **SUN,
        "convert": (75, 88, "%"),
        "hot": (260, 350, "degC"),
        "purge": (0, 10, "%"),
        "inert": (0, 2, "%"),
        "keep": (50, 300, "bar"),
    },
    "photoelectrode-hydrogen": {**LIT, "separation": (30, 95, "%"), "keep": (50, 700, "bar")},
    "photoelectrode-methane": {
        **LIT,
        "hot": (260, 450, "degC"),
        "purge": (0, 10, "%"),
        "inert": (0, 2, "%"),
        "keep": (50, 300, "bar"),
    },
    "liquid-fuel": {
        **SUN,
        "shift": (850, 1000, "degC"),
        "regain": (150, 700, "degC"),
        "growth": (80, 95, "%"),
        "once": (40, 60, "%"),
        "again": (0, 75, "%"),
        "reform": (850, 1000, "degC"),
        "purge": (0.5, 10, "%"),
        "inert": (0, 2, "%"),
        "engine": (30, 48, "% LHV"),
    },
    "gas-turbine": {
        "fuel": (20, 5000, "kg/h"),
        "high": (5, 30, "bar"),
        "fire": (900, 1400, "degC"),
        "squeeze": (78, 90, "%"),
        "blades": (80, 92, "%"),
    },
    "steam-cycle": {
        "fuel": (20, 5000, "kg/h"),
        "steam": (10, 80, "bar"),
        "superheat": (50, 250, "K"),
        "blades": (70, 88, "%"),
        "leaving": (110, 200, "degC"),
    },
    "battery": {
        **SUN,
        "field": (12, 28, "%"),
        "round_trip": (70, 95, "%"),
        "leak": (0, 5, "%/d"),
        "hours": (1, 48, "h"),
    },
}

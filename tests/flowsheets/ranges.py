"""The range in which each knob of the shipped flowsheets makes sense: (low, high, unit).

The same ranges stand as comments behind the knobs in the files; a test keeps the two alike.
"""

Range = tuple[float, float, str]

SUN = {"sun": (100, 1100, "W/m2"), "aperture": (1000, 500000, "m2")}

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
    "methane-cycle": {**CYCLE, "shift": (800, 1000, "degC"), "regain": (150, 700, "degC")},
    "methane-cycle-direct": CYCLE,
    "battery": {
        **SUN,
        "field": (12, 28, "%"),
        "round_trip": (70, 95, "%"),
        "leak": (0, 5, "%/d"),
        "hours": (1, 48, "h"),
    },
}

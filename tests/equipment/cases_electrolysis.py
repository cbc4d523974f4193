"""Cases of electrolyser models and fuel cells for the battery of laws."""

from tests.equipment.feeds import stream

POINTS = {
    "current_density": ["0.05 A/cm2", "0.2 A/cm2", "0.6 A/cm2", "1.2 A/cm2"],
    "voltage": ["1.50 V", "1.60 V", "1.75 V", "1.95 V"],
}


def electrolysing(add):
    """Note the cases."""
    water = stream({"H2O": 1.0}, 25.0, 30.0)
    steam = stream({"H2O": 0.95, "H2": 0.05}, 160.0, 1.5)
    dry = stream({"H2O": 1.0}, 160.0, 1.5)
    mixed = stream({"H2O": 0.65, "CO2": 0.3, "H2": 0.04, "N2": 0.01}, 300.0, 1.5)
    air = stream({"N2": 0.78, "O2": 0.21, "Ar": 0.01}, 25.0, 1.5)
    _pem(add, water)
    _alkaline(add, water)
    _measured(add, water)
    _solid_oxide(add, steam, dry, mixed, air)
    _pem_fuel_cells(add, air)
    _solid_oxide_fuel_cells(add, air)


def _pem(add, water):
    warm = {"model": "pem", "temperature": "80 degC", "pressure": "30 bar"}
    full = {**warm, "current_density": "2 A/cm2"}
    power = {"power": (1e6, 2e5), "water": water}
    add("pem at a current density", "electrolyser", full, power, outlets=("oxygen",))
    add("pem, heat offered", "electrolyser", full, power, outlets=("heat",))
    add(
        "pem by area",
        "electrolyser",
        {**warm, "cell_area": "40 m2", "rectifier": "96 %", "auxiliaries": "5 %"},
        power,
        extensive=(("cell_area",),),
    )
    rated = {**full, "rating": "2 MW", "minimum_load": "70 %"}
    add("pem in part load", "electrolyser", rated, power, extensive=(("rating",),))
    catalyst = {
        "recombination": "90 %",
        "oxygen_crossover": "30 %",
        "oxygen_pressure": "2 bar",
        "supersaturation": "10 bar*cm2/A",
    }
    add(
        "pem with pressure on one side",
        "electrolyser",
        {**full, "pem": catalyst},
        {"power": (1e6,), "water": stream({"H2O": 0.998, "CO2": 0.002}, 25.0, 2.0)},
    )
    small = {**warm, "cell_area": "40 m2", "pem": {"set": "bernt-2016"}}
    add(
        "pem, all of a little leaks",
        "electrolyser",
        small,
        {"power": (400.0,), "water": water},
        extensive=(("cell_area",),),
    )
    add(
        "pem, hydrogen set",
        "electrolyser",
        {**full, "hydrogen": "20 kg/h", "pem": {"set": "espinosa-lopez-2018"}},
        {"water": water},
        inlets=("power",),
        extensive=(("hydrogen",),),
    )
    add(
        "pem, hydrogen and area set",
        "electrolyser",
        {**warm, "hydrogen": "20 kg/h", "cell_area": "50 m2"},
        {"water": water},
        inlets=("power",),
        extensive=(("hydrogen",), ("cell_area",)),
    )
    add(
        "pem, current density and area set",
        "electrolyser",
        {**full, "cell_area": "50 m2"},
        {"water": water},
        inlets=("power",),
        extensive=(("cell_area",),),
    )


def _alkaline(add, water):
    warm = {"model": "alkaline", "temperature": "80 degC", "pressure": "7 bar"}
    power = {"power": (1e6, 2e5), "water": water}
    add("alkaline", "electrolyser", {**warm, "current_density": "0.3 A/cm2"}, power)
    add(
        "alkaline in part load",
        "electrolyser",
        {**warm, "cell_area": "500 m2", "pressure": "30 bar", "alkaline": {"set": "ulleberg-2003"}},
        power,
        extensive=(("cell_area",),),
    )
    physical = {**warm, "alkaline": {"method": "physical"}, "cell_area": "200 m2"}
    add("alkaline by its parts", "electrolyser", physical, power, extensive=(("cell_area",),))


def _measured(add, water):
    warm = {"model": "measured", "curve": POINTS, "temperature": "70 degC", "pressure": "10 bar"}
    power = {"power": (1e6,), "water": water}
    add("measured", "electrolyser", {**warm, "current_density": "1 A/cm2"}, power)
    add(
        "measured in part load",
        "electrolyser",
        {**warm, "cell_area": "80 m2", "faraday_efficiency": "97 %"},
        power,
        extensive=(("cell_area",),),
    )


def _solid_oxide(add, steam, dry, mixed, air):
    hot = {"model": "solid-oxide", "temperature": "800 degC", "pressure": "1.2 bar"}
    full = {**hot, "current_density": "0.6 A/cm2"}
    power = {"power": (1e6, 2e5)}
    swept = {**power, "water": dry, "sweep": air}
    add("steam, swept with air", "electrolyser", full, swept, outlets=("oxygen",))
    add("steam, pure oxygen", "electrolyser", full, {**power, "water": steam}, outlets=("heat",))
    add(
        "steam, endothermic with heat",
        "electrolyser",
        {**hot, "current_density": "0.3 A/cm2"},
        swept,
        inlets=("heat",),
    )
    add(
        "steam, thermoneutral",
        "electrolyser",
        {**hot, "solid_oxide": {"thermoneutral": True, "conversion": "80 %"}},
        {**power, "water": dry},
    )
    add(
        "steam and CO2, exothermic",
        "electrolyser",
        {**hot, "cell_area": "60 m2", "rectifier": "97 %"},
        {**power, "water": mixed, "sweep": air},
        extensive=(("cell_area",),),
    )
    add(
        "steam and CO2 under pressure",
        "electrolyser",
        {
            **full,
            "temperature": "700 degC",
            "pressure": "10 bar",
            "solid_oxide": {"conversion": 0.6},
        },
        {**power, "water": stream({"H2O": 0.6, "CO2": 0.3, "H2": 0.1}, 300.0, 10.0)},
    )
    add(
        "gases enter hotter",
        "electrolyser",
        {**full, "solid_oxide": {"entry": "840 degC", "set": "obrien-2010"}},
        swept,
    )
    add(
        "steam, hydrogen set",
        "electrolyser",
        {**full, "hydrogen": "20 kg/h"},
        {"water": dry, "sweep": air},
        inlets=("power",),
        extensive=(("hydrogen",),),
    )
    add("nothing to split", "electrolyser", full, {**power, "water": air}, unmet=True)


def _pem_fuel_cells(add, air):
    cold = {"model": "pem", "temperature": "70 degC", "pressure": "1.5 bar"}
    full = {**cold, "current_density": "0.6 A/cm2"}
    hydrogen = stream({"H2": 1.0, "H2O": 0.01}, 25.0, 2.0)
    reformed = stream({"H2": 0.6, "CO2": 0.2, "N2": 0.1, "CH4": 0.02, "H2O": 0.05}, 60.0, 1.6)
    add("hydrogen", "fuel-cell", full, {"fuel": (hydrogen,), "oxidiser": air}, outlets=("heat",))
    add("two fuels", "fuel-cell", full, {"fuel": (hydrogen, reformed), "oxidiser": air})
    add(
        "by area",
        "fuel-cell",
        {**cold, "cell_area": "25 m2", "inverter": "96 %", "auxiliaries": "8 %"},
        {"fuel": (hydrogen,), "oxidiser": air},
        extensive=(("cell_area",),),
    )
    add(
        "semi-empirical, rated",
        "fuel-cell",
        {**full, "rating": "200 kW", "pem": {"set": "mark-v"}, "air_ratio": 2.5},
        {"fuel": (hydrogen,), "oxidiser": air},
        extensive=(("rating",),),
    )
    add(
        "too small",
        "fuel-cell",
        {**cold, "cell_area": "5 m2"},
        {"fuel": (hydrogen,), "oxidiser": air},
        extensive=(("cell_area",),),
        unmet=True,
    )
    add("no air", "fuel-cell", full, {"fuel": (hydrogen,), "oxidiser": hydrogen}, unmet=True)


def _solid_oxide_fuel_cells(add, air):
    hot = {"model": "solid-oxide", "temperature": "750 degC", "pressure": "1.2 bar"}
    full = {**hot, "current_density": "0.4 A/cm2"}
    hydrogen = stream({"H2": 1.0, "H2O": 0.05}, 300.0, 1.3)
    methane = stream({"CH4": 1.0, "N2": 0.01}, 25.0, 1.3)
    moist = stream({"CH4": 1.0, "H2O": 2.2}, 300.0, 1.3)
    add("hot hydrogen", "fuel-cell", full, {"fuel": (hydrogen,), "oxidiser": air}, inlets=("heat",))
    add("methane and steam", "fuel-cell", full, {"fuel": (moist,), "oxidiser": air})
    add(
        "methane recirculated, by area",
        "fuel-cell",
        {**hot, "cell_area": "150 m2", "solid_oxide": {"recirculation": "70 %"}},
        {"fuel": (methane,), "oxidiser": air},
        extensive=(("cell_area",),),
    )
    add("soot", "fuel-cell", full, {"fuel": (methane,), "oxidiser": air}, unmet=True)

"""Cases of capture, membranes, pressure swing and water treatment for the battery of laws."""

from tests.equipment.feeds import stream


def separating(add):
    """Note the cases."""
    _capture(add)
    _membranes(add)
    _pressure_swing(add)
    _water(add)


def _capture(add):
    flue = stream({"CO2": 1.2, "N2": 8.0, "O2": 0.4, "H2O": 0.6}, 40.0, 1.05)
    add("flue gas", "absorber", {}, {"feed": flue}, outlets=("co2", "clean"))
    add(
        "pilot figures, linked",
        "absorber",
        {"figures": "mea-pilot"},
        {"feed": flue},
        inlets=("power", "heat"),
    )
    add(
        "between two pilots, heat linked both ways",
        "absorber",
        {"figures": "amp-hmda-pilot"},
        {"feed": stream({"CO2": 0.7, "N2": 8.0, "O2": 0.4, "H2O": 0.6}, 40.0, 1.05)},
        inlets=("power", "heat"),
        outlets=("co2", "clean", "heat"),
    )
    add(
        "electric heat, own figures",
        "absorber",
        {"heat_use": "3 GJ/t", "power_use": "80 kWh/t", "share": "95 %", "pressure": "1.5 bar"},
        {"feed": flue},
        inlets=("power",),
        outlets=("heat",),
    )
    add(
        "dry and hot",
        "absorber",
        {"figures": "new-solvent-pilot"},
        {"feed": stream({"CO2": 1.0, "CH4": 2.0}, 90.0, 20.0)},
    )
    add("asked for", "air-capture", {}, {}, {"co2": 1.5}, inlets=("power", "heat"))
    add(
        "offers, electric heat",
        "air-capture",
        {"figures": "target", "flow": "100 kg/h"},
        inlets=("power",),
        extensive=(("flow",),),
    )
    add("calciner", "air-capture", {"figures": "hydroxide", "share": "60 %"}, {}, {"co2": 0.4})


def _membranes(add):
    biogas = stream({"CH4": 3.0, "CO2": 2.0, "N2": 0.05, "H2O": 0.01}, 40.0, 16.0)
    hydrogen = stream({"H2": 3.0, "CH4": 1.0, "CO2": 0.4, "CO": 0.1}, 60.0, 30.0)
    one = {"area": "400 m2", "permeate_pressure": "1.1 bar"}
    add("biogas", "membrane", one, {"feed": biogas}, extensive=(("area",),), outlets=("permeate",))
    add(
        "biogas, mixed",
        "membrane",
        {**one, "model": "well-mixed", "pressure_drop": "0.2 bar"},
        {"feed": biogas},
        extensive=(("area",),),
    )
    palladium = {"area": "30 m2", "permeate_pressure": "2 bar", "permeance": {"H2": "3000 GPU"}}
    add("only hydrogen passes", "membrane", palladium, {"feed": hydrogen}, extensive=(("area",),))
    add(
        "nothing to pass against the pressure",
        "membrane",
        {**palladium, "permeate_pressure": "25 bar"},
        {"feed": hydrogen},
        extensive=(("area",),),
    )


def _pressure_swing(add):
    gas = stream({"H2": 4.0, "CO2": 0.8, "CH4": 0.2, "CO": 0.1, "H2O": 0.02}, 35.0, 25.0)
    add("hydrogen", "pressure-swing", {}, {"feed": gas}, outlets=("product", "tail"))
    add("all pure", "pressure-swing", {"recovery": "80 %", "purity": "100 %"}, {"feed": gas})
    add(
        "CO2 by vacuum",
        "pressure-swing",
        {
            "component": "CO2",
            "recovery": "90 %",
            "purity": "95 %",
            "product_pressure": "1.01325 bar",
            "tail_pressure": "1.1 bar",
            "power_use": "250 kWh/t",
        },
        {"feed": stream({"CO2": 1.0, "N2": 5.0}, 30.0, 1.3)},
        inlets=("power",),
        outlets=("heat",),
    )
    add(
        "purer than wanted",
        "pressure-swing",
        {"purity": "99 %"},
        {"feed": stream({"H2": 4.0, "N2": 0.001}, 35.0, 25.0)},
    )


def _water(add):
    raw = stream({"H2O": 4.0}, 15.0, 3.0)
    add("river", "water-treatment", {}, {"inlet": raw}, inlets=("power",))
    add(
        "sea, let down",
        "water-treatment",
        {"recovery": "40 %", "power_use": "3.5 kWh/m3", "pressure": "1.5 bar"},
        {"inlet": raw},
    )
    add("nothing rejected", "water-treatment", {"recovery": "100 %"}, {"inlet": raw})

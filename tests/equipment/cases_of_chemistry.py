"""Cases of reactors, combustion and stores."""

from tests.equipment.feeds import (
    AIR,
    AMMONIA,
    CARBON,
    FUEL,
    METHANOL,
    MODERATOR,
    OXYGEN,
    SYNTHESIS,
    stream,
)


def reactors(add):
    methanol = {
        "reactions": [
            {"equation": "CO2 + 3 H2 -> CH3OH + H2O", "conversion": {"CO2": "20 %"}},
            {"equation": "CO2 + H2 -> CO + H2O", "conversion": {"CO2": "5 %"}},
        ]
    }
    gas = stream({"H2": 3.0, "CO2": 1.0, "CO": 0.05, "N2": 0.05}, 210.0, 50.0, METHANOL)
    add(
        "two conversions",
        "reactor",
        {**methanol, "temperature": "250 degC"},
        {"feed": gas},
        matter=METHANOL,
    )
    add(
        "two conversions, adiabatic",
        "reactor",
        {**methanol, "adiabatic": True, "pressure_drop": "1 bar"},
        {"feed": gas},
        matter=METHANOL,
    )
    add(
        "with a duty",
        "reactor",
        {**methanol, "duty": "-5 kW"},
        {"feed": gas},
        matter=METHANOL,
        extensive=(("duty",),),
    )
    extent = {"reactions": [{"equation": "CO2 + 3 H2 -> CH3OH + H2O", "extent": "0.1 mol/s"}]}
    add(
        "an extent",
        "reactor",
        {**extent, "temperature": "250 degC"},
        {"feed": gas},
        matter=METHANOL,
        extensive=(("reactions", "0", "extent"),),
    )
    greedy = {"reactions": [{"equation": "CO2 + 3 H2 -> CH3OH + H2O", "extent": "1.2 mol/s"}]}
    add(
        "more than there is",
        "reactor",
        {**greedy, "temperature": "250 degC"},
        {"feed": gas},
        matter=METHANOL,
        extensive=(("reactions", "0", "extent"),),
        unmet=True,
    )
    species = ["H2", "CO", "CO2", "H2O", "CH3OH"]
    add(
        "equilibrium",
        "reactor",
        {"equilibrium": species, "temperature": "250 degC"},
        {"feed": gas},
        matter=METHANOL,
    )
    add(
        "adiabatic equilibrium", "reactor", {"equilibrium": species}, {"feed": gas}, matter=METHANOL
    )
    hot = stream({"H2": 4.0, "CO2": 1.0, "CH4": 0.1, "H2O": 0.003, "N2": 0.02}, 35.0, 30.0)
    add(
        "reverse shift, heat bought",
        "shift-reactor",
        {"temperature": "900 degC", "methane": "excluded"},
        {"feed": hot},
    )
    add(
        "reverse shift, electric",
        "shift-reactor",
        {"temperature": "900 degC"},
        {"feed": hot},
        inlets=("power",),
    )
    add(
        "away from equilibrium",
        "shift-reactor",
        {"temperature": "900 degC", "approach": "20 K"},
        {"feed": hot},
        inlets=("heat",),
    )
    add("adiabatic", "shift-reactor", {}, {"feed": stream({"H2": 4.0, "CO2": 1.0}, 900.0, 30.0)})
    add(
        "with a duty",
        "shift-reactor",
        {"duty": "100 kW", "methane": "excluded"},
        {"feed": hot},
        extensive=(("duty",),),
    )
    add(
        "conversion stated",
        "shift-reactor",
        {"temperature": "700 degC", "conversion": "50 %"},
        {"feed": hot},
    )
    add("cooled", "methanation-reactor", {"temperature": "320 degC"}, {"feed": SYNTHESIS})
    add(
        "cold feed",
        "methanation-reactor",
        {"temperature": "320 degC", "pressure_drop": "0.5 bar"},
        {"feed": hot},
        outlets=("heat",),
    )
    add(
        "adiabatic",
        "methanation-reactor",
        {"adiabatic": True},
        {"feed": stream({"H2": 4.0, "CO2": 1.0, "H2O": 2.0}, 300.0, 20.0)},
    )
    add(
        "away from equilibrium",
        "methanation-reactor",
        {"temperature": "320 degC", "approach": "30 K"},
        {"feed": SYNTHESIS},
    )
    add(
        "conversion of CO2",
        "methanation-reactor",
        {"conversion": "80 %", "temperature": "400 degC"},
        {"feed": SYNTHESIS},
    )
    add(
        "conversion of CO",
        "methanation-reactor",
        {"conversion": "80 %"},
        {"feed": stream({"H2": 4.0, "CO": 1.0}, 300.0, 20.0)},
        jumps=("CO2",),
    )


def combustion(add):
    oxyfuel = {"fuel": (FUEL,), "oxidiser": OXYGEN, "moderator": (MODERATOR,)}
    add("oxy-fuel", "burner", {"excess": "2 %"}, oxyfuel)
    add("in air", "burner", {"excess": "10 %"}, {"fuel": (FUEL,), "oxidiser": AIR})
    add("complete", "burner", {"excess": "2 %", "model": "complete"}, oxyfuel)
    add(
        "cooled flue",
        "burner",
        {"temperature": "900 degC", "excess": "2 %"},
        oxyfuel,
        outlets=("heat",),
    )
    add(
        "flue temperature kept",
        "burner",
        {"flue_temperature": "1400 degC", "excess": "2 %"},
        {
            "fuel": (FUEL,),
            "oxidiser": OXYGEN,
            "moderator": stream({"CO2": 0.97, "O2": 0.02, "H2O": 0.01}, 25.0, 1.2),
        },
    )
    add(
        "flue temperature out of reach",
        "burner",
        {"flue_temperature": "2300 degC", "model": "complete"},
        {"fuel": (FUEL,), "oxidiser": AIR, "moderator": AIR},
        unmet=True,
    )
    add("requenched", "burner", {"requench": "900 degC"}, {"fuel": (FUEL,), "oxidiser": AIR})
    add(
        "no oxygen in the oxidiser", "burner", {}, {"fuel": (FUEL,), "oxidiser": CARBON}, unmet=True
    )
    engine = {"efficiency": "42 % LHV", "temperature": "120 degC"}
    add(
        "on air",
        "engine",
        {**engine, "excess": "60 %"},
        {"fuel": (FUEL,), "oxidiser": AIR},
        outlets=("power", "flue"),
    )
    add("heat offered", "engine", engine, {"fuel": (FUEL,), "oxidiser": AIR}, outlets=("heat",))
    add("by HHV, with moderator", "engine", {**engine, "efficiency": "40 % HHV"}, oxyfuel)
    ammonia = stream({"NH3": 1.0, "H2": 0.2}, 25.0, 1.2, AMMONIA)
    add(
        "ammonia",
        "engine",
        engine,
        {"fuel": (ammonia,), "oxidiser": stream({"O2": 0.21, "N2": 0.79}, 25.0, 1.2, AMMONIA)},
        matter=AMMONIA,
    )


def stores(add):
    carbon = {"contents": {"CO2": 1}, "temperature": "25 degC", "pressure": "30 bar"}
    returned = (
        stream({"CO2": 2.0, "O2": 0.04, "N2": 0.01}, 30.0, 30.0),
        stream({"CO2": 1.0}, 60.0, 31.0),
    )
    add(
        "runs over",
        "store",
        carbon,
        {"returns": returned},
        {"draw": 1.0, "spare": 0.5},
        outlets=("rest",),
    )
    add("runs short", "store", carbon, {"returns": returned}, {"draw": 5.0})
    add(
        "made up by a line",
        "store",
        carbon,
        {"returns": returned, "make_up": CARBON},
        {"draw": 5.0},
    )
    add("nothing returns", "store", carbon, {}, {"draw": 2.0})
    add(
        "something cold returns",
        "store",
        carbon,
        {"returns": (stream({"CO2": 1.0}, -3.0, 30.0),)},
        {"draw": 1.2},
    )
    add(
        "something cold returns, with power",
        "store",
        carbon,
        {"returns": (stream({"CO2": 1.0}, -3.0, 30.0),)},
        {"draw": 1.2},
        inlets=("power",),
    )
    add("nothing drawn", "store", carbon, {"returns": returned}, outlets=("rest",))
    add("gives heat", "store", carbon, {"returns": returned}, {"draw": 1.0}, outlets=("heat",))
    water = {"contents": {"H2O": 1}, "temperature": "25 degC", "pressure": "1 bar"}
    add(
        "water",
        "store",
        water,
        {
            "returns": (
                stream({"H2O": 2.0, "CO2": 2e-4}, 40.0, 1.2),
                stream({"H2O": 0.3}, 90.0, 1.0),
            )
        },
        {"draw": 3.0},
    )
    add(
        "pure",
        "store",
        {**carbon, "pure": True},
        {"returns": returned},
        {"draw": 1.5},
        outlets=("rest",),
        ideal="pure-store",
    )
    add(
        "pure and short",
        "store",
        {**carbon, "pure": True},
        {"returns": returned, "make_up": CARBON},
        {"draw": 5.0},
        ideal="pure-store",
    )

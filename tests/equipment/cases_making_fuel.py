"""Cases of shift, methanation, reforming, burner and engine for the battery of laws."""

from chainflow.thermo.components import Matter
from tests.equipment.feeds import stream

HEAVY = Matter.of(
    ("H2", "O2", "N2", "H2O", "CO", "CO2", "CH4", "C2H4", "C2H6", "C3H8", "n-C4H10", "CH3OH")
)


def making_fuel(add):
    """Note the cases."""
    _shift(add)
    _methanation(add)
    _reforming(add)
    _fires(add)


def _shift(add):
    oxygen = stream({"O2": 0.99, "H2O": 0.01}, 30.0, 10.0)
    warm = stream({"H2": 3.0, "CO2": 1.0, "CO": 0.1, "H2O": 0.05, "N2": 0.02}, 450.0, 10.0)
    burning = {"temperature": "900 degC", "autothermal": True}
    add("autothermal", "shift-reactor", burning, {"feed": warm, "oxygen": oxygen})
    add(
        "autothermal on air, away from equilibrium",
        "shift-reactor",
        {**burning, "approach": "20 K", "pressure_drop": "0.3 bar", "methane": "excluded"},
        {"feed": warm, "oxygen": stream({"O2": 0.21, "N2": 0.79}, 25.0, 10.0)},
        inlets=("power",),
    )
    add(
        "too hot for oxygen",
        "shift-reactor",
        {**burning, "temperature": "500 degC"},
        {"feed": stream({"H2": 3.0, "CO2": 1.0}, 1000.0, 10.0), "oxygen": oxygen},
        unmet=True,
    )
    add(
        "too little to burn",
        "shift-reactor",
        burning,
        {"feed": stream({"H2": 0.05, "CO2": 1.0}, 50.0, 10.0), "oxygen": oxygen},
        unmet=True,
    )
    add("no oxygen in it", "shift-reactor", burning, {"feed": warm, "oxygen": warm}, unmet=True)


def _methanation(add):
    feed = stream({"H2": 4.0, "CO2": 1.0, "CO": 0.1, "N2": 0.02}, 40.0, 20.0)
    held = {"beds": 3, "bed_limit": "550 degC", "pressure_drop": "0.6 bar"}
    add("beds held by recycle", "methanation-reactor", held, {"feed": feed})
    add(
        "beds held by recycle, power and heat",
        "methanation-reactor",
        {**held, "bed_inlet": "300 degC", "approach": "10 K"},
        {"feed": feed},
        inlets=("power",),
        outlets=("heat",),
    )
    add(
        "beds with knock-out",
        "methanation-reactor",
        {**held, "knock_out": "40 degC", "catalyst_limit": "500 degC", "gas_group": "H"},
        {"feed": feed},
        outlets=("heat", "liquid"),
    )
    add(
        "beds with knock-out before the last",
        "methanation-reactor",
        {"beds": 3, "bed_limit": "600 degC", "knock_out": "35 degC", "knock_outs": "last"},
        {"feed": feed},
    )
    steam = stream({"H2O": 1.0}, 250.0, 20.0)
    add(
        "beds held by steam",
        "methanation-reactor",
        {**held, "hold": "steam", "knock_out": "40 degC"},
        {"feed": feed, "steam": steam},
    )
    add(
        "hydrogen holds no bed",
        "methanation-reactor",
        {**held, "hold": "steam"},
        {"feed": feed, "steam": stream({"H2": 4.0, "CO": 1.0}, 250.0, 20.0)},
        unmet=True,
    )
    add("beds without a limit", "methanation-reactor", {"beds": 2}, {"feed": feed})


def _reforming(add):
    gas = stream({"CH4": 1.0, "CO2": 0.1, "H2": 0.1, "N2": 0.02}, 450.0, 20.0)
    steam = stream({"H2O": 1.0}, 300.0, 21.0)
    heated = {"temperature": "850 degC", "steam_to_carbon": 3, "pressure_drop": "1 bar"}
    add("heat bought", "reformer", heated, {"feed": gas, "steam": steam})
    add("electric", "reformer", heated, {"feed": gas, "steam": steam}, inlets=("power",))
    add(
        "by heat",
        "reformer",
        {**heated, "approach": "15 K"},
        {"feed": gas, "steam": steam},
        inlets=("heat",),
    )
    add("feed as it comes", "reformer", {"temperature": "850 degC"}, {"feed": gas})
    add(
        "with a duty",
        "reformer",
        {"duty": "150 kW", "steam_to_carbon": 2.5},
        {"feed": gas, "steam": steam},
        extensive=(("duty",),),
    )
    burning = {"temperature": "950 degC", "steam_to_carbon": 1.5, "autothermal": True}
    oxygen = stream({"O2": 0.98, "N2": 0.02}, 150.0, 20.0)
    add("autothermal", "reformer", burning, {"feed": gas, "steam": steam, "oxygen": oxygen})
    add(
        "oxygen alone",
        "reformer",
        {"temperature": "1250 degC", "autothermal": True},
        {"feed": gas, "oxygen": oxygen},
    )
    wet = stream({"CH4": 0.2, "H2O": 2.0, "H2": 1.0}, 300.0, 20.0)
    add("too much water", "reformer", heated, {"feed": wet, "steam": steam}, unmet=True)
    tail = stream(
        {
            "H2": 1.0,
            "CO": 0.5,
            "CH4": 1.0,
            "C2H4": 0.05,
            "C2H6": 0.1,
            "C3H8": 0.08,
            "n-C4H10": 0.03,
        },
        400.0,
        20.0,
        HEAVY,
    )
    add(
        "heavier components",
        "reformer",
        burning,
        {
            "feed": tail,
            "steam": stream({"H2O": 1.0}, 300.0, 21.0, HEAVY),
            "oxygen": stream({"O2": 1.0}, 25.0, 21.0, HEAVY),
        },
        matter=HEAVY,
    )


def _fires(add):
    fuel = stream({"CH4": 0.9, "H2": 0.3, "CO2": 0.1, "N2": 0.01}, 20.0, 1.2)
    air = stream({"N2": 0.772, "O2": 0.207, "Ar": 0.009, "CO2": 0.0004, "H2O": 0.0116}, 25.0, 1.2)
    oxygen = stream({"O2": 0.98, "H2O": 0.02}, 40.0, 1.2)
    carbon = stream({"CO2": 6.0, "H2O": 0.3, "O2": 0.05}, 45.0, 1.2)
    add(
        "enriched air",
        "burner",
        {"enrichment": "30 %", "excess": "5 %"},
        {"fuel": (fuel,), "oxidiser": air, "oxygen": oxygen},
    )
    add(
        "enriched beyond reach",
        "burner",
        {"enrichment": "99 %"},
        {"fuel": (fuel,), "oxidiser": air, "oxygen": oxygen},
        unmet=True,
    )
    add(
        "oxy-fuel with a leak",
        "burner",
        {"air_leak": "3 %", "excess": "2 %", "temperature": "150 degC"},
        {"fuel": (fuel,), "oxidiser": oxygen, "moderator": (carbon,), "leak": air},
        outlets=("heat",),
    )
    add(
        "flame kept, enriched, with a leak",
        "burner",
        {"air_leak": "2 %", "enrichment": "60 %", "flue_temperature": "1300 degC", "excess": "5 %"},
        {
            "fuel": (fuel,),
            "oxidiser": air,
            "oxygen": oxygen,
            "moderator": stream({"CO2": 0.97, "O2": 0.02, "H2O": 0.01}, 25.0, 1.2),
            "leak": air,
        },
    )
    engine = {"efficiency": "42 % LHV", "temperature": "120 degC", "excess": "80 %"}
    burning = {"fuel": (fuel,), "oxidiser": air}
    add("exhaust cooled", "engine", {**engine, "exhaust": "430 degC"}, burning)
    add("jacket share", "engine", {**engine, "jacket_share": "18 %"}, burning, outlets=("heat",))
    add(
        "exhaust and jacket",
        "engine",
        {**engine, "exhaust": "400 degC", "jacket_share": "15 %", "temperature": "40 degC"},
        burning,
        outlets=("heat", "flue"),
    )


__all__ = ["HEAVY", "making_fuel"]

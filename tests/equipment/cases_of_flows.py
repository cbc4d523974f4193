"""Cases of the boundary, of power, electrolysis and junctions."""

from tests.equipment.feeds import (
    CARBON,
    FUEL,
    HOT,
    HYDROGEN,
    NOON,
    PRODUCT,
    SYNTHESIS,
    WATER,
    partly_boiled,
    stream,
)


def boundary(add):
    wet = {"composition": {"H2O": 1}, "temperature": "25 degC", "pressure": "1 bar"}
    add("water asked for", "supply", wet, asked={"outlet": 2.5})
    air = {
        "composition": {"N2": 0.78, "O2": 0.21, "Ar": "rest"},
        "temperature": "15 degC",
        "pressure": "1 bar",
    }
    add("air, molar flow", "supply", {**air, "flow": "3 mol/s"}, extensive=(("flow",),))
    add("air, mass flow", "supply", {**air, "flow": "100 kg/h"}, extensive=(("flow",),))
    add("air, normal volume", "supply", {**air, "flow": "50 Nm3/h"}, extensive=(("flow",),))
    for kind in ("product", "vent"):
        add("gas, power and heat", kind, {}, {"inlet": (FUEL, 3e5, HOT, NOON)})
        add("liquid water", kind, {}, {"inlet": (WATER,)})


def power(add):
    add(
        "noon",
        "sunlight",
        {"irradiance": "850 W/m2", "aperture": "600 m2"},
        extensive=(("aperture",),),
    )
    add(
        "night",
        "sunlight",
        {"irradiance": "0 W/m2", "aperture": "600 m2"},
        extensive=(("aperture",),),
    )
    add("20 %", "pv-field", {"efficiency": "20 %"}, {"light": NOON})
    add("all of it", "pv-field", {"efficiency": 1}, {"light": NOON})
    plain = {"efficiency": "86 %", "duration": "4 h"}
    add("for an evening", "battery", plain, {"charge": (3e6,)})
    leaking = {
        **plain,
        "self_discharge": "3 %/d",
        "kept_for": "2 d",
        "usable": "90 %",
        "mass": "9 kg/kWh",
        "volume": "4 L/kWh",
    }
    add("leaking, two senders", "battery", leaking, {"charge": (3e6, 1e5)})
    served = {"pump": 2e3, "press": 5e4}
    add("with a rest", "switchboard", {}, {"supply": (1e5, 2e4)}, served, outlets=("rest",))
    add("short, nothing behind it", "switchboard", {}, {"supply": (1e4,)}, served)
    add(
        "short, grid behind it", "switchboard", {}, {"supply": (1e4,)}, served, inlets=("shortage",)
    )
    add(
        "surplus, grid behind it",
        "switchboard",
        {},
        {"supply": (9e4,)},
        served,
        inlets=("shortage",),
        outlets=("rest",),
    )
    add("buys and sells", "grid", {}, {"surplus": (1e4, 2e3)}, {"power": 5e4})
    add("nothing", "grid", {})


def electrolysis(add):
    cold = {"energy_use": "52 kWh/kg", "temperature": "60 degC", "pressure": "30 bar"}
    power = {"power": (1e6, 2e5), "water": WATER}
    add("52 kWh/kg", "electrolyser", cold, power, outlets=("hydrogen", "oxygen"))
    add("rectifier", "electrolyser", {**cold, "rectifier": "95 %"}, power)
    add("heat offered", "electrolyser", cold, power, outlets=("heat",))
    volts = {"model": "voltage", "voltage": "1.9 V", "temperature": "80 degC", "pressure": "10 bar"}
    add(
        "1.9 V", "electrolyser", volts, {"power": (1e6,), "water": stream({"H2O": 1.0}, 90.0, 15.0)}
    )
    add(
        "below thermoneutral",
        "electrolyser",
        {**volts, "voltage": "1.35 V"},
        {"power": (1e6,), "water": WATER},
    )
    add(
        "below thermoneutral, heat linked",
        "electrolyser",
        {**volts, "voltage": "1.35 V"},
        {"power": (1e6,), "water": WATER},
        inlets=("heat",),
    )
    dirty = stream({"H2O": 0.9985, "CO2": 0.001, "N2": 0.0005}, 25.0, 30.0)
    add("something in the water", "electrolyser", cold, {"power": (1e6,), "water": dirty})
    add(
        "hydrogen set",
        "electrolyser",
        {**cold, "hydrogen": "20 kg/h"},
        {"water": WATER},
        inlets=("power",),
        extensive=(("hydrogen",),),
    )
    add(
        "no water in the water",
        "electrolyser",
        cold,
        {"power": (1e6,), "water": CARBON},
        unmet=True,
    )


def junctions(add):
    three = (
        HYDROGEN,
        stream({"CO2": 1.0}, 25.0, 30.0),
        stream({"H2": 0.5, "CH4": 0.4, "H2O": 0.3}, 250.0, 28.0),
    )
    add("three gases", "mixer", {}, {"inlet": three})
    add(
        "steam into cold gas",
        "mixer",
        {},
        {"inlet": (stream({"H2O": 1.0}, 140.0, 2.0), stream({"N2": 2.0}, 5.0, 2.0))},
    )
    add("one inlet", "mixer", {}, {"inlet": (SYNTHESIS,)})
    add(
        "let down",
        "mixer",
        {"let_down": True},
        {"inlet": (stream({"CO2": 1.0}, 40.0, 60.0), stream({"CO2": 2.0}, 60.0, 20.0))},
    )
    add(
        "H2 to CO2",
        "blend",
        {"ratio": {"H2": 4, "CO2": 1}},
        {
            "main": (HYDROGEN, stream({"H2": 0.5, "CO2": 0.1, "CH4": 0.6}, 35.0, 29.0)),
            "trim": CARBON,
        },
    )
    module = {"over": {"H2": 1, "CO2": -1}, "under": {"CO": 1, "CO2": 1}, "value": 2}
    add(
        "module",
        "blend",
        {"module": module},
        {"main": (HYDROGEN,), "trim": stream({"CO2": 0.7, "CO": 0.3}, 25.0, 30.0)},
    )
    add(
        "overfull",
        "blend",
        {"ratio": {"H2": 4, "CO2": 1}},
        {"main": (CARBON, HYDROGEN, CARBON), "trim": CARBON},
        unmet=True,
    )
    add(
        "useless trim",
        "blend",
        {"ratio": {"H2": 4, "CO2": 1}},
        {"main": (HYDROGEN,), "trim": WATER},
        unmet=True,
    )
    shares = {"shares": {"recycle": "95 %", "purge": "rest"}}
    add("a gas", "splitter", shares, {"inlet": SYNTHESIS}, outlets=("recycle", "purge"))
    add(
        "a boiling liquid",
        "splitter",
        {"shares": {"a": 0.25, "b": 0.25, "c": 0.5}},
        {"inlet": partly_boiled()},
    )
    add(
        "a share of zero",
        "splitter",
        {"shares": {"recycle": "rest", "purge": "0 %"}},
        {"inlet": PRODUCT},
    )
    add("power", "splitter", shares, {"inlet": 3e5})
    add("heat", "splitter", shares, {"inlet": HOT})
    add("light", "splitter", shares, {"inlet": NOON})

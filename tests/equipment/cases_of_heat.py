"""Cases of separation, heat and pressure."""

from chainflow.equipment.ports import Heat
from tests.equipment.feeds import (
    CONDENSING,
    FLUE,
    HOT,
    HYDROGEN,
    PRODUCT,
    STEAM,
    SYNTHESIS,
    WARM,
    WATER,
    stream,
)


def separation(add):
    free = {"recovery": {"CO2": "90 %", "CH4": "5 %"}}
    add(
        "free",
        "separator",
        free,
        {"inlet": stream({"CO2": 1.0, "CH4": 3.0, "N2": 0.1}, 30.0, 10.0)},
        ideal="free-separation",
    )
    paid = {**free, "work": "12 kJ/mol", "heat": "20 kJ/mol"}
    add(
        "paid for",
        "separator",
        paid,
        {"inlet": stream({"CO2": 1.0, "CH4": 3.0}, 30.0, 10.0)},
        inlets=("power", "heat"),
    )
    add(
        "paid with power",
        "separator",
        paid,
        {"inlet": stream({"CO2": 1.0, "CH4": 3.0}, 30.0, 10.0)},
        inlets=("power",),
    )
    all_or_none = {"recovery": {"CH4": 1, "H2": 0}}
    add(
        "all or none",
        "separator",
        all_or_none,
        {"inlet": stream({"H2": 1.0, "CH4": 3.0}, 30.0, 10.0)},
        ideal="free-separation",
    )
    add(
        "wet gas",
        "separator",
        {"recovery": {"CO2": "97 %"}},
        {"inlet": stream({"CO2": 1.0, "N2": 3.0, "H2O": 0.3}, 40.0, 1.2)},
        outlets=("heat",),
        ideal="free-separation",
    )
    plain = {"temperature": "30 degC", "pressure_drop": "0.5 bar"}
    add("wet product", "condenser", plain, {"inlet": PRODUCT}, outlets=("gas", "liquid"))
    add(
        "flue, CO2 stays gas",
        "condenser",
        {"temperature": "40 degC", "dissolved": False},
        {"inlet": FLUE},
    )
    add("heat offered", "condenser", plain, {"inlet": PRODUCT}, outlets=("heat",))
    add("dry gas", "condenser", plain, {"inlet": stream({"CH4": 1.0, "H2": 1.0}, 80.0, 12.0)})
    add(
        "liquid arrives",
        "condenser",
        plain,
        {"inlet": stream({"CH4": 1.0, "CO2": 0.2, "H2O": 3.0}, 60.0, 12.0)},
    )


def heat(add):
    add("to a temperature", "heater", {"temperature": "500 degC"}, {"inlet": SYNTHESIS})
    add(
        "with power",
        "heater",
        {"temperature": "500 degC", "pressure_drop": "0.3 bar"},
        {"inlet": SYNTHESIS},
        inlets=("power",),
    )
    add(
        "from below ambient, with power",
        "heater",
        {"temperature": "80 degC"},
        {"inlet": stream({"N2": 2.0, "H2O": 0.3}, 5.0, 2.0)},
        inlets=("power",),
    )
    add("with heat", "heater", {"temperature": "120 degC"}, {"inlet": HYDROGEN}, inlets=("heat",))
    add("by a duty", "heater", {"duty": "40 kW"}, {"inlet": SYNTHESIS}, extensive=(("duty",),))
    add("boils water", "heater", {"temperature": "300 degC"}, {"inlet": WATER})
    add(
        "half boils water",
        "heater",
        {"duty": "40 kW"},
        {"inlet": stream({"H2O": 1.0}, 25.0, 5.0)},
        extensive=(("duty",),),
    )
    add("has to cool", "heater", {"temperature": "100 degC"}, {"inlet": SYNTHESIS})
    add("flue", "cooler", {"temperature": "150 degC", "pressure_drop": "0.05 bar"}, {"inlet": FLUE})
    add(
        "flue to an engine",
        "cooler",
        {"temperature": "150 degC"},
        {"inlet": FLUE},
        outlets=("heat",),
    )
    add("condenses", "cooler", {"temperature": "60 degC"}, {"inlet": PRODUCT}, outlets=("heat",))
    add(
        "below ambient",
        "cooler",
        {"temperature": "5 degC"},
        {"inlet": stream({"CH4": 1.0, "N2": 1.0}, 80.0, 30.0)},
    )
    add("by a duty", "cooler", {"duty": "-60 kW"}, {"inlet": PRODUCT}, extensive=(("duty",),))
    add("60 % of Carnot", "heat-engine", {"share_of_carnot": "60 %"}, {"heat": (HOT, WARM)})
    add("reversible", "heat-engine", {"share_of_carnot": 1, "sink": "35 degC"}, {"heat": (HOT,)})
    add("too cold", "heat-engine", {"share_of_carnot": 1, "sink": "150 degC"}, {"heat": (WARM,)})
    networks(add)


def networks(add):
    """Heat networks: enough and short of heat, with electric and with other heat behind them."""
    net = "heat-network"
    needs = {"shift": Heat(2.4e4, 600.0, 700.0, 648.7), "dryer": Heat(1e4, 330.0, 380.0, 354.4)}
    add("enough", net, {}, {"supply": (HOT, WARM)}, needs, outlets=("rest",))
    add("short, linked", net, {}, {"supply": (WARM,)}, needs, inlets=("shortage",))
    add("short, nothing behind it", net, {}, {"supply": (WARM,)}, needs, unmet=True)
    add("no heat at all", net, {}, {}, needs, inlets=("shortage",))
    electric = {"inlets": ("shortage",), "electric": ("shortage",), "outlets": ("rest",)}
    add("short, electric", net, {}, {"supply": (WARM,)}, needs, **electric)
    steam = {"steam": STEAM, "feed": Heat.between(1.2e4, 330.0, 520.0)}
    reactor = Heat(9e4, 573.15, 573.15, 573.15)
    add("steam from a reactor", net, {}, {"supply": (reactor,)}, steam, outlets=("rest",))
    add(
        "steam from a condensing gas",
        net,
        {"approach": "15 K"},
        {"supply": (CONDENSING,)},
        steam,
        **electric,
    )
    add(
        "pinched at the dew point, helped by heat",
        net,
        {"approach": "5 K"},
        {"supply": (CONDENSING, Heat.between(2.5e4, 480.0, 452.0))},
        {"water": Heat.between(6.1e4, 310.0, 440.0), "steam": STEAM},
        inlets=("shortage",),
        outlets=("rest",),
    )
    add("without a difference", net, {"approach": "0 K"}, {"supply": (HOT, WARM)}, needs)
    add(
        "hotter than all it gets",
        net,
        {"approach": "20 K"},
        {"supply": (reactor, WARM)},
        {"shift": Heat.between(3e4, 500.0, 900.0)},
        **electric,
    )


def pressure(add):
    carbon = stream({"CO2": 1.0}, 40.0, 60.0)
    add("CO2", "valve", {"pressure": "30 bar"}, {"inlet": carbon})
    add("hydrogen", "valve", {"pressure": "1.2 bar"}, {"inlet": stream({"H2": 2.0}, 25.0, 350.0)})
    add(
        "hot water flashes",
        "valve",
        {"pressure": "1 bar"},
        {"inlet": stream({"H2O": 2.0}, 180.0, 30.0)},
    )
    add(
        "hydrogen in three stages",
        "compressor",
        {"pressure": "350 bar", "stages": 3},
        {"inlet": stream({"H2": 4.0}, 25.0, 30.0)},
        outlets=("outlet",),
    )
    add(
        "stages found",
        "compressor",
        {"pressure": "200 bar", "aftercool": "35 degC"},
        {"inlet": stream({"CH4": 1.0, "H2": 0.1}, 30.0, 11.0)},
        inlets=("power",),
    )
    wet = stream({"CO2": 3.0, "N2": 0.2, "H2O": 0.2}, 45.0, 1.1)
    add(
        "wet gas",
        "compressor",
        {"pressure": "30 bar", "stages": 4, "intercool": "30 degC", "aftercool": "30 degC"},
        {"inlet": wet},
        inlets=("power",),
        outlets=("condensate",),
    )
    add(
        "reversible and wet",
        "compressor",
        {
            "pressure": "30 bar",
            "stages": 4,
            "intercool": "30 degC",
            "aftercool": "30 degC",
            "efficiency": 1,
            "drive_efficiency": 1,
        },
        {"inlet": wet},
    )
    add(
        "heat offered",
        "compressor",
        {"pressure": "30 bar", "stages": 3, "aftercool": "40 degC"},
        {"inlet": wet},
        outlets=("heat",),
    )
    add(
        "liquid arrives",
        "compressor",
        {"pressure": "5 bar", "stages": 1},
        {"inlet": stream({"N2": 2.0, "H2O": 0.5}, 25.0, 1.0)},
    )
    add(
        "a fan",
        "compressor",
        {"pressure": "1.3 bar", "stages": 1, "efficiency": "60 %"},
        {"inlet": stream({"CO2": 6.0, "H2O": 0.2}, 60.0, 1.15)},
    )
    add(
        "hot gas",
        "expander",
        {"pressure": "1.2 bar"},
        {"inlet": stream({"CO2": 2.0, "H2O": 1.0, "N2": 1.0}, 700.0, 12.0)},
        outlets=("power",),
    )
    add(
        "hydrogen",
        "expander",
        {"pressure": "10 bar", "efficiency": "65 %"},
        {"inlet": stream({"H2": 2.0}, 60.0, 30.0)},
    )
    add(
        "steam into the wet",
        "expander",
        {"pressure": "0.1 bar", "efficiency": "85 %"},
        {"inlet": stream({"H2O": 2.0}, 350.0, 20.0)},
    )
    add(
        "water",
        "pump",
        {"pressure": "30 bar"},
        {"inlet": stream({"H2O": 3.0}, 25.0, 1.0)},
        inlets=("power",),
    )
    add(
        "water with CO2 in it",
        "pump",
        {"pressure": "12 bar"},
        {"inlet": stream({"H2O": 3.0, "CO2": 1e-4}, 30.0, 11.0)},
    )

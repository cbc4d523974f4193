"""Cases of exchangers, boilers and compressor settings for the battery of laws."""

from chainflow.equipment.ports import Heat
from tests.equipment.feeds import stream


def exchanging(add):
    """Note the cases."""
    _exchangers(add)
    _boilers(add)
    _compressors(add)


def _exchangers(add):
    hot = stream({"CO2": 2.0, "H2O": 1.0, "N2": 0.2}, 400.0, 5.0)
    wet = stream({"CH4": 1.0, "H2O": 2.0, "H2": 0.2}, 320.0, 12.0)
    cold = stream({"H2": 4.0, "CO2": 1.0}, 30.0, 12.0)
    water = stream({"H2O": 1.5}, 25.0, 6.0)
    add("gas to gas", "heat-exchanger", {}, {"hot": hot, "cold": cold}, outlets=("hot_out",))
    add("condenses", "heat-exchanger", {"approach": "15 K"}, {"hot": wet, "cold": cold})
    add("boils", "heat-exchanger", {"hot_pressure_drop": "0.2 bar"}, {"hot": hot, "cold": water})
    add("condenses and boils", "heat-exchanger", {}, {"hot": wet, "cold": water})
    add(
        "to a temperature",
        "heat-exchanger",
        {"cold_outlet": "200 degC"},
        {"hot": hot, "cold": cold},
    )
    add("pinched", "heat-exchanger", {"hot_outlet": "45 degC"}, {"hot": hot, "cold": cold})
    add(
        "a duty",
        "heat-exchanger",
        {"duty": "20 kW", "cold_pressure_drop": "0.1 bar"},
        {"hot": hot, "cold": cold},
        extensive=(("duty",),),
    )
    add("hot is not hot", "heat-exchanger", {}, {"hot": cold, "cold": hot})


def _boilers(add):
    flue = stream({"CO2": 6.5, "H2O": 3.0, "O2": 0.1, "N2": 0.1}, 900.0, 1.2)
    syngas = stream({"CH4": 1.0, "H2O": 2.0, "H2": 0.3}, 420.0, 30.0)
    water = stream({"H2O": 1.0}, 25.0, 40.0)
    add("flue", "boiler", {"pressure": "10 bar"}, {"hot": flue, "water": water}, outlets=("steam",))
    full = {"pressure": "40 bar", "superheat": "100 K", "blowdown": "3 %", "hot_limit": "130 degC"}
    add("superheated", "boiler", full, {"hot": flue, "water": water}, outlets=("blowdown",))
    add("condensing gas", "boiler", {"pressure": "4 bar"}, {"hot": syngas, "water": water})
    reactor, gas = Heat(3e5, 573.15, 573.15, 573.15), Heat.between(3e5, 700.0, 320.0)
    add("a reactor's heat", "boiler", {"pressure": "40 bar"}, {"heat": (reactor,), "water": water})
    add(
        "heat that is not all used",
        "boiler",
        {"pressure": "10 bar"},
        {"heat": (gas,), "water": water},
        outlets=("heat",),
    )
    add(
        "too cold",
        "boiler",
        {"pressure": "90 bar"},
        {"heat": (reactor,), "water": stream({"H2O": 1.0}, 25.0, 90.0)},
    )
    add(
        "hot stream and heat",
        "boiler",
        {"pressure": "10 bar"},
        {"hot": flue, "heat": (reactor,), "water": water},
        unmet=True,
    )


def _compressors(add):
    wet = stream({"CO2": 3.0, "N2": 0.2, "H2O": 0.2}, 45.0, 1.1)
    train = {"pressure": "30 bar", "stages": 3, "intercool": "30 degC"}
    add("polytropic", "compressor", {**train, "polytropic_efficiency": "80 %"}, {"inlet": wet})
    add(
        "least work",
        "compressor",
        {**train, "split": "least-work", "aftercool": "40 degC"},
        {"inlet": wet},
        inlets=("power",),
        outlets=("condensate", "heat"),
    )
    add(
        "least work, polytropic",
        "compressor",
        {**train, "split": "least-work", "polytropic_efficiency": "80 %", "stages": "auto"},
        {"inlet": stream({"H2": 2.0}, 25.0, 2.0)},
    )

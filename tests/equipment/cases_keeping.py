"""Cases of liquefiers and of stores with vessels for the battery of laws."""

from chainflow.equipment.keeping import as_liquid
from tests.equipment.feeds import stream


def keeping(add):
    """Note the cases."""
    _liquefiers(add)
    _stores(add)


def _liquefiers(add):
    hydrogen = stream({"H2": 3.0}, 25.0, 20.0)
    add("hydrogen", "liquefier", {}, {"inlet": hydrogen}, inlets=("power",), outlets=("liquid",))
    add(
        "boils off",
        "liquefier",
        {"efficiency": "44 %", "boil_off": "4 %", "pressure": "2 bar"},
        {"inlet": stream({"H2": 3.0}, 35.0, 80.0)},
        outlets=("liquid", "boil_off", "heat"),
    )
    add("left normal", "liquefier", {"conversion": False}, {"inlet": hydrogen})
    gas = {"component": "CH4", "pressure": "1.2 bar"}
    feed = stream({"CH4": 2.0, "N2": 0.02, "H2": 0.05}, 30.0, 30.0)
    add("methane with others", "liquefier", gas, {"inlet": feed}, outlets=("rejected",))
    carbon = {"component": "CO2", "pressure": "18 bar"}
    add("carbon dioxide", "liquefier", carbon, {"inlet": stream({"CO2": 1.0}, 40.0, 20.0)})


def _stores(add):
    hydrogen = stream({"H2": 3.0}, 25.0, 700.0)
    tank = {
        "contents": {"H2": 1},
        "temperature": "15 degC",
        "pressure": "700 bar",
        "vessel": "hydrogen-700",
        "inventory": "5 kg",
    }
    add("hydrogen at 700 bar", "store", tank, {"returns": (hydrogen,)}, {"draw": 2.0})
    matter = hydrogen.matter
    boiling = as_liquid(matter, matter.vector({"H2": 2.0}), 20.9, 1.3e5)
    cold = {
        "contents": {"H2": 1},
        "temperature": "20.9 K",
        "pressure": "1.3 bar",
        "vessel": "liquid-hydrogen-sphere",
        "inventory": "200 t",
    }
    add("liquid hydrogen", "store", cold, {"returns": (boiling,)}, {"draw": 2.5})
    carbon = {
        "contents": {"CO2": 1},
        "temperature": "-25 degC",
        "pressure": "20 bar",
        "phase": "liquid",
        "vessel": "liquid-tank",
    }
    gas = stream({"CO2": 1.0}, 30.0, 20.0)
    add("liquid carbon dioxide", "store", carbon, {"returns": (gas,)}, {"draw": 1.5})
    add(
        "liquid carbon dioxide runs over",
        "store",
        carbon,
        {"returns": (gas,)},
        {"draw": 0.5},
        outlets=("rest",),
    )

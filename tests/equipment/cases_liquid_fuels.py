"""Cases of Fischer-Tropsch synthesis, the flash drum and cuts for the battery of laws."""

import numpy as np

from chainflow.thermo.chains import WAX, alkane, alkene
from chainflow.thermo.components import Matter
from chainflow.thermo.streams import Stream
from tests.equipment.feeds import stream

GASES = ("H2", "N2", "H2O", "CO", "CO2", "CH4")
PARAFFINS = Matter.of((*GASES, *(alkane(n) for n in range(2, 13)), WAX))
BURNING = Matter.of((*PARAFFINS.components, "O2"))
ALL = Matter.of(
    (
        *GASES,
        *(alkane(n) for n in range(2, 31)),
        *(alkene(n) for n in range(2, 21)),
        WAX,
    )
)
SYNGAS = {"H2": 4.2, "CO": 2.0, "CO2": 0.1, "CH4": 0.1, "N2": 0.05, "H2O": 0.05}


def syngas(matter, celsius=190.0, bar=25.0, **more):
    """Synthesis gas in a set of components."""
    return Stream.at(matter, matter.vector(SYNGAS | more), celsius + 273.15, bar * 1e5)


def product(matter, celsius, bar, longest, chains=0.02):
    """What such a reactor gives: gas, water, and chains that thin out by 10 % per carbon atom."""
    flows = matter.vector({"H2": 1.8, "CO": 0.8, "CO2": 0.1, "CH4": 0.2, "N2": 0.05, "H2O": 1.2})
    for n in range(2, longest + 1):
        flows[matter.index[alkane(n)]] += chains * 0.9**n
    flows[matter.index[WAX]] = chains * 0.9**longest
    return Stream.at(matter, flows, celsius + 273.15, bar * 1e5)


def liquid_fuels(add):
    """Note the cases."""
    _synthesis(add)
    _drum(add)
    _cut(add)
    _engine(add)


def _synthesis(add):
    kind = "fischer-tropsch-reactor"
    short = {"temperature": "220 degC", "longest": "12"}
    given = {**short, "conversion": "50 %"}
    add("paraffins", kind, given, {"feed": syngas(PARAFFINS)}, matter=PARAFFINS)
    add(
        "heat raised",
        kind,
        {**given, "chain_growth": "0.85"},
        {"feed": syngas(PARAFFINS)},
        outlets=("heat",),
        matter=PARAFFINS,
    )
    add(
        "all chains",
        kind,
        {"temperature": "225 degC", "conversion": "60 %"},
        {"feed": syngas(ALL)},
        matter=ALL,
    )
    add(
        "iron",
        kind,
        {**given, "temperature": "250 degC", "shift_approach": "60 %", "pressure_drop": "1 bar"},
        {"feed": syngas(PARAFFINS)},
        matter=PARAFFINS,
        jumps=("CO2",),
    )
    add(
        "growth by composition",
        kind,
        {**given, "growth_by": "song-2004"},
        {"feed": syngas(PARAFFINS)},
        matter=PARAFFINS,
    )
    add(
        "cobalt bed",
        kind,
        {**short, "catalyst": "500 kg", "growth_by": "vervloet-2012"},
        {"feed": syngas(PARAFFINS)},
        matter=PARAFFINS,
        extensive=(("catalyst",),),
    )
    add(
        "hydrogen too short",
        kind,
        {**given, "conversion": "95 %"},
        {"feed": syngas(PARAFFINS, H2=2.0)},
        matter=PARAFFINS,
        unmet=True,
    )


def _drum(add):
    kind = "flash-drum"
    hot = product(PARAFFINS, 200.0, 24.0, 12)
    add("three phases", kind, {"temperature": "40 degC"}, {"inlet": hot}, matter=PARAFFINS)
    add(
        "heat given off",
        kind,
        {"temperature": "60 degC", "dissolved": "false"},
        {"inlet": hot},
        outlets=("heat",),
        matter=PARAFFINS,
    )
    add(
        "all chains",
        kind,
        {"temperature": "140 degC"},
        {"inlet": product(ALL, 220.0, 24.0, 30)},
        matter=ALL,
    )
    add(
        "let down",
        kind,
        {"pressure": "2 bar"},
        {"inlet": product(PARAFFINS, 40.0, 24.0, 12)},
        matter=PARAFFINS,
    )
    add("no heat", kind, {}, {"inlet": product(PARAFFINS, 90.0, 24.0, 12)}, matter=PARAFFINS)
    oil = np.zeros(len(PARAFFINS.components))
    for n in range(6, 13):
        oil[PARAFFINS.index[alkane(n)]] = 0.1
    liquid = Stream.at(PARAFFINS, oil, 300.0, 2e5)
    add("oil alone", kind, {"temperature": "40 degC"}, {"inlet": liquid}, matter=PARAFFINS)
    add("oil", "pump", {"pressure": "30 bar"}, {"inlet": liquid}, matter=PARAFFINS)
    add("to oil", "cooler", {"temperature": "30 degC"}, {"inlet": hot}, matter=PARAFFINS)
    cold = product(PARAFFINS, 40.0, 24.0, 12)
    add(
        "oil at the inlet",
        "compressor",
        {"pressure": "40 bar", "stages": "1"},
        {"inlet": cold},
        outlets=("condensate",),
        matter=PARAFFINS,
    )
    flows = PARAFFINS.vector({"H2": 2.0, "N2": 0.3, "H2O": 0.05, "CO2": 0.1, "n-C7H16": 0.6})
    flows[PARAFFINS.index["n-C10H22"]] = 0.1
    add(
        "oil knocked out",
        "compressor",
        {"pressure": "30 bar", "stages": "3", "aftercool": "30 degC", "intercool": "25 degC"},
        {"inlet": Stream.at(PARAFFINS, flows, 393.15, 1.2e5)},
        outlets=("condensate",),
        matter=PARAFFINS,
        jumps=(WAX,),  # its first trace is a liquid at the inlet
    )
    add("oil and gas", "valve", {"pressure": "5 bar"}, {"inlet": cold}, matter=PARAFFINS)
    wet = stream({"CO2": 1.0, "H2O": 1.0, "H2": 1.0}, 120.0, 10.0)
    add("no oil", kind, {"temperature": "30 degC"}, {"inlet": wet})
    add(
        "condenser",
        "condenser",
        {"temperature": "40 degC", "pressure_drop": "0.5 bar"},
        {"inlet": hot},
        matter=PARAFFINS,
    )


def _cut(add):
    kind = "cut"
    cold = product(PARAFFINS, 40.0, 24.0, 12, 0.2)
    add(
        "two cuts",
        kind,
        {"cuts": {"naphtha": "C5-C9", "heavy": "C9+"}, "heat": "60 kJ/mol"},
        {"inlet": cold},
        matter=PARAFFINS,
    )
    add(
        "all chains, hot",
        kind,
        {
            "cuts": {"kerosene": "C9-C16", "diesel": "C17-C20", "wax": "C21+"},
            "heat": "100 kJ/mol",
        },
        {"inlet": product(ALL, 200.0, 5.0, 30)},
        matter=ALL,
    )
    add(
        "linked",
        kind,
        {"cuts": {"twelve": "C12"}, "heat": "300 kJ/mol", "heat_temperature": "300 degC"},
        {"inlet": cold},
        inlets=("heat",),
        outlets=("heat",),
        matter=PARAFFINS,
    )
    add(
        "heat from a line",
        kind,
        {"cuts": {"light": "C2-C4", "heavy": "C5+"}, "heat": "60 kJ/mol"},
        {"inlet": product(PARAFFINS, 120.0, 5.0, 12, 0.2)},
        inlets=("heat",),
        matter=PARAFFINS,
    )
    add(
        "heat by power",
        kind,
        {"cuts": {"heavy": "C8+"}, "heat": "60 kJ/mol"},
        {"inlet": product(PARAFFINS, 120.0, 5.0, 12, 0.2)},
        inlets=("power",),
        matter=PARAFFINS,
    )


def _engine(add):
    kind = "engine"
    air = stream({"N2": 0.79, "O2": 0.21}, 25.0, 1.2, BURNING)
    flows = BURNING.vector({alkane(n): 0.01 * n for n in range(5, 13)})
    oil = Stream.at(BURNING, flows, 300.0, 1.2e5)
    half = product(BURNING, 60.0, 1.2, 12, 0.2)
    gas = stream({"CH4": 0.3, "H2": 0.1, alkane(3): 0.05}, 350.0, 1.2, BURNING)
    add(
        "oil, half an oil and gas",
        kind,
        {"efficiency": "40 % LHV", "temperature": "120 degC", "excess": "100 %"},
        {"fuel": (gas, oil, half), "oxidiser": air},
        outlets=("flue", "power"),
        matter=BURNING,
    )
    add(
        "oil, heat offered, wet flue",
        kind,
        {"efficiency": "40 % HHV", "temperature": "30 degC", "jacket": "90 degC"},
        {"fuel": (oil,), "moderator": (half,), "oxidiser": air},
        outlets=("flue", "power", "heat"),
        matter=BURNING,
    )

"""Every registered kind at several settings, with feeds as they come in a plant.

SI throughout.  A called inlet gets one mol/s of what its server gives; `asked` holds amounts at
serving outlets.  The laws in `test_laws` run over all of them.
"""

from dataclasses import dataclass, field

import numpy as np

from chainflow.equipment.base import Equipment, Outcome, Site
from chainflow.equipment.ports import Flow, Heat, Role, arriving
from chainflow.equipment.register import kinds
from chainflow.equipment.shares import fractions
from chainflow.equipment.stores import Store
from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.streams import Stream

MATTER = Matter.of(DEFAULT_COMPONENTS)
METHANOL = Matter.of(("H2", "N2", "H2O", "CO", "CO2", "CH3OH"))
AMMONIA = Matter.of(("H2", "O2", "N2", "H2O", "NH3"))


@dataclass(frozen=True)
class Case:
    """One piece of equipment with what arrives, what is asked and which ports are linked."""

    name: str
    equipment: Equipment
    feeds: dict
    asked: dict
    site: Site
    extensive: tuple = ()  # paths of settings that are amounts
    ideal: str = ""  # the declared idealisation that lets it off the second law
    unmet: bool = False  # it has no answer on purpose
    jumps: tuple = ()  # components whose first trace changes the answer by a step

    def run(self, equipment=None, feeds=None, asked=None) -> Outcome:
        """What the equipment does, with some of the case replaced."""
        return (equipment or self.equipment).operate(
            self.feeds if feeds is None else feeds,
            self.asked if asked is None else asked,
            self.site,
        )

    @property
    def called(self):
        """Material inlets that ask for their amount."""
        return tuple(
            port for port in self.feeds if self.equipment.port(port, inlet=True).role is Role.CALLS
        )

    def arrives(self, outcome):
        """Every flow that comes in, called ones at the amount asked for, and what a store buys."""
        flows: list[Flow] = []
        for port in self.feeds:
            factor = outcome.drawn[port] if port in self.called else 1.0
            flows += [
                f.scaled(factor) if isinstance(f, Stream) else f for f in arriving(self.feeds, port)
            ]
        return [*flows, *self.bought(outcome)]

    def bought(self, outcome):
        """What a store without make-up gets from outside."""
        piece = self.equipment
        if not isinstance(piece, Store) or "make_up" in self.feeds:
            return []
        shares = fractions(piece.contents, self.site.matter)
        one = Stream.at(self.site.matter, shares, piece.temperature, piece.pressure)
        return [one.scaled(outcome.results["top_up_mol_s"])]


@dataclass
class _Collector:
    cases: list = field(default_factory=list)

    def add(
        self,
        label,
        kind,
        settings,
        feeds=None,
        asked=None,
        *,
        inlets=(),
        outlets=(),
        matter=MATTER,
        ambient=298.15,
        **marks,
    ):
        """Note one case; `inlets`, `outlets` name linked ports beside those that get something."""
        feeds, asked = feeds or {}, asked or {}
        equipment = kinds()[kind].model_validate(settings)
        site = Site(
            matter,
            ambient,
            frozenset(feeds) | frozenset(inlets),
            frozenset(outlets) | frozenset(asked),
        )
        self.cases.append(Case(f"{kind}: {label}", equipment, feeds, asked, site, **marks))


def stream(amounts, celsius=25.0, bar=1.0, matter=MATTER):
    """A stream of components [mol/s] at a temperature [degC] and pressure [bar]."""
    return Stream.at(matter, matter.vector(amounts), celsius + 273.15, bar * 1e5)


def partly_boiled():
    """Water at 5 bar of which half has boiled off."""
    flows = MATTER.vector({"H2O": 2.0})
    ends = [stream({"H2O": 2.0}, celsius, 5.0).enthalpy for celsius in (150.0, 153.0)]
    return Stream.from_enthalpy(MATTER, flows, sum(ends) / 2, 5e5)


WATER = stream({"H2O": 1.0}, bar=30.0)
OXYGEN = stream({"O2": 0.98, "H2O": 0.02}, 40.0, 1.2)
AIR = stream({"N2": 0.772, "O2": 0.207, "Ar": 0.009, "CO2": 0.0004, "H2O": 0.0116}, 25.0, 1.2)
CARBON = stream({"CO2": 0.99, "N2": 0.01}, 25.0, 30.0)
HYDROGEN = stream({"H2": 4.0, "H2O": 0.02}, 60.0, 30.0)
FUEL = stream({"CH4": 0.9, "H2": 0.3, "CO2": 0.1, "N2": 0.01}, 20.0, 1.2)
MODERATOR = stream({"CO2": 6.0, "H2O": 0.3, "O2": 0.05, "N2": 0.02}, 45.0, 1.2)
SYNTHESIS = stream(
    {"H2": 4.0, "CO2": 1.0, "CO": 0.2, "CH4": 0.3, "H2O": 0.1, "N2": 0.02}, 220.0, 12.0
)
PRODUCT = stream({"CH4": 1.0, "H2O": 2.0, "H2": 0.2, "CO2": 0.05, "N2": 0.02}, 320.0, 12.0)
FLUE = stream({"CO2": 6.5, "H2O": 3.0, "O2": 0.1, "CO": 0.01, "N2": 0.05}, 1400.0, 1.2)
HOT = Heat(8e4, 900.0, 500.0, 680.0)
WARM = Heat(3e4, 420.0, 350.0, 384.0)


def _boundary(add):
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
        add("gas, power and heat", kind, {}, {"inlet": (FUEL, 3e5, HOT)})
        add("liquid water", kind, {}, {"inlet": (WATER,)})


def _power(add):
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
    add("20 %", "pv-field", {"efficiency": "20 %"}, {"light": 5e5})
    add("all of it", "pv-field", {"efficiency": 1}, {"light": 5e5})
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


def _electrolysis(add):
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


def _junctions(add):
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


def _separation(add):
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


def _heat(add):
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
    needs = {"shift": Heat(2e4, 600.0, 700.0, 648.7), "dryer": Heat(1e4, 330.0, 380.0, 354.4)}
    add("enough", "heat-network", {}, {"supply": (HOT, WARM)}, needs, outlets=("rest",))
    add("short, linked", "heat-network", {}, {"supply": (WARM,)}, needs, inlets=("shortage",))
    add("short, nothing behind it", "heat-network", {}, {"supply": (WARM,)}, needs, unmet=True)
    add("no heat at all", "heat-network", {}, {}, needs, inlets=("shortage",))


def _pressure(add):
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


def _reactors(add):
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
        extensive=(("reactions", 0, "extent"),),
    )
    greedy = {"reactions": [{"equation": "CO2 + 3 H2 -> CH3OH + H2O", "extent": "1.2 mol/s"}]}
    add(
        "more than there is",
        "reactor",
        {**greedy, "temperature": "250 degC"},
        {"feed": gas},
        matter=METHANOL,
        extensive=(("reactions", 0, "extent"),),
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


def _combustion(add):
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


def _stores(add):
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


def _all_cases():
    collector = _Collector()
    for part in (
        _boundary,
        _power,
        _electrolysis,
        _junctions,
        _separation,
        _heat,
        _pressure,
        _reactors,
        _combustion,
        _stores,
    ):
        part(collector.add)
    return tuple(collector.cases)


CASES = _all_cases()


def numbers(flow):
    """A flow as numbers: flows, enthalpy, temperature and pressure; heat; or W."""
    if isinstance(flow, Stream):
        return np.concatenate([flow.flows, [flow.enthalpy, flow.temperature, flow.pressure]])
    if isinstance(flow, Heat):
        return np.array([flow.rate, flow.start, flow.end, flow.mean])
    return np.array([float(flow)])

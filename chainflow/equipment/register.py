"""The register of kinds: every class of equipment by the name it has in a file.

A kind of the core is imported when it is first asked for, so that a file pays for its own kinds
only.  Other packages add kinds through the entry-point group ``chainflow.equipment``: each entry
point names a class derived from `Equipment`.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from functools import cache
from importlib import import_module
from importlib.metadata import entry_points

from chainflow.equipment.base import Equipment

ENTRY_POINT_GROUP = "chainflow.equipment"

CORE: dict[str, str] = {  # module and class of each kind
    "supply": "boundary.Supply",
    "product": "boundary.Product",
    "vent": "boundary.Vent",
    "sunlight": "sunlight.Sunlight",
    "pv-field": "pv_field.PvField",
    "concentrator": "concentrator.Concentrator",
    "switchboard": "power.Switchboard",
    "grid": "power.Grid",
    "battery": "battery.Battery",
    "electrolyser": "electrolysis.Electrolyser",
    "photoelectrode": "photoelectrode.Photoelectrode",
    "fuel-cell": "fuel_cell.FuelCell",
    "mixer": "junctions.Mixer",
    "blend": "junctions.Blend",
    "splitter": "junctions.Splitter",
    "separator": "separation.Separator",
    "condenser": "separation.Condenser",
    "flash-drum": "liquid_fuels.FlashDrum",
    "cut": "liquid_fuels.Cut",
    "absorber": "capture.Absorber",
    "air-capture": "capture.AirCapture",
    "membrane": "membranes.Membrane",
    "pressure-swing": "adsorption.PressureSwing",
    "water-treatment": "water_treatment.WaterTreatment",
    "heater": "heat.Heater",
    "cooler": "heat.Cooler",
    "heat-exchanger": "exchanger.HeatExchanger",
    "boiler": "boiler.Boiler",
    "heat-engine": "heat.HeatEngine",
    "heat-network": "heat_network.HeatNetwork",
    "valve": "expansion.Valve",
    "compressor": "compression.Compressor",
    "expander": "expansion.Expander",
    "pump": "expansion.Pump",
    "liquefier": "liquefier.Liquefier",
    "reactor": "reactors.Reactor",
    "shift-reactor": "shift.ShiftReactor",
    "methanation-reactor": "methanation.MethanationReactor",
    "reformer": "reformer.Reformer",
    "fischer-tropsch-reactor": "fischer_tropsch.FischerTropschReactor",
    "burner": "burner.Burner",
    "engine": "engine.Engine",
    "store": "stores.Store",
}


class Kinds(Mapping[str, type[Equipment]]):
    """Classes of equipment by kind, the core first; a class is imported when it is asked for."""

    def __init__(self, others: Mapping[str, type[Equipment]]) -> None:
        self._loaded: dict[str, type[Equipment]] = dict(others)
        self._names = tuple(dict.fromkeys((*CORE, *others)))

    def __getitem__(self, kind: str) -> type[Equipment]:
        found = self._loaded.get(kind)
        if found is None:
            module, _, name = CORE[kind].partition(".")
            found = getattr(import_module(f"chainflow.equipment.{module}"), name)
            self._loaded[kind] = found
        return found

    def __contains__(self, kind: object) -> bool:
        return kind in self._names

    def __iter__(self) -> Iterator[str]:
        return iter(self._names)

    def __len__(self) -> int:
        return len(self._names)


@cache
def kinds() -> Kinds:
    """All known kinds by name, the core first, then those of other packages by name."""
    others: dict[str, type[Equipment]] = {}
    for point in sorted(entry_points(group=ENTRY_POINT_GROUP), key=lambda p: p.name):
        cls = point.load()
        if not (isinstance(cls, type) and issubclass(cls, Equipment)):
            raise TypeError(
                f"entry point {point.name!r} is no kind of equipment: "
                "it must be a class derived from Equipment"
            )
        if cls.kind not in CORE:
            others.setdefault(cls.kind, cls)
    return Kinds(others)

"""The register of kinds: every class of equipment by the name it has in a file.

Other packages add kinds through the entry-point group ``chainflow.equipment``: each entry point
names a class derived from `Equipment`.
"""

from __future__ import annotations

from functools import cache
from importlib.metadata import entry_points

from chainflow.equipment import (
    adsorption,
    boiler,
    boundary,
    burner,
    capture,
    compression,
    electrolysis,
    engine,
    exchanger,
    expansion,
    fischer_tropsch,
    fuel_cell,
    heat,
    heat_network,
    junctions,
    liquefier,
    liquid_fuels,
    membranes,
    methanation,
    power,
    reactors,
    reformer,
    separation,
    shift,
    stores,
    sunlight,
    water_treatment,
)
from chainflow.equipment.base import Equipment

ENTRY_POINT_GROUP = "chainflow.equipment"

_CORE: tuple[type[Equipment], ...] = (
    boundary.Supply,
    boundary.Product,
    boundary.Vent,
    sunlight.Sunlight,
    sunlight.PvField,
    power.Switchboard,
    power.Grid,
    electrolysis.Electrolyser,
    fuel_cell.FuelCell,
    junctions.Mixer,
    junctions.Blend,
    junctions.Splitter,
    separation.Separator,
    separation.Condenser,
    liquid_fuels.FlashDrum,
    liquid_fuels.Cut,
    capture.Absorber,
    capture.AirCapture,
    membranes.Membrane,
    adsorption.PressureSwing,
    water_treatment.WaterTreatment,
    heat.Heater,
    heat.Cooler,
    exchanger.HeatExchanger,
    boiler.Boiler,
    heat.HeatEngine,
    heat_network.HeatNetwork,
    expansion.Valve,
    compression.Compressor,
    expansion.Expander,
    expansion.Pump,
    liquefier.Liquefier,
    reactors.Reactor,
    shift.ShiftReactor,
    methanation.MethanationReactor,
    reformer.Reformer,
    fischer_tropsch.FischerTropschReactor,
    burner.Burner,
    engine.Engine,
    stores.Store,
)


@cache
def kinds() -> dict[str, type[Equipment]]:
    """All known kinds by name, the core first, then those of other packages by name."""
    known = {cls.kind: cls for cls in _CORE}
    for point in sorted(entry_points(group=ENTRY_POINT_GROUP), key=lambda p: p.name):
        cls = point.load()
        if not (isinstance(cls, type) and issubclass(cls, Equipment)):
            raise TypeError(
                f"entry point {point.name!r} is no kind of equipment: "
                "it must be a class derived from Equipment"
            )
        known.setdefault(cls.kind, cls)
    return known

"""The register of kinds: every class of equipment by the name it has in a file.

Other packages add kinds through the entry-point group ``chainflow.equipment``: each entry point
names a class derived from `Equipment`.
"""

from __future__ import annotations

from functools import cache
from importlib.metadata import entry_points

from chainflow.equipment import (
    boundary,
    burner,
    compression,
    electrolysis,
    engine,
    expansion,
    heat,
    heat_network,
    junctions,
    methane_reactors,
    power,
    reactors,
    separation,
    stores,
    sunlight,
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
    junctions.Mixer,
    junctions.Blend,
    junctions.Splitter,
    separation.Separator,
    separation.Condenser,
    heat.Heater,
    heat.Cooler,
    heat.HeatEngine,
    heat_network.HeatNetwork,
    expansion.Valve,
    compression.Compressor,
    expansion.Expander,
    expansion.Pump,
    reactors.Reactor,
    methane_reactors.ShiftReactor,
    methane_reactors.MethanationReactor,
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

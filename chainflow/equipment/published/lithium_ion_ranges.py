"""Mass and volume of lithium-ion cells per energy kept.

Range read in an encyclopaedia's comparison of ways to keep energy: 100 to 265 Wh/kg, 250 to
700 Wh/L, of the bare cell. What it does not claim: packs, racks, cooling and housing, which add
a third to twice as much again (common practice, no source), and any one chemistry or year.
"""

SPECIFIC_ENERGY = (100.0, 265.0)  # [Wh/kg]
ENERGY_DENSITY = (250.0, 700.0)  # [Wh/L]
_WATT_HOUR = 3600.0  # [J]

MASS = 2.0 / sum(SPECIFIC_ENERGY) / _WATT_HOUR
"""Mass per energy in the middle of the range [kg/J]: 182.5 Wh/kg, 5.48 kg/kWh."""

VOLUME = 2.0e-3 / sum(ENERGY_DENSITY) / _WATT_HOUR
"""Volume per energy in the middle of the range [m3/J]: 475 Wh/L, 2.11 L/kWh."""

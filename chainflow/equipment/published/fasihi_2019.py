"""Low-temperature air capture: Fasihi, Efimova and Breyer, J. Clean. Prod. 224 (2019) 957.

Certainty: R for the temperature of 80 to 120 degC, M (from memory) for 1750 kWh of heat and 250
kWh of power per tonne.  A forecast for plants at scale, not a measurement.
"""

HEAT = 1750.0 * 3.6e6 / 1e3  # [J/kg CO2]
POWER = 250.0 * 3.6e6 / 1e3  # [J/kg CO2]
TEMPERATURE = 373.15  # [K]

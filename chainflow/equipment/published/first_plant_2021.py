"""The first large air-capture plant with solid sorbent (4000 t/a, started 2021).

Certainty: R as restated in a Stanford PH240 course paper, 2023: 8 GWh of heat and 2.6 GWh of power
a year.  Nameplate figures; the plant has not been seen to reach them.
"""

HEAT = 2000.0 * 3.6e6 / 1e3  # [J/kg CO2]
POWER = 650.0 * 3.6e6 / 1e3  # [J/kg CO2]
TEMPERATURE = 373.15  # [K]

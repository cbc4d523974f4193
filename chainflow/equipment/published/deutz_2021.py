"""Two operating air-capture plants: Deutz and Bardow, Nature Energy 6 (2021) 203.

Certainty: R for the capture efficiencies over the life cycle (85.4 and 93.1 %, not used here), M
(from memory) for the energies: today 3300 kWh of heat and 700 kWh of power per tonne, target 1500
and 500.  Solid sorbent, heat at about 100 degC.
"""

HEAT_TODAY = 3300.0 * 3.6e6 / 1e3  # [J/kg CO2]
POWER_TODAY = 700.0 * 3.6e6 / 1e3
HEAT_TARGET = 1500.0 * 3.6e6 / 1e3
POWER_TARGET = 500.0 * 3.6e6 / 1e3
TEMPERATURE = 373.15  # [K]

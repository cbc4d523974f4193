"""Air capture with potassium hydroxide and a calciner: Keith et al., Joule 2 (2018) 1573.

Certainty: M (from memory): 5.25 GJ of gas and 366 kWh of power per tonne, calciner at 900 degC.
The paper's gas is burned with oxygen in the calciner and its CO2 captured too; here the same heat
is asked for at 900 degC and the compression to 150 bar in the 366 kWh is not modelled apart.
"""

HEAT = 5.25e9 / 1e3  # [J/kg CO2]
POWER = 366.0 * 3.6e6 / 1e3  # [J/kg CO2]
TEMPERATURE = 1173.15  # [K]

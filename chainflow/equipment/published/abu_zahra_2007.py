"""Capture with monoethanolamine from coal flue gas, after Abu-Zahra et al., 2007.

Int. J. Greenhouse Gas Control 1 (2007) 37.  Certainty: M (both figures from memory).  90 % of the
CO2 of a flue gas with some 13 % CO2.  The optimised case has more lean loading, 40 wt% solvent and
a higher stripper pressure; neither says anything about gases with other contents.
"""

HEAT_BASE = 3.9e9 / 1e3  # [J/kg CO2]
HEAT_OPTIMISED = 3.15e9 / 1e3  # [J/kg CO2], middle of 3.0 to 3.3
TEMPERATURE = 393.15  # [K]

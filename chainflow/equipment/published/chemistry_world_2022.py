"""Heat to regenerate monoethanolamine: the average quoted in Chemistry World, 2022.

Certainty: R (the figure was read there; range of other reports 3.0 to 4.2 GJ/t, of which 3.9 base
and 3.0 to 3.3 optimised are Abu-Zahra et al., Int. J. Greenhouse Gas Control 1 (2007) 37, M).  The
regeneration temperature of 120 degC and all electricity are common practice, no source.  It does
not say for which flue gas it holds.
"""

HEAT = 3.7e9 / 1e3  # [J/kg CO2]
TEMPERATURE = 393.15  # [K], common practice: solvent breaks down faster above
"""Reboiler of 30 wt% monoethanolamine."""

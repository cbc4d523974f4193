"""Pilot study of energy-efficient solvents, GHGT-11 conference, Energy Procedia 37 (2013).

Certainty: R (numbers of the abstract; authors not noted).  90 % capture, absorption at 40 degC,
regeneration at 120 degC and 2.0 to 2.2 bar.  Two CO2 contents were run, 5 and 10 vol%; between
them chainflow interpolates linearly, outside it keeps the nearer one.  It does not claim that a
large plant with good heat recovery needs as much.
"""

CONTENTS = (0.05, 0.10)  # mole fraction of CO2 in the gas
MEA = (4.80e6, 4.33e6)  # [J/kg CO2], 30 wt% monoethanolamine
AMP_HMDA = (3.62e6, 3.41e6)  # [J/kg CO2], 2-amino-2-methyl-1-propanol with hexamethylenediamine
NEW_SOLVENT = (2.48e6, 2.26e6)  # [J/kg CO2], not named in the abstract
TEMPERATURE = 393.15  # [K]

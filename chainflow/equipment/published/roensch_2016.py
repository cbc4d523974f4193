"""Temperatures of nickel catalysts for methanation, after Roensch et al., Fuel 166 (2016) 276.

Certainty: M (from memory; that they lose activity by sintering in this range is the abstract of
Gao et al., RSC Adv. 5 (2015) 22759, read).  They are for cautions: no catalyst is promised to work
inside them, and a maker's figure goes before them.
"""

LOWEST_INLET = 523.15  # [K], 240 to 250 degC are usual at a bed's inlet
ORDINARY_LIMIT = 823.15  # [K], 550 degC
HIGH_TEMPERATURE_LIMIT = 973.15  # [K], 700 degC, high-temperature grades
STARTS_ABOVE = 473.15  # [K], 200 degC
CARBONYL_BELOW = 473.15  # [K], nickel carbonyl forms with CO; common practice, no source

"""What pressure-swing adsorption of hydrogen usually does.

Certainty: M (practice, no source).  For cautions only; vacuum-swing of CO2 has recovery 85 to 95 %,
purity 90 to 97 % and takes 150 to 300 kWh/t (reviews, from memory).
"""

RECOVERY = (0.75, 0.92)
LEAST_HYDROGEN = 0.60  # mole fraction in the feed

"""What hydrogen liquefiers take: Stolzenburg et al., IDEALHY, 2013, and the trade for the others.

Certainty: R for hydrogen, 11 to 15 kWh/kg today and 6.4 kWh/kg for a concept at 80 bar; C for the
exergy efficiencies that follow with the ideal work from 20 bar (2.91 kWh/kg): 20 to 30 % today,
43 to 45 % for the concept.  Methane: M, 0.25 to 0.35 kWh/kg in large plants from 40 to 60 bar, that
is about 45 %.  Carbon dioxide, nitrogen and oxygen: common practice, no source.
"""

EFFICIENCIES = {"H2": 0.25, "CH4": 0.45, "CO2": 0.45, "N2": 0.40, "O2": 0.40}
CONCEPT = 0.44  # hydrogen

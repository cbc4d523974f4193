"""What does a solid-oxide cell resist, between two published operating points?

Schefold, Brisse, Zahid, Electrochim. Acta 179 (2015) 161: 45 cm2 cell, 847 degC, 0.9 A/cm2, 51 %
steam conversion, 1.185 V (R, abstract), and a 6-cell stack of 2014 at 700 degC, 0.5 A/cm2, 42 %,
1.26 to 1.29 V (R, project note of the European ADEL project). Certainty C of R: 0.37 ohm cm2 at
800 degC and 50 kJ/mol bridge two different cell types, so they are no property of either. Whole
cells show 50 to 100 kJ/mol (M).
"""

SOURCE = (
    "set schefold-2015: bridge (C) of Schefold, Brisse, Zahid, Electrochim. Acta 179 (2015) "
    "161 and an ADEL stack (R)"
)
NUMBERS = {"resistance": 0.37e-4, "activation_energy": 50e3}  # [ohm m2] at 800 degC, [J/mol]

"""Permeances of a generic polyimide hollow fibre at 30 to 50 degC.

Certainty: M (own choice inside ranges from memory: H2O 1000 and more, H2 100 to 370, CO2 30 to 100,
O2 8 to 20, CO 2 to 5, N2 1.5 to 4, CH4 1 to 3 GPU).  Read (R) is one flat sheet at
the former GKSS: H2 370 GPU with H2/CH4 of 100 and more.  They are of pure gases: in mixtures the
selectivity falls from some 3 bar of CO2 on (Visser et al., J. Membr. Sci. 306 (2007) 16; abstract
read), which is not modelled.  No product is meant.
"""

PERMEANCES = {  # [GPU]
    "H2O": 1000.0,
    "H2": 150.0,
    "CO2": 60.0,
    "O2": 12.0,
    "CO": 3.0,
    "N2": 2.0,
    "CH4": 1.5,
}
PLASTICISES_ABOVE = 3e5  # [Pa] of CO2, R (abstract)

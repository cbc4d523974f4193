"""Kinetics of oxygen on platinum in a PEM fuel cell.

Neyerlin, Gu, Jorne, Gasteiger, J. Electrochem. Soc. 153 (2006) A1955, from memory (M): 2.47e-8 A
per cm2 of platinum at 80 degC and 101.3 kPa oxygen, order 0.54 in oxygen pressure, 67 kJ/mol, 70
mV per decade (transfer number 1). Times 240 cm2 platinum per cm2 (0.4 mg/cm2 of 60 m2/g, M).
Membrane, contact and limiting current are usual values (M). With them 0.3 A/cm2 comes at about 0.8
V, the target of a public component table (R).
"""

SOURCE = (
    "oxygen kinetics: Neyerlin, Gu, Jorne, Gasteiger, J. Electrochem. Soc. 153 (2006) A1955 (M)"
)
REFERENCE_TEMPERATURE = 353.15  # [K]
REFERENCE_PRESSURE = 101325.0  # [Pa] of oxygen
NUMBERS = {
    "exchange_current": 2.47e-4 * 240.0,  # [A/m2] at 80 degC and 101.3 kPa oxygen
    "activation_energy": 67e3,  # [J/mol]
    "oxygen_order": 0.54,
    "transfer": 1.0,
    "thickness": 25e-6,  # [m], perfluorosulfonic acid, dry
    "water_content": 14.0,  # over saturated vapour
    "contact_resistance": 2e-6,  # [ohm m2]
    "limiting_current": 2e4,  # [A/m2]
}

"""PEM electrolyser kinetics of the noble-metal cells of about 2000 to 2015.

Numbers widely restated (r); probably first Han, Steen, Mo, Zhang, Int. J. Hydrogen Energy 40
(2015) 7006, after Choi, Bessarabov, Datta, Solid State Ionics 175 (2004) 535 (attribution M).
Membrane thickness, contact resistance and limiting current are usual values from memory (M). The
curve lies inside the industrial range; it is nobody's measured cell.
"""

SOURCE = (
    "set han-2015: Han, Steen, Mo, Zhang, Int. J. Hydrogen Energy 40 (2015) 7006 "
    "(numbers r, attribution M; membrane 127 um, contact and limiting current M)"
)
NUMBERS = {
    "anode_exchange_current": 7.5e-6,  # [A/m2] at 25 degC: 150 x 5e-12 A/cm2
    "anode_activation_energy": 76e3,  # [J/mol]
    "anode_transfer": 1.0,  # transfer coefficient times electrons [-]
    "cathode_exchange_current": 1.5e3,  # [A/m2] at 25 degC: 150 x 1e-3 A/cm2
    "cathode_activation_energy": 4.3e3,  # [J/mol]
    "cathode_transfer": 1.0,
    "thickness": 127e-6,  # [m], perfluorosulfonic acid, dry (M)
    "water_content": 22.0,  # [mol/mol] (M)
    "contact_resistance": 2e-6,  # [ohm m2], 0.02 ohm cm2 (M)
    "limiting_current": 6e4,  # [A/m2], 6 A/cm2 (M)
}

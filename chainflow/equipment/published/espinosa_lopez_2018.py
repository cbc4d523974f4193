"""PEM electrolyser kinetics fitted to a 46 kW stack at 60 degC.

Espinosa-Lopez et al., Renewable Energy 119 (2018) 160, from memory (M). At 80 degC and 1 A/cm2 it
gives 1.89 V (C), inside the 1.88 to 1.93 V of an independent low-iridium cell (R, abstract of Ban
et al. 2019). The cathode is within the anode's loss; the limiting current is a usual value (M).
"""

SOURCE = "set espinosa-lopez-2018: Espinosa-Lopez et al., Renewable Energy 119 (2018) 160 (M)"
NUMBERS = {
    "anode_exchange_current": 1.0868e-4,  # [A/m2] at 25 degC
    "anode_activation_energy": 52.99e3,  # [J/mol]
    "anode_transfer": 0.7353,
    "cathode_exchange_current": 1e9,  # [A/m2], no loss of its own
    "cathode_activation_energy": 0.0,
    "cathode_transfer": 1.0,
    "thickness": 178e-6,  # [m]
    "conductivity": 10.31,  # [S/m] at 25 degC
    "conductivity_activation_energy": 10.54e3,  # [J/mol]
    "contact_resistance": 0.0,
    "limiting_current": 6e4,  # [A/m2] (M)
}

"""PEM electrolyser kinetics of a good laboratory cell with a thin membrane.

Fitted here (C) to points remembered (M) from Bernt, Gasteiger, J. Electrochem. Soc. 163 (2016)
F3179, doi 10.1149/2.0231611jes: 1.57 V at 1 A/cm2 and below 2.0 V at 6 A/cm2, 51 um, 80 degC,
ambient pressure; Tafel slope 46 mV per decade, 0.057 ohm cm2 in all. The fit counts both gases as
saturated with water at 1 bar. The loss of the cathode is within that of the anode. The activation
energy is that of the older set (M): away from 80 degC the curve is a guess. No published curve
with more than two points was seen.
"""

from math import exp

from chainflow.basis.constants import GAS_CONSTANT

SOURCE = (
    "set bernt-2016: fitted (C) to points remembered (M) from Bernt, Gasteiger, "
    "J. Electrochem. Soc. 163 (2016) F3179"
)
_AT_80_DEGC = 3.65e-4  # [A/m2]
_ACTIVATION = 76e3  # [J/mol]
NUMBERS = {
    "anode_exchange_current": _AT_80_DEGC
    * exp(-_ACTIVATION / GAS_CONSTANT * (1.0 / 298.15 - 1.0 / 353.15)),
    "anode_activation_energy": _ACTIVATION,
    "anode_transfer": 1.51,
    "cathode_exchange_current": 1e9,  # [A/m2], no loss of its own
    "cathode_activation_energy": 0.0,
    "cathode_transfer": 1.0,
    "thickness": 51e-6,  # [m], perfluorosulfonic acid, dry (M)
    "water_content": 22.0,
    "contact_resistance": 3.14e-6,  # [ohm m2], 0.057 ohm cm2 less the membrane's 0.0256
    "limiting_current": 20e4,  # [A/m2], none was seen below 6 A/cm2
}

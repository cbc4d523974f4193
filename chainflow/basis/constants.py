"""Which fixed numbers does everything share?

SI units throughout: J, mol, K, Pa, m, A. The values that define the SI since 2019 (Boltzmann,
Avogadro, the elementary charge) are exact, so the gas constant and the Faraday constant are too.
Source of the exact values: CODATA 2018, Tiesinga et al., Rev. Mod. Phys. 93 (2021) 025010;
``scipy.constants`` prints the same numbers. Nothing here depends on the composition: a normal
volume is one of an *ideal* gas, as gas meters and catalogues use it.
"""

from typing import Final

BOLTZMANN: Final = 1.380649e-23
"""Boltzmann constant [J/K], exact (SI definition)."""

AVOGADRO: Final = 6.02214076e23
"""Avogadro constant [1/mol], exact (SI definition)."""

ELEMENTARY_CHARGE: Final = 1.602176634e-19
"""Charge of the electron [C], exact (SI definition)."""

PLANCK: Final = 6.62607015e-34
"""Planck constant [J s], exact (SI definition)."""

LIGHT_SPEED: Final = 299792458.0
"""Speed of light in vacuum [m/s], exact (SI definition)."""

GAS_CONSTANT: Final = BOLTZMANN * AVOGADRO
"""Molar gas constant [J/(mol K)], 8.314462618...; exact product of two exact numbers."""

FARADAY: Final = ELEMENTARY_CHARGE * AVOGADRO
"""Faraday constant [C/mol], 96485.33212...; exact product of two exact numbers."""

STEFAN_BOLTZMANN: Final = 5.670374419e-8
"""Stefan-Boltzmann constant [W/(m2 K4)], CODATA 2018, exact but printed rounded."""

ICE_POINT: Final = 273.15
"""0 degC [K], exact by the definition of the Celsius scale (SI brochure, 9th edition)."""

T_REFERENCE: Final = 298.15
"""25 degC [K]: temperature of tabulated formation enthalpies and heating values."""

P_REFERENCE: Final = 1.0e5
"""1 bar [Pa]: standard-state pressure (IUPAC recommendation of 1982)."""

ATMOSPHERE: Final = 101325.0
"""Standard atmosphere [Pa], exact (10th CGPM, 1954)."""

NORMAL_TEMPERATURE: Final = ICE_POINT
"""0 degC [K]: temperature of the normal cubic metre, Nm3 (DIN 1343)."""

STANDARD_TEMPERATURE: Final = ICE_POINT + 15.0
"""15 degC [K]: temperature of the standard cubic metre, Sm3 (ISO 13443)."""

NORMAL_MOLAR_VOLUME: Final = GAS_CONSTANT * NORMAL_TEMPERATURE / ATMOSPHERE
"""Volume of one mol of ideal gas at 0 degC and 1.01325 bar [m3/mol], 0.02241396954..."""

STANDARD_MOLAR_VOLUME: Final = GAS_CONSTANT * STANDARD_TEMPERATURE / ATMOSPHERE
"""Volume of one mol of ideal gas at 15 degC and 1.01325 bar [m3/mol], 0.0236448..."""

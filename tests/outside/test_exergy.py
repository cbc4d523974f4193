"""Standard chemical exergies and the exergy of sunlight against print.

Szargut, Egzergia, Gliwice 2007, Appendix 1 (CH4, C3H8: read); Szargut, Morris, Steward 1988 (the
others, from memory); Petela, J. Heat Transfer 86 (1964) 187.
"""

import pytest

from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.exergy import chemical_exergies, solar_exergy_factor
from chainflow.thermo.streams import Stream

MATTER = Matter.of((*DEFAULT_COMPONENTS, "CH3OH", "C3H8", "C2H6", "C2H4"))


@pytest.mark.parametrize(
    ("name", "published"),
    [
        ("CH4", 831.2),
        ("C3H8", 2152.8),
        ("H2", 236.09),
        ("CO2", 19.87),
        ("O2", 3.97),
        ("CH3OH", 722.3),
        ("CO", 275.10),
        ("C2H6", 1495.8),
        ("C2H4", 1361.1),
        ("N2", 0.72),
    ],
)
def test_standard_chemical_exergies(name, published):
    # 298.15 K, 101.325 kPa, [kJ/mol]; 0.3 %, or 0.05 kJ/mol for small values
    own = chemical_exergies(MATTER)[MATTER.index[name]] / 1e3
    assert own == pytest.approx(published, rel=3e-3, abs=0.05)


def test_liquid_water():
    # Szargut, Morris, Steward 1988, from memory: 0.9 kJ/mol; 0.05
    stream = Stream.at(MATTER, MATTER.vector({"H2O": 1.0}), 298.15, 101325.0)
    assert stream.water.sum() == 1.0
    assert stream.exergy() / 1e3 == pytest.approx(0.9, abs=0.05)


def test_sunlight():
    # Petela 1964, x = 298.15/5778: 0.9312, 0.0005
    assert solar_exergy_factor() == pytest.approx(0.9312, abs=5e-4)

import pytest
from chemicals import safety

from chainflow.accounts.flammability import LIMITS, gas_mixture
from chainflow.thermo.components import Matter
from chainflow.thermo.streams import Stream

MATTER = Matter.of(("H2", "O2", "N2", "H2O", "CO", "CO2", "CH4", "N2O"))
CAS = {
    "H2": "1333-74-0",
    "CH4": "74-82-8",
    "CO": "630-08-0",
    "CH3OH": "67-56-1",
    "CH3OCH3": "115-10-6",
    "NH3": "7664-41-7",
    "C2H2": "74-86-2",
    "C2H4": "74-85-1",
    "C2H6": "74-84-0",
    "C3H6": "115-07-1",
    "C3H8": "74-98-6",
    "n-C4H10": "106-97-8",
}


def mixture(**shares):
    flows = MATTER.vector(shares)
    return gas_mixture(Stream.gaseous(MATTER, flows, 298.15, 1e5))


def test_every_fuel_with_limits_is_compared():
    assert set(CAS) == set(LIMITS)


@pytest.mark.parametrize("name", CAS)
def test_lower_limits_are_those_of_the_standard(name):
    # IEC 60079-20-1:2010 as shipped in the library chemicals 1.5.2
    published = safety.LFL(CASRN=CAS[name], method="IEC 60079-20-1 (2010)")
    assert LIMITS[name].lower == published


def test_le_chatelier_by_hand():
    # equal parts of H2 (4.0 %) and CH4 (4.4 %): 1 / (0.5/4.0 + 0.5/4.4) = 4.190 %
    assert mixture(H2=1.0, CH4=1.0).lower == pytest.approx(0.04190, abs=5e-6)


@pytest.mark.parametrize(
    ("shares", "flammable"),
    [
        ({"H2": 29.6, "O2": 14.8, "N2": 55.6}, True),  # hydrogen and air, stoichiometric
        ({"CH4": 9.5, "O2": 19.0, "N2": 71.5}, True),  # methane and air, stoichiometric
        ({"H2": 3.0, "O2": 20.4, "N2": 76.6}, False),  # below the lower limit
        ({"H2": 99.0, "O2": 1.0}, False),  # too little oxygen
        ({"H2": 10.0, "O2": 90.0}, True),  # hydrogen leaks into oxygen
        ({"CH4": 50.0, "O2": 10.5, "N2": 39.5}, False),  # methane-rich air
        ({"CO2": 96.0, "O2": 4.0}, False),  # no fuel
        ({"N2O": 100.0}, False),
    ],
)
def test_judgement(shares, flammable):
    assert mixture(**shares).flammable is flammable


def test_alarm_at_half_the_limits():
    close = mixture(H2=2.1, O2=20.0, N2=77.9)
    assert close.within(0.5)
    assert not close.flammable
    assert not mixture(H2=1.9, O2=20.0, N2=78.1).within(0.5)


def test_a_stream_without_gas_is_no_mixture():
    water = Stream.at(MATTER, MATTER.vector({"H2O": 1.0}), 298.15, 1e6)
    assert not gas_mixture(water).within(0.01)

"""Whole chains of the shipped flowsheets against published ranges and against their upper bounds.

Sources: Sterner, Jentsch, Holzhammer, Fraunhofer IWES study 2011 (from memory): electricity to gas
with compression to 0-200 bar 54-77 % for hydrogen, 49-65 % for methane; electricity to gas to
electricity with a 60 % power plant and 80 bar 34-44 % and 30-38 %.  A press text on a methanation
project quotes 54 % for a conventional power-to-methane plant (read).  Koenig, Freiberg, Dietrich,
Woerner, Fuel 159 (2015) 289 (from memory): electricity to Fischer-Tropsch liquids 43-50 %.  System
electricity of electrolysers 50-60 kWh/kg: a hydrogen information website (read).  Upper bounds are
stoichiometry with the lower heating values 241.82 kJ/mol (H2), 802.3 (CH4), and 237.1 kJ/mol for
the reversible work of splitting liquid water at 25 degC.
"""

import pytest

from chainflow.accounts.plant import plant_account
from tests.flowsheets.shipped import FOLDER, flow, rate, solved

HYDROGEN = ("hydrogen-store", "hydrogen-700-bar", "hydrogen-fuel-cell", "hydrogen-liquid")
METHANE = ("methane-store", "methane-compressed", "methane-liquid")
CYCLES = ("methane-cycle", "methane-cycle-direct")
LHV_HYDROGEN, LHV_METHANE, WORK_OF_SPLITTING = 241.82, 802.3, 237.1  # kJ/mol
# most of the hydrogen's LHV that ends in the fuel: n-alkanes from CO2, 3n+1 H2 for C_nH_2n+2
MOST_KEPT = {"methane": LHV_METHANE / (4 * LHV_HYDROGEN), "liquid": 2043.0 / (10 * LHV_HYDROGEN)}


def shares(name, basis="LHV", **knobs):
    """Energy at each cut per energy of the light."""
    left, found = 1.0, {}
    for rung in plant_account(solved(name, **knobs)).efficiency.rungs:
        left *= rung.ratio[basis]
        found[rung.end] = left
    return found


def from_power(name, cut, **knobs):
    found = shares(name, **knobs)
    return found[cut] / found["power"]


@pytest.mark.parametrize("name", HYDROGEN[:3])
def test_power_to_hydrogen(name):
    assert 0.54 <= from_power(name, "fuel kept") <= 0.77


def test_liquid_hydrogen_is_below_the_range_of_compressed_hydrogen():
    """The range is for 0-200 bar; a liquefier takes 11.4 kWh/kg, 0.34 of the LHV, in its place."""
    assert from_power("hydrogen-liquid", "fuel kept") == pytest.approx(
        33.33 / (52 + 11.4), rel=0.01
    )
    assert 0.54 <= from_power("hydrogen-liquid", "fuel kept", machine="45 %")


@pytest.mark.parametrize("name", METHANE)
def test_power_to_methane(name):
    assert 0.49 <= from_power(name, "fuel kept") <= 0.65


@pytest.mark.parametrize("name", CYCLES)
def test_power_to_methane_in_the_cycles(name):
    assert 0.49 <= from_power(name, "fuel kept") <= 0.65


def test_power_to_hydrogen_to_power():
    """With the range's own power plant of 60 % and 80 bar; a fuel cell comes close to it."""
    found = from_power("hydrogen-store", "power out", engine="60 % LHV", keep="80 bar")
    assert 0.34 <= found <= 0.44
    assert 0.34 <= from_power("hydrogen-fuel-cell", "power out") <= 0.44


def test_power_to_methane_to_power():
    found = from_power("methane-compressed", "power out", engine="60 % LHV", keep="80 bar")
    assert 0.30 <= found <= 0.38


def test_engines_of_a_village_are_below_the_range_by_their_efficiency_alone():
    """42 % in place of 60 %: 34-44 and 30-38 % become 24-31 and 21-27 %."""
    assert 0.34 * 0.7 <= from_power("hydrogen-store", "power out") <= 0.44 * 0.7
    for name in ("methane-compressed", "methane-liquid"):
        assert 0.30 * 0.7 <= from_power(name, "power out") <= 0.38 * 0.7


def test_power_to_liquids():
    assert 0.43 <= from_power("liquid-fuel", "fuel kept") <= 0.50


@pytest.mark.parametrize("name", HYDROGEN[:3] + METHANE)
def test_electricity_of_the_whole_plant_for_hydrogen(name):
    """All power of the board per hydrogen made: 50 to 60 kWh/kg."""
    solution = solved(name)
    made = flow(solution, "stack.hydrogen").flow("H2") * 2.016e-3
    assert 50.0 <= rate(solution, "field.power") / made / 3.6e6 <= 60.0


@pytest.mark.parametrize("name", METHANE + CYCLES)
@pytest.mark.parametrize(("basis", "lost"), [("LHV", 0.170), ("HHV", 0.221)])
def test_what_methanation_loses(name, basis, lost):
    """17.0 % by LHV and 22.1 % by HHV in closed form; what the purge takes comes on top."""
    found = shares(name, basis)
    loss = 1.0 - found["fuel made"] / found["hydrogen"]
    assert lost < loss < lost + 0.03


def test_water_that_comes_back_from_methanation():
    """CO2 + 4 H2 gives back 2 of 4 water; drying and the oxygen take a little along."""
    assert plant_account(solved("methane-store")).returned["water"] == pytest.approx(0.5, abs=0.01)


# --- what cannot be beaten -----------------------------------------------------------------------


def most(name):
    """Most of the power that can end as fuel, by LHV: reversible splitting, then stoichiometry."""
    kind = "methane" if name.startswith("methane") else "liquid"
    kept = 1.0 if name.startswith("hydrogen") else MOST_KEPT[kind]
    return LHV_HYDROGEN / WORK_OF_SPLITTING * kept


ROUTES = (*HYDROGEN, *METHANE, *CYCLES, "liquid-fuel")


@pytest.mark.parametrize("name", ROUTES)
def test_no_route_beats_its_reversible_steps(name):
    found = shares(name)
    account = plant_account(solved(name)).efficiency
    bound = found["power"] * most(name)
    assert account.sunlight_to_fuel["LHV"] < bound
    assert found["fuel kept"] < bound
    exergy = shares(name, "exergy")
    assert exergy["fuel kept"] < exergy["power"]


@pytest.mark.parametrize("name", [n for n in ROUTES if n.startswith(("methane", "liquid"))])
def test_no_route_beats_stoichiometry(name):
    """83.0 % of the hydrogen's LHV in methane, 84.5 in the best alkane (propane), 84.0 in C16."""
    found = shares(name)
    kind = "methane" if name.startswith("methane") else "liquid"
    assert found["fuel made"] / found["hydrogen"] < MOST_KEPT[kind]


@pytest.mark.parametrize("name", ["hydrogen-store", "methane-compressed", "methane-liquid"])
def test_the_best_settings_do_not_beat_the_reversible_steps(name):
    """Every knob at its favourable end."""
    best = {"energy_use": "45 kWh/kg", "engine": "48 % LHV", "keep": "50 bar", "machine": "50 %"}
    text = (FOLDER / f"{name}.yaml").read_text()
    knobs = {key: value for key, value in best.items() if f"\n  {key}: " in text}
    if "purge" in text:
        knobs |= {"purge": "0.1 %", "inert": "0 %"}
    found = shares(name, **knobs)
    assert shares(name)["fuel kept"] < found["fuel kept"] < found["power"] * most(name)
    assert found["power out"] < found["fuel kept"]

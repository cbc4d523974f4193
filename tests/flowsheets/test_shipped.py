"""The shipped flowsheets solve, and their headline figures are what a hand calculation gives.

Hand calculations use LHV 241.8 kJ/mol of hydrogen and 802.3 kJ/mol of methane (ISO 6976:2016,
25 degC, rounded) and 2.016 g/mol of hydrogen.
"""

import re

import pytest

from chainflow.accounts.hazards import cautions, idealisations
from chainflow.accounts.plant import plant_account
from chainflow.flowsheet.building import read_text
from tests.flowsheets.ranges import RANGES
from tests.flowsheets.shipped import (
    CLOSED,
    COLD_STACKS,
    CYCLES,
    FIRED,
    FOLDER,
    SHIPPED,
    SUNNY,
    flow,
    numbers,
    rate,
    solved,
    solved_text,
    text_of,
)

MAKERS = ("methane-store", *CYCLES, "photoelectrode-methane")  # of methane
PRESSED = tuple(name for name in COLD_STACKS if "- board.press -> press.power" in text_of(name))
LIGHT = 800 * 25000.0  # [W], irradiance by aperture
EXPECTED_CAUTIONS = {
    "asphyxiating-contents",
    "dusting-when-cooled",  # wherever gas with CO is cooled from a shift's heat
    "flammable-contents",
    "high-pressure",
    "hot-hydrogen",
    "oxygen-enriched",
    "toxic-contents",
}
MORE_CAUTIONS = {"liquid-fuel": {"carbon-at-inlet"}}  # no steam cures tail gas with CO: its text


def rungs(solution):
    found = plant_account(solution).efficiency.rungs
    return {rung.end: rung.ratio["LHV"] for rung in found}


def efficiency(solution, which="overall"):
    return getattr(plant_account(solution).efficiency, which)["LHV"]


# --- the files -------------------------------------------------------------------------------


def test_every_shipped_flowsheet_is_tested():
    assert {path.stem for path in FOLDER.glob("*.yaml")} == set(SHIPPED)


@pytest.mark.parametrize("name", SHIPPED)
def test_a_file_says_what_it_is_and_how_it_was_checked(name):
    head = text_of(name).split("title:")[0]
    assert head.startswith("# ")
    assert "invented" in head
    assert "(invented)" in text_of(name).split("title:")[1].splitlines()[0]
    assert "# Checked by hand" in text_of(name)


def written_ranges(name):
    knobs = re.search(r"\nknobs:.*?\n((?:  .*\n)+)", text_of(name)).group(1)
    line = r"^  (\w+): .*?# ([\d.]+) to ([\d.]+) (% LHV|\S+)"
    found = re.findall(line, knobs, re.MULTILINE)
    return {knob: (float(low), float(high), unit) for knob, low, high, unit in found}


@pytest.mark.parametrize("name", SHIPPED)
def test_the_ranges_in_the_file_are_those_of_the_tests(name):
    assert written_ranges(name) == RANGES[name]
    assert set(RANGES[name]) == set(read_text(text_of(name)).knobs)


# --- the answers -----------------------------------------------------------------------------


@pytest.mark.parametrize("name", SHIPPED)
def test_it_solves_and_closes(name):
    solution = solved(name)
    assert max(solution.balance.elements, solution.balance.energy) < 1e-9
    assert solution.remarks == ()
    assert idealisations(solution) == ()


@pytest.mark.parametrize("name", SHIPPED)
def test_nothing_is_cautioned_that_a_better_design_would_avoid(name):
    expected = EXPECTED_CAUTIONS | MORE_CAUTIONS.get(name, set())
    assert {remark.code for remark in cautions(solved(name))} <= expected


@pytest.mark.parametrize("name", [*SUNNY, "battery"])
def test_all_machines_run_on_the_sun(name):
    account = plant_account(solved(name))
    assert account.bought.power_total == 0
    assert account.bought.heat_total == 0
    assert account.bought.cold_total == 0
    assert account.efficiency.sunlight_share == 1
    assert account.sunlight == pytest.approx(LIGHT, rel=1e-12)


@pytest.mark.parametrize("name", FIRED)
def test_all_that_burns_is_bought(name):
    """100 kg/h of methane, 16.04 g/mol and 802.3 kJ/mol: 1.389 MW."""
    account = plant_account(solved(name))
    assert account.bought.power_total == 0
    assert account.sunlight == 0
    assert float(account.bought.material["methane"].lhv) == pytest.approx(1.389e6, rel=1e-3)


@pytest.mark.parametrize("name", COLD_STACKS)
def test_hydrogen_made_is_direct_current_by_energy_use(name):
    """52 kWh/kg is 187.2 MJ/kg."""
    solution = solved(name)
    results = solution.outcomes["stack"].results
    made = results["hydrogen_kg_s"]
    assert made == pytest.approx(rate(solution, "board.rest") / 187.2e6, rel=1e-13)
    assert results["direct_current_W"] == pytest.approx(rate(solution, "board.rest"), rel=1e-13)
    in_gas = float(flow(solution, "stack.hydrogen").flow("H2")) * 2.016e-3
    assert in_gas == pytest.approx(made, rel=1e-4)


@pytest.mark.parametrize("name", COLD_STACKS)
def test_sunlight_to_hydrogen_before_own_use(name):
    """20 % field, 52 kWh/kg, 33.33 kWh/kg of LHV: 0.2 x 33.33 / 52 = 0.128."""
    solution = solved(name)
    light_for_the_stack = rate(solution, "board.rest") / 0.20
    hydrogen = float(flow(solution, "stack.hydrogen").lhv)
    assert round(hydrogen / light_for_the_stack, 3) == 0.128


def test_compression_of_hydrogen_takes_its_usual_share():
    """10 to 350 bar at 75 % takes 0.05 to 0.09 of the LHV; common practice, no source."""
    solution = solved("hydrogen-store")
    share = rate(solution, "board.press") / float(flow(solution, "press.outlet").lhv)
    assert 0.05 < share < 0.09


def test_compression_of_hydrogen_by_hand():
    """5 stages of ratio 2.04, ideal gas with cp 28.9 J/mol/K: 14.1 kJ/mol; real gas some % more."""
    solution = solved("hydrogen-store")
    assert solution.outcomes["press"].results["stages"] == 5
    per_mol = rate(solution, "board.press") / float(flow(solution, "press.outlet").total)
    assert 14.1e3 < per_mol < 1.08 * 14.1e3


def test_water_back_from_the_engine_by_hand():
    """Saturated flue gas at 30 degC (42.47 mbar, IAPWS) and 1.1 bar keeps 3.86 % of water."""
    gas = flow(solved("hydrogen-store"), "rain.gas")
    assert 100 * float(gas.fraction("H2O")) == pytest.approx(100 * 0.04247 / 1.1, abs=0.01)


@pytest.mark.parametrize(
    ("name", "to_fuel", "overall"),
    [
        ("hydrogen-store", 0.122, 0.051),
        ("methane-store", 0.104, 0.104),
        ("methane-cycle", 0.099, 0.036),
        ("methane-cycle-direct", 0.104, 0.037),
        ("hydrogen-direct-coupled", 0.1085, 0.0514),
        ("methane-direct-coupled", 0.089, 0.0997),
        ("solar-heat-syngas", 0.132, 0.132),
        ("hydrogen-fuel-cell", 0.121, 0.069),
        ("hydrogen-700-bar", 0.123, 0.123),
        ("hydrogen-liquid", 0.104, 0.059),
        ("steam-methane", 0.148, 0.148),
        ("liquid-fuel", 0.087, 0.0365),
        ("gas-turbine", 0.0, 0.361),
        ("steam-cycle", 0.0, 0.256),
        ("photoelectrode-hydrogen", 0.085, 0.0875),
        ("photoelectrode-methane", 0.072, 0.075),
    ],
)
def test_headline_efficiencies_by_hand(name, to_fuel, overall):
    """The hand calculations stand in the files; they are good to 3 %."""
    assert efficiency(solved(name), "sunlight_to_fuel") == pytest.approx(to_fuel, rel=0.03)
    assert efficiency(solved(name)) == pytest.approx(overall, rel=0.03)


def test_the_battery_by_hand():
    """4 MW x 86 % x (1 - 0.1 % / 3) = 3.439 MW; 6 h of it out of 90 %; 182.5 Wh/kg, 475 Wh/L."""
    results = solved("battery").outcomes["battery"].results
    assert efficiency(solved("battery")) == pytest.approx(0.172, abs=0.0005)
    assert results["capacity_J"] == pytest.approx(22.9 * 3.6e9, rel=2e-3)
    assert results["mass_kg"] == pytest.approx(126e3, rel=5e-3)
    assert results["volume_m3"] == pytest.approx(48, rel=1e-2)


@pytest.mark.parametrize("name", MAKERS)
@pytest.mark.parametrize("hot", ["260 degC", "320 degC", "400 degC"])
def test_no_route_to_methane_keeps_more_than_its_limit(name, hot):
    """802.3 / (4 x 241.8) = 0.8295: four hydrogen make one methane."""
    kept = rungs(solved(name, hot=hot))["fuel made"]
    assert 0.70 < kept < 0.83


@pytest.mark.parametrize("name", CYCLES)
def test_a_fully_captured_cycle_returns_everything(name):
    returned = plant_account(solved(name, **CLOSED)).returned
    assert returned["CO2"] == pytest.approx(1.0, abs=1e-9)
    assert returned["water"] == pytest.approx(1.0, abs=1e-9)


@pytest.mark.parametrize("name", CYCLES)
def test_carbon_dioxide_returned_by_hand(name):
    """2 % is lost at the chimney and 0.1 % of five times the product with the purge."""
    assert plant_account(solved(name)).returned["CO2"] == pytest.approx(0.975, abs=0.0005)


@pytest.mark.parametrize("name", CYCLES)
def test_the_heat_engine_by_hand(name):
    """1473 to 423 K, heat spread evenly: mean 841 K, 60 % x (1 - 298 / 841) = 0.387."""
    results = solved(name).outcomes["wheel"].results
    assert results["efficiency"] == pytest.approx(0.387, rel=0.03)


# --- shift or no shift -----------------------------------------------------------------------


def test_the_shift_costs_heat_and_makes_no_more_methane():
    with_shift, without = solved("methane-cycle"), solved("methane-cycle-direct")
    assert rate(with_shift, "board.shift") > 0.1e6
    assert efficiency(with_shift, "sunlight_to_fuel") < efficiency(without, "sunlight_to_fuel")
    assert efficiency(with_shift) < efficiency(without)

    def per_hydrogen(solution):
        made = float(flow(solution, "split.onward").flow("CH4"))
        return made / float(flow(solution, "stack.hydrogen").flow("H2"))

    assert per_hydrogen(with_shift) == pytest.approx(0.25, rel=0.02)
    assert per_hydrogen(without) == pytest.approx(0.25, rel=0.02)


def test_the_shift_takes_its_power_from_the_stack():
    """What the stack loses is what the shift draws, up to what smaller machines then draw less."""
    with_shift, without = solved("methane-cycle"), solved("methane-cycle-direct")
    lost = rate(without, "board.rest") - rate(with_shift, "board.rest")
    assert lost == pytest.approx(rate(with_shift, "board.shift"), rel=0.03)


def test_without_heat_recovery_the_shift_costs_more():
    draws = [
        rate(solved("methane-cycle", regain=level), "board.shift")
        for level in ("150 degC", "400 degC", "650 degC")
    ]
    assert draws == sorted(draws, reverse=True)
    assert draws[0] > 2 * draws[2]


# --- what must not matter --------------------------------------------------------------------


@pytest.mark.parametrize("name", SHIPPED)
def test_the_basis_changes_no_stream_and_no_duty(name):
    other = solved_text(text_of(name).replace("basis: LHV", "basis: HHV"))
    assert other.flowsheet.basis == "HHV"
    assert numbers(other) == numbers(solved(name))
    for piece, outcome in solved(name).outcomes.items():
        assert other.outcomes[piece].duties == outcome.duties
        assert other.outcomes[piece].power == outcome.power


@pytest.mark.parametrize("name", PRESSED)
def test_a_compressor_on_the_grid_differs_by_exactly_its_power(name):
    own = solved(name)
    text = text_of(name).replace("- board.press -> press.power", "- grid -> press.power")
    bought = solved_text(text.replace("\nlines:", "\n  grid: {kind: grid}\nlines:", 1))
    power = rate(bought, "grid.power")
    assert plant_account(bought).bought.power_total == power

    def served(solution):
        return sum(rate(solution, s.key) for s in solution.streams if s.source == "board")

    assert served(own) == pytest.approx(served(bought), rel=1e-13)  # the field gives all it has

    def specific(solution, press):
        return press / float(flow(solution, "press.outlet").total)

    on_board = specific(own, rate(own, "board.press"))
    assert specific(bought, power) == pytest.approx(on_board, rel=1e-9)
    freed = rate(bought, "board.rest") - rate(own, "board.rest")
    others = served(own) - rate(own, "board.rest") - rate(own, "board.press")
    grown = rate(bought, "board.rest") / rate(own, "board.rest")
    assert freed + (grown - 1) * others == pytest.approx(rate(own, "board.press"), rel=1e-6)


@pytest.mark.parametrize("name", CYCLES)
def test_the_line_that_the_file_proposes_for_left_over_heat(name):
    """The file says: add `- warmth.rest -> wheel.heat` to see what it is worth."""
    assert "- warmth.rest -> wheel.heat`" in text_of(name)
    more = solved_text(text_of(name).replace("lines:\n", "lines:\n  - warmth.rest -> wheel.heat\n"))
    gained = rate(more, "wheel.power") - rate(solved(name), "wheel.power")
    assert 0.03e6 < gained < 0.2e6

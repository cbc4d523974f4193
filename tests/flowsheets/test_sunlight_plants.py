"""The shipped flowsheets that follow the sun further than a stated efficiency, by hand."""

import numpy as np
import pytest

from chainflow.accounts.plant import plant_account
from chainflow.basis.faults import NotSolved
from chainflow.equipment.ports import Light
from chainflow.flowsheet.building import read_text
from tests.flowsheets.shipped import COUPLED, flow, rate, solved, solved_text, text_of

DIRECT, SYNGAS = "hydrogen-direct-coupled", "solar-heat-syngas"


def results(solution, name):
    return solution.outcomes[name].results


# --- the stack straight on the field ---------------------------------------------------------


@pytest.mark.parametrize("name", COUPLED)
@pytest.mark.parametrize("sun", ["300 W/m2", "800 W/m2", "1100 W/m2"])
def test_stack_and_field_share_one_current_and_one_voltage(name, sun):
    solution = solved(name, sun=sun)
    field, stack = results(solution, "modules"), results(solution, "stack")
    assert stack["current_A"] / 330 == pytest.approx(field["field_current_A"], rel=1e-10)
    assert stack["voltage_V"] * 330 == pytest.approx(field["field_voltage_V"], rel=1e-10)
    assert stack["direct_current_W"] == pytest.approx(rate(solution, "modules.power"), rel=1e-10)


def test_modules_by_hand():
    """18 degC + 800 / (25 + 13.68) K; 328.2 W a module, -0.41 %/K; 13530 modules."""
    found = results(solved(DIRECT), "modules")
    assert found["cell_temperature_K"] == pytest.approx(273.15 + 18 + 800 / 38.68, abs=1e-9)
    assert found["modules"] == pytest.approx(18.4e6 / 800 / 1.7, rel=1e-12)
    by_hand = 13530 * 328.2 * 0.8 * (1 - 0.0041 * 13.7)
    assert found["maximum_power_W"] == pytest.approx(by_hand, rel=0.015)


def test_the_number_of_cells_that_is_proposed_is_the_best():
    """Round it, and fewer or more cells draw less; the stack's area stays."""
    best = int(results(solved(DIRECT), "modules")["best_cells"])

    def drawn(cells):
        text = text_of(DIRECT).replace("cells: 330", f"cells: {cells}")
        return rate(solved_text(text), "modules.power")

    assert drawn(best) > max(drawn(best - 1), drawn(best + 1), drawn(330))
    assert drawn(best) > 0.9995 * results(solved(DIRECT), "modules")["maximum_power_W"]


def test_curves_that_do_not_cross():
    with pytest.raises(NotSolved, match="these curves do not cross") as caught:
        solved_text(text_of(DIRECT).replace("cells: 330", "cells: 660"))
    assert caught.value.code == "no-answer"
    assert "20 modules in series give 771.6 V at most where 660 cells" in caught.value.text


def test_a_night_is_no_fault():
    solution = solved(DIRECT, sun="0 W/m2")
    assert rate(solution, "modules.power") == 0.0
    assert float(flow(solution, "stack.hydrogen").total) == 0.0


def test_a_year_of_hours_through_the_field_of_a_flowsheet():
    """The field of a file takes a batch; a case of it is what the file alone solves."""
    field = read_text(text_of(DIRECT)).equipment["modules"]
    sun = np.array([0.0, 0.001, 300.0, 800.0, 1100.0])
    light = Light(0.92 * 25000.0 * sun, sun, 0.9, 273.15 + 18, 2.0)
    power = field.run({"light": light}).outlets["power"]
    assert power[0] == power[1] == 0.0  # in twilight the modules do not reach the cells
    assert power[3] == pytest.approx(rate(solved(DIRECT), "modules.power"), rel=1e-14)


# --- heat of the sun for the shift -----------------------------------------------------------


def test_the_receiver_by_hand():
    """494 absorbed less 0.85 x 5.67e-8 x (1223.15^4 - 298.15^4) radiated, of 520 kW/m2."""
    found = results(solved(SYNGAS), "mirrors")
    by_hand = (494e3 - 0.85 * 5.670374e-8 * (1223.15**4 - 298.15**4)) / 520e3
    assert found["receiver_efficiency"] == pytest.approx(by_hand, rel=1e-6)
    assert found["efficiency"] == pytest.approx(0.65 * by_hand, rel=1e-6)


def test_mirrors_give_what_the_shift_takes_and_what_is_held_to_spare():
    solution = solved(SYNGAS)
    wanted = solution.outcomes["shift"].heat + 20e3
    assert rate(solution, "mirrors.heat") == pytest.approx(wanted, rel=1e-9)
    # 33.5 kJ/mol (0.76 of 3.53 mol/s) and 14.2 mol/s x 36.5 J/mol/K x 80 K
    assert solution.outcomes["shift"].heat == pytest.approx(90e3 + 41e3, rel=0.02)


def test_two_hydrogen_on_one_carbon_monoxide_or_more():
    """K = 1.09 (JANAF, from memory) gives x = 0.76: 2.24 / 0.76 = 2.9; CO2 is left over."""
    gas = flow(solved(SYNGAS), "knock.gas")
    assert float(gas.flow("H2") / gas.flow("CO")) == pytest.approx(2.24 / 0.76, rel=0.02)


def test_the_light_of_all_apertures_counts():
    solution = solved(SYNGAS)
    account = plant_account(solution)
    beam = rate(solution, "beam.light")
    assert account.sunlight == pytest.approx(20e6 + beam, rel=1e-12)
    assert 0.2e6 < beam < 0.4e6


def test_a_receiver_too_cold_for_the_shift_is_no_help():
    with pytest.raises(NotSolved) as caught:
        solved(SYNGAS, hot="800 degC")
    assert caught.value.code in ("heat-short", "hold-unable", "hold-out-of-reach")


def test_mirrors_need_less_light_than_modules_for_the_same_heat():
    text = text_of(SYNGAS)
    for line in ("beam.light -> mirrors.light", "mirrors.heat -> heat.supply"):
        text = text.replace(f"  - {line}\n", "")
    text = text.replace("  - heat.shift -> shift.heat\n", "  - board.shift -> shift.power\n")
    text = text.replace("  - heat.rest -> sky\n", "").split("\nholds:")[0] + "\n"
    electric = solved_text(text)
    from_modules = rate(electric, "board.shift") / 0.20
    from_mirrors = (
        solved(SYNGAS).outcomes["shift"].heat / results(solved(SYNGAS), "mirrors")["efficiency"]
    )
    assert from_mirrors < 0.5 * from_modules

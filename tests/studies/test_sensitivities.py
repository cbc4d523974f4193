"""Sensitivities against solving again, over the shipped flowsheets and all their settings."""

import contextlib
import re
from pathlib import Path

import numpy as np
import pytest

import chainflow
from chainflow.basis.faults import NotSolved, UsageFault
from chainflow.flowsheet.building import read_flowsheet
from chainflow.flowsheet.movable import is_allowed, lever, levers, moved
from chainflow.solver.solve import solve_flowsheet
from chainflow.studies.sensitivities import Evaluation, sensitivities

SHIPPED = Path(__file__).parents[2] / "flowsheets"
OVERALL = "plant.efficiency.overall.LHV"
RESULTS = (OVERALL, "plant.efficiency.overall.exergy", "plant.efficiency.sunlight_to_fuel.HHV")
STEP = 1e-4  # relative, of the solves that are compared with
AGREE = 1e-5  # relative
# elasticity below which a slope is nothing: the differences of two solves, and those on one piece,
# each end at round-off (1e-13 of the result) over their step
NOTHING = 2e-8
# Where 1e-5 is not reached, the largest difference in elasticity seen, rounded up (a pin):
# round-off of 36 components (liquid-fuel, 3e-8).
NOT_REACHED = {"liquid-fuel": 5e-8}
FINER = 3.0  # by how much the second step of an extrapolation is smaller
OF_ANOTHER_MODEL = re.compile(r"\.module\.|\.cell_temperature\.|\.converter$")  # of pv-field
KINK = 1e-2  # relative difference of the slopes on both sides that is no curvature
USUAL = {"Pa": 1e5, "J/mol": 1e4, "J/kg": 1e6, "W": 1e3}  # sizes of settings that stand at zero


def solved_again(flowsheet, one, results, start, finer=1.0):
    """Slopes by solving at both sides, or at one side of the second order; None if none solves.

    Not a number where there are two slopes: what returns to a store just as cold as it is has to be
    warmed if the store gets warmer, and costs nothing if it gets colder.
    """
    step = STEP * (abs(one.value) or USUAL.get(one.unit, 1.0))
    if one.unit == "1" and 0.5 < one.value < 1.0:  # what a recovery leaves goes by its logarithm
        step = min(step, 1e-3 * (1.0 - one.value))
    step /= finer
    at = {}

    def solves(k):
        if is_allowed(flowsheet, one, k * step):
            with contextlib.suppress(NotSolved):
                at[k] = results(solve_flowsheet(moved(flowsheet, one, k * step)))
        return k in at

    if solves(1) and solves(-1):
        before, behind = start - at[-1], at[1] - start
        bent = np.abs(behind - before) > KINK * np.maximum(np.abs(before), np.abs(behind))
        if (bent & (np.abs(behind - before) > 1e-12 * np.abs(start))).any():
            return np.full(len(start), np.nan)
        return (at[1] - at[-1]) / (2 * step)
    sign = 1 if 1 in at else -1
    if not (solves(sign) and solves(2 * sign)):
        return None
    return sign * (4 * at[sign] - at[2 * sign] - 3 * start) / (2 * step)


def extrapolated(flowsheet, one, results, start, again):
    """Slopes by solving again without their error of the square of the step."""
    near = solved_again(flowsheet, one, results, start, FINER)
    return None if near is None else near + (near - again) / (FINER**2 - 1)


def disagreements(path, every=1):
    """Settings whose slopes are not those of solving again, with both; looked at one of `every`."""
    flowsheet = read_flowsheet(path)
    solution = solve_flowsheet(flowsheet)
    found, results = sensitivities(solution, RESULTS), Evaluation(RESULTS)
    assert len(found.by) + len(found.left_out) == len(levers(flowsheet))
    left_out = [name for name in found.left_out if not OF_ANOTHER_MODEL.search(name)]
    assert len(found.by) > 2 * len(left_out)
    for place, one in list(enumerate(found.by))[::every]:
        again = solved_again(flowsheet, one, results, found.values)
        mine = found.slopes[:, place]
        usual = found.values / (abs(one.value) or USUAL.get(one.unit, 1.0))
        floor = NOT_REACHED.get(path.stem, NOTHING)

        def differs(again, mine=mine, usual=usual, floor=floor):
            near = AGREE * np.abs(again) + floor * np.abs(usual)
            return (np.abs(mine - again) > near).any()

        if again is not None and differs(again):
            again = extrapolated(flowsheet, one, results, found.values, again)
        if again is None or differs(again):
            yield one.name, mine, again


def test_slopes_are_those_of_solving_again():
    assert list(disagreements(SHIPPED / "hydrogen-store.yaml")) == []


@pytest.mark.slow
@pytest.mark.parametrize("path", sorted(SHIPPED.glob("*.yaml")), ids=lambda p: p.stem)
def test_slopes_of_every_shipped_flowsheet(path):
    every = 8 if path.stem == "liquid-fuel" else 1  # it takes seconds to solve
    assert list(disagreements(path, every)) == []


@pytest.fixture(scope="module")
def store():
    return chainflow.solve(SHIPPED / "hydrogen-store.yaml")


def test_by_hand(store):
    """All power is proportional to the field, all power out to the engine's share of the LHV."""
    found = chainflow.sensitivities(store, OVERALL, ["engine", "field", "energy_use", "sun"])
    assert found[OVERALL, "engine"] == pytest.approx(store[OVERALL] / 0.42, rel=1e-6)
    elastic = dict(zip((one.name for one in found.by), found.elasticities[0], strict=True))
    assert elastic["field"] == pytest.approx(1.0, rel=1e-6)
    assert elastic["sun"] == pytest.approx(0.0, abs=1e-8)
    # of the stack's 52 kWh/kg and the own use of some 2.5 kWh/kg only the first grows
    assert -1.0 < elastic["energy_use"] < -0.94


def test_a_port_and_a_duty(store):
    of = ("engine.power.rate", "press.duty.power", "fuel.rest.flow.H2")
    found = chainflow.sensitivities(store, of, ["press.efficiency"])
    # W = w/eta of the isentropic work: one per cent better takes one per cent less per mol
    power, own, hydrogen = found.elasticities[:, 0]
    assert own == pytest.approx(-1.0 + hydrogen, rel=1e-4)
    assert power == pytest.approx(hydrogen, rel=1e-6)


def test_holds_stay_held_and_their_settings_are_results():
    answer = chainflow.solve(SHIPPED / "methane-cycle.yaml")
    of = ("burner.flue.temperature", "flues.shares.moderator")
    found = chainflow.sensitivities(answer, of, ["flame", "sun"])
    assert found[of[0], "flame"] == pytest.approx(1.0, rel=1e-7)
    assert found[of[0], "sun"] == pytest.approx(0.0, abs=1e-7)
    assert found[of[1], "flame"] < 0.0  # a hotter flame takes less moderator
    with pytest.raises(UsageFault, match="there is no sensitivity"):
        found[OVERALL, "flame"]


def test_a_knob_moves_all_that_it_sets(store):
    """Compressor and store share one pressure; neither can move alone."""
    found = chainflow.sensitivities(store, OVERALL, ["keep", "fuel.pressure"])
    assert [one.name for one in found.by] == ["keep"]
    assert "put a compressor or pump between" in found.left_out["fuel.pressure"]
    with pytest.raises(UsageFault, match="cannot be moved"):
        found[OVERALL, "fuel.pressure"]


def test_an_end_of_a_range_moves_inwards(store):
    found = chainflow.sensitivities(store, OVERALL, ["stack.rectifier", "stack.auxiliaries"])
    assert found[OVERALL, "stack.rectifier"] > 0.0 > found[OVERALL, "stack.auxiliaries"]


def test_table(store):
    table = chainflow.sensitivities(store, OVERALL, ["field", "keep"]).table()
    assert list(table.index) == ["field", "keep"]
    assert table.loc["keep", "unit"] == "Pa"
    assert table.loc["field", f"elasticity of {OVERALL}"] == pytest.approx(1.0, rel=1e-6)


@pytest.mark.parametrize(
    ("of", "by", "said"),
    [
        ("plant.efficiency.overal.LHV", None, "overall"),
        ("stack.hydrogn.flow", None, "hydrogen"),
        (OVERALL, ["fild"], "field"),
        (OVERALL, ["press.efficency"], "efficiency"),
        (OVERALL, ["stack.model"], "no number"),
    ],
)
def test_names_that_are_none(store, of, by, said):
    with pytest.raises(UsageFault, match=said):
        chainflow.sensitivities(store, of, by)


def test_levers_cover_the_file():
    flowsheet = read_flowsheet(SHIPPED / "methane-cycle.yaml")
    names = [one.name for one in levers(flowsheet)]
    assert len(names) == len(set(names))
    assert {"sun", "hot", "capture"} <= set(names)
    assert "reactor.temperature" not in names  # a knob sets it
    assert lever(flowsheet, "press.efficiency").value == 0.75

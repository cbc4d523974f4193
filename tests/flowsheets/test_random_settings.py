"""Random settings of the shipped flowsheets: solved with closed balances, or refused by name.

Each is looked at from random surroundings, in which the exergy that enters has to be found again.

Settings are drawn from the ranges that stand in the files, ends included, in steps of a
ten-thousandth of each range: nobody types a purge of 1e-200 %.  What is said to such a purge is
tested apart.
"""

import json
from collections import Counter
from functools import partial

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from chainflow.accounts.losses import loss_map
from chainflow.basis.faults import ChainflowError, FlowsheetFault, NotSolved, UsageFault
from chainflow.flowsheet.building import read_text
from chainflow.report.document import document, to_json
from chainflow.solver.solve import solve_flowsheet
from tests.flowsheets.ranges import RANGES
from tests.flowsheets.shipped import HUGE, SHIPPED, text_of

SHORT, LONG = 6, 300
SHORT_HUGE, LONG_HUGE = 6, 100
STEPS = 10_000
REFUSALS = {
    "heat-short",
    "hold-out-of-reach",
    "hold-unable",
    "no-way-out",
    "nothing-pins",
    "overfull",
    "short-of-power",
}


def knobs_of(name):
    """Draw a value for every knob, as it would be typed."""
    return st.fixed_dictionaries(
        {
            knob: st.integers(0, STEPS).map(partial(as_typed, *bounds))
            for knob, bounds in RANGES[name].items()
        }
    )


def as_typed(low, high, unit, step):
    return f"{low + (high - low) * step / STEPS:.6g} {unit}"


SURROUNDINGS = st.fixed_dictionaries(
    {
        "temperature": st.integers(-100, 450).map(lambda tenth: f"{tenth / 10} degC"),
        "pressure": st.integers(600, 1050).map(lambda mbar: f"{mbar} mbar"),
        "carbon_dioxide": st.integers(280, 800).map(lambda ppm: f"{ppm} ppm"),
        "humidity": st.integers(5, 100).map(lambda share: f"{share} %"),
    }
)


def attempt(name, knobs, there):
    """Solve once, check what must hold, and return 'solved' or the code of the refusal."""
    block = ", ".join(f"{key}: {value}" for key, value in there.items())
    text = f"{text_of(name)}\nenvironment: {{{block}}}\n"
    try:
        solution = solve_flowsheet(read_text(text, knobs))
    except NotSolved as problem:
        assert problem.code in REFUSALS, f"{problem.code}: {problem.text}"
        assert problem.text
        return problem.code
    except FlowsheetFault as problem:
        assert all(fault.text for fault in problem.faults)
        return problem.faults[0].code
    except ChainflowError as problem:  # refused in a way that a range must not lead to
        raise AssertionError(f"{type(problem).__name__}: {problem}") from problem
    assert solution.balance.elements < 1e-9
    assert solution.balance.energy < 1e-9
    found = json.loads(to_json(document(solution)))  # NaN does not get into it
    for stream in found["streams"].values():
        assert None not in stream.get("flow_mol_s", {}).values()
    assert found["plant"]["efficiency"]["overall"]["LHV"] > 0
    assert loss_map(solution).closure < 1e-9  # all the exergy that enters is found again
    return "solved"


def run(name, examples):
    seen = Counter()

    @settings(
        max_examples=examples,
        derandomize=True,
        deadline=None,
        database=None,
        suppress_health_check=list(HealthCheck),
    )
    @given(knobs_of(name), SURROUNDINGS)
    def solve_one(knobs, there):
        seen[attempt(name, knobs, there)] += 1

    solve_one()
    assert seen.total() >= examples
    assert seen["solved"] >= 0.6 * seen.total(), seen
    return seen


@pytest.mark.parametrize("name", SHIPPED)
def test_a_few_random_settings(name):
    run(name, SHORT_HUGE if name in HUGE else SHORT)


@pytest.mark.parametrize("share", ["1e-3 %", "1e-9 %", "1e-30 %", "1e-90 %"])
@pytest.mark.parametrize(
    ("name", "knob"), [("methane-store", "purge"), ("methane-cycle-direct", "capture")]
)
def test_shares_of_next_to_nothing(name, knob, share):
    """Solved, or refused in a sentence: nitrogen that goes round has to be moved and heated."""
    try:
        solution = solve_flowsheet(read_text(text_of(name), {knob: share}))
    except NotSolved as problem:
        assert knob == "purge"
        assert problem.code in {"heat-short", "short-of-power", "not-converged"}
    else:
        assert max(solution.balance.elements, solution.balance.energy) < 1e-9


def test_a_share_too_small_to_mean_anything():
    with pytest.raises(UsageFault, match="too close to zero to mean anything: write 0"):
        read_text(text_of("methane-store"), {"purge": "1e-310 %"})


@pytest.mark.slow
@pytest.mark.parametrize("name", SHIPPED)
def test_many_random_settings(name):
    run(name, LONG_HUGE if name in HUGE else LONG)

"""Random settings of the shipped flowsheets: solved with closed balances, or refused by name.

Settings are drawn from the ranges that stand in the files, ends included.
"""

import json
from collections import Counter

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from chainflow.basis.faults import ChainflowError, FlowsheetFault, NotSolved
from chainflow.flowsheet.building import read_text
from chainflow.report.document import document, to_json
from chainflow.solver.solve import solve_flowsheet
from tests.flowsheets.ranges import RANGES
from tests.flowsheets.shipped import NAMES, text_of

SHORT, LONG = 10, 300
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
            knob: st.floats(low, high).map(lambda x, unit=unit: f"{x:.6g} {unit}")
            for knob, (low, high, unit) in RANGES[name].items()
        }
    )


def attempt(name, knobs):
    """Solve once, check what must hold, and return 'solved' or the code of the refusal."""
    try:
        solution = solve_flowsheet(read_text(text_of(name), knobs))
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
    assert None not in found["streams"]["stack.hydrogen"]["flow_mol_s"].values()
    assert found["plant"]["efficiency"]["overall"]["LHV"] > 0
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
    @given(knobs_of(name))
    def solve_one(knobs):
        seen[attempt(name, knobs)] += 1

    solve_one()
    assert seen.total() >= examples
    assert seen["solved"] >= 0.6 * seen.total(), seen
    return seen


@pytest.mark.parametrize("name", NAMES)
def test_a_few_random_settings(name):
    run(name, SHORT)


@pytest.mark.slow
@pytest.mark.parametrize("name", NAMES)
def test_many_random_settings(name):
    run(name, LONG)

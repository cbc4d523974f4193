"""Problem tables of the literature: utilities, pinch and cascade.

Stream data and answers as they are taught; the utilities were recomputed by hand for this test.
Temperatures in degC, heat capacity flows in kW/K (MW/K for the third), utilities in kW (MW).
"""

import pytest

from chainflow.equipment.cascade import cascade
from chainflow.equipment.heat_matching import match
from chainflow.equipment.ports import Heat

EXACT = 1e-6
ZERO = 273.15

# name, approach, streams (from, to, heat capacity flow), hot, cold, pinch (given, needed)
PROBLEMS = [
    # Linnhoff & Flower, AIChE J. 24 (1978) 633, as used in teaching (stream data read)
    (
        "four streams, 1978",
        10.0,
        [(180, 40, 2.0), (150, 40, 4.0), (60, 180, 3.0), (30, 130, 2.6)],
        60.0,
        160.0,
        (150.0, 140.0),
    ),
    # Linnhoff et al., User Guide on Process Integration (IChemE 1982); Kemp, Pinch Analysis and
    # Process Integration, 2nd ed. 2007, ch. 2 (from memory)
    (
        "user guide",
        10.0,
        [(20, 135, 2.0), (170, 60, 3.0), (80, 140, 4.0), (150, 30, 1.5)],
        20.0,
        60.0,
        (90.0, 80.0),
    ),
    # Smith, Chemical Process Design and Integration, 2005, ch. 16 (from memory)
    (
        "two reactors",
        10.0,
        [(20, 180, 0.20), (250, 40, 0.15), (140, 230, 0.30), (200, 80, 0.25)],
        7.5,
        10.0,
        (150.0, 140.0),
    ),
    # Linnhoff & Hindmarsh, Chem. Eng. Sci. 38 (1983) 745 (from memory)
    (
        "design method",
        20.0,
        [(150, 60, 2.0), (90, 60, 8.0), (20, 125, 2.5), (25, 100, 3.0)],
        107.5,
        40.0,
        (90.0, 70.0),
    ),
]


def flows(streams):
    """Heat given off and heat needed."""
    given, needed = [], []
    for start, end, capacity in streams:
        heat = Heat.between(capacity * abs(end - start), start + ZERO, end + ZERO)
        (given if start > end else needed).append(heat)
    return given, needed


@pytest.mark.parametrize(
    ("approach", "streams", "hot", "cold", "pinch"),
    [problem[1:] for problem in PROBLEMS],
    ids=[problem[0] for problem in PROBLEMS],
)
def test_problem_tables(approach, streams, hot, cold, pinch):
    given, needed = flows(streams)
    found = cascade(given, needed, approach)
    assert found.hot_utility == pytest.approx(hot, abs=EXACT)
    assert found.cold_utility == pytest.approx(cold, abs=EXACT)
    assert found.pinch_given - ZERO == pytest.approx(pinch[0], abs=EXACT)
    assert found.pinch_needed - ZERO == pytest.approx(pinch[1], abs=EXACT)
    matched = match(given, needed, approach)
    assert matched.missing[0] == pytest.approx(hot, abs=EXACT)
    assert sum(piece.rate[0] for piece in matched.rest) == pytest.approx(cold, abs=EXACT)


CASCADES = [
    # Linnhoff & Flower 1978, with 60 kW of hot utility
    (
        PROBLEMS[0],
        [185, 175, 145, 135, 65, 35],
        [60, 30, 0, 30, 58, 160],
    ),
    # User Guide 1982, with 20 kW of hot utility
    (PROBLEMS[1], [165, 145, 140, 85, 55, 25], [20, 80, 82.5, 0, 75, 60]),
]


@pytest.mark.parametrize(("problem", "levels", "heat"), CASCADES, ids=["1978", "user guide"])
def test_cascades(problem, levels, heat):
    found = cascade(*flows(problem[2]), problem[1])
    assert found.levels - ZERO == pytest.approx(levels, abs=EXACT)
    assert found.flow == pytest.approx(heat, abs=EXACT)
    assert [h for h, _ in found.grand_composite] == pytest.approx(heat, abs=EXACT)

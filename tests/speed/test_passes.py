"""How much one pass of a shipped flowsheet costs; run with ``pytest -m speed -s``.

A ratio taken in one run, CPU times: one pass, evaluated with all its Cantera calls, over the same
calls alone.  What chainflow keeps of earlier states is dropped before each.
"""

import statistics
from pathlib import Path

import pytest

from chainflow.flowsheet.building import read_flowsheet
from chainflow.solver.newton import Newton
from chainflow.solver.solve import Prepared
from tests.speed.recording import forget, recorded, replay, seconds

pytestmark = pytest.mark.speed
FLOWSHEETS = Path(__file__).parents[2] / "flowsheets"
RUNS = 21


@pytest.mark.parametrize(
    ("name", "most"), [("methane-cycle", 15.0), ("liquid-fuel", 9.5), ("steam-methane", 22.5)]
)
def test_a_pass_over_its_raw_cantera_calls(name: str, most: float) -> None:
    """One evaluation of the whole loop, at the answer, without derivatives.

    Measured with other work on the machine: 11 to 12, 6.1 to 7.9, 14 to 18, on a quiet one 10.6,
    5.9 and 15.5; the limits are some 1.3 times the former.  The ratio grows when Cantera calls are
    saved, and falls when Python is.
    """
    flowsheet = read_flowsheet(FLOWSHEETS / f"{name}.yaml")
    prepared = Prepared(flowsheet)
    newton = Newton(prepared.program, prepared.order)
    values = newton.solve().values
    torn = {key: values[key] for key in prepared.order.tears}
    forget()
    with recorded(flowsheet.matter) as log:
        newton.evaluate(torn)
    ratios = []
    for _ in range(RUNS):
        forget()
        ratios.append(seconds(lambda: newton.evaluate(torn)) / replay(log))
    ratio = statistics.median(ratios)
    print(f"\n    a pass of {name} over its Cantera calls: {ratio:.2f} ({len(log)})", flush=True)
    assert ratio < most

"""How much a pass of the largest shipped flowsheet costs; run with ``pytest -m speed -s``.

A ratio taken in one run, CPU times: a pass of `liquid-fuel.yaml` over the same Cantera calls alone.
What chainflow keeps of earlier solves is dropped before each.
"""

import statistics
from pathlib import Path

import pytest

from chainflow.flowsheet.building import read_flowsheet
from chainflow.solver.newton import Newton
from chainflow.solver.solve import Prepared
from chainflow.thermo import reactants, streams
from tests.speed.recording import recorded, replay, seconds

pytestmark = pytest.mark.speed
FILE = Path(__file__).parents[2] / "flowsheets" / "liquid-fuel.yaml"
RUNS = 21


def forget() -> None:
    """Drop the states and equilibria that are kept from one call to the next."""
    for module in (reactants, streams):
        for found in vars(module).values():
            if hasattr(found, "cache_info") and found.cache_info().maxsize is not None:
                found.cache_clear()


def test_a_pass_of_liquid_fuel_over_its_raw_cantera_calls() -> None:
    """Not above 6: one evaluation of the whole loop, at the answer, without derivatives."""
    flowsheet = read_flowsheet(FILE)
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
    print(
        f"\n    a pass of liquid-fuel over its Cantera calls: {ratio:.2f} ({len(log)})", flush=True
    )
    assert ratio < 6.0

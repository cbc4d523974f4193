"""How fast, as ratios taken in one run; run with ``pytest -m speed -s``.

Times are CPU times of this process (wall times for whole commands); each ratio is the median of
several, so that a busy machine moves both of its sides.
"""

from __future__ import annotations

import os
import statistics
import subprocess
import sys
import time
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from chainflow.flowsheet.building import read_flowsheet, read_text
from chainflow.solver.newton import Newton
from chainflow.solver.solve import Prepared
from chainflow.thermo.species import gas_phase
from tests.solver.small_plants import chain_of_loops, methane_loop
from tests.speed.recording import forget, recorded, replay, seconds

pytestmark = pytest.mark.speed
FLOWSHEETS = Path(__file__).parents[2] / "flowsheets"
RUNS = 7


def say(text: str) -> None:
    """Print past pytest's capture only with -s; the number is the result of these tests."""
    print(f"\n    {text}", flush=True)


def raw_equilibria(count: int = 1000) -> float:
    """CPU seconds of raw equilibria of five gases: a yardstick that no change of ours moves."""
    phase = gas_phase(("H2", "CO", "CO2", "CH4", "H2O"))
    start = time.process_time()
    for _ in range(count):
        phase.TPX = 900.0, 3e6, "H2:4, CO2:1"
        phase.equilibrate("TP", rtol=1e-12)
    return time.process_time() - start


@pytest.mark.parametrize(
    ("name", "most"), [("methane-cycle", 8.6), ("liquid-fuel", 13.0), ("steam-methane", 10.4)]
)
def test_solver_time_over_raw_equilibria(name: str, most: float, benchmark: Any) -> None:
    """Closing the loops, nothing kept from before, against a fixed yardstick.

    The ratio to the same Cantera calls alone grows when calls are saved, so it is shown and not
    judged here; `test_passes.py` judges it for one pass.  Measured with other work on the machine:
    5.7 to 6.6, 7.5 to 10.2 and 6.9 to 8.0; the limits are 1.3 times the larger.
    """
    flowsheet = read_flowsheet(FLOWSHEETS / f"{name}.yaml")
    Prepared(flowsheet).close()  # imports and fixed tables
    forget()
    prepared = Prepared(flowsheet)
    with recorded(flowsheet.matter) as log:
        prepared.close()
    ratios, fixed = [], []
    for _ in range(RUNS):
        forget()
        prepared = Prepared(flowsheet)
        took = seconds(prepared.close)
        ratios.append(took / replay(log))
        fixed.append(took / raw_equilibria())
    ratio, judged = statistics.median(ratios), statistics.median(fixed)
    say(f"{name}: closing over its raw Cantera calls {ratio:.2f} ({len(log)} calls)")
    say(f"{name}: closing over 1000 raw equilibria {judged:.2f}")
    benchmark.extra_info["ratio"] = ratio
    benchmark.pedantic(lambda: Prepared(flowsheet).close(), rounds=3)
    assert judged < most


def substitution_passes(newton: Newton, most: int = 5000) -> int:
    """Passes of plain substitution until the torn variables change by less than 1e-10."""
    newton.constants = newton.run(newton.order.before, {})
    torn = newton.warm(newton.start())
    for _ in range(most):
        state = newton.evaluate(torn)
        scales = newton.scales(state)
        if float(np.abs(state.residual / np.maximum(scales, 1e-300)).max()) < 1e-10:
            return newton.passes
        torn = {key: state.back[key] for key in torn}
    return most


@pytest.mark.parametrize("purge", ["5 %", "1 %"])
def test_passes_against_successive_substitution(purge: str) -> None:
    flowsheet = read_text(methane_loop(purge=purge))
    prepared = Prepared(flowsheet)
    newton = prepared.close().passes
    plain = substitution_passes(Newton(prepared.program, prepared.order))
    say(f"passes at a purge of {purge}: Newton {newton}, substitution {plain}")
    assert newton * 5 < plain


def test_cost_per_piece_of_equipment_is_flat_from_10_to_1000() -> None:
    costs = {}
    for loops in (3, 25, 250):
        flowsheet = read_text(chain_of_loops(loops, joined=True))
        prepared = Prepared(flowsheet)
        pieces = len(flowsheet.equipment)
        costs[pieces] = min(seconds(prepared.close) for _ in range(3)) / pieces
    few = next(iter(costs.values()))
    found = ", ".join(f"{pieces} pieces {cost / few:.2f}" for pieces, cost in costs.items())
    say(f"cost per piece, relative to the smallest plant: {found}")
    assert max(costs.values()) < 3.0 * few


def wall(command: list[str]) -> float:
    start = time.perf_counter()
    environment = {**os.environ, "PYTHONDONTWRITEBYTECODE": ""}
    subprocess.run(command, check=True, stdout=subprocess.DEVNULL, env=environment)
    return time.perf_counter() - start


def test_wall_time_of_solve_over_bare_imports() -> None:
    """Aim 1.5, measured 2.2 to 2.3: the whole command against importing what it stands on."""
    solve = [sys.executable, "-m", "chainflow", "solve", str(FLOWSHEETS / "methane-cycle.yaml")]
    bare = [sys.executable, "-c", "import cantera, networkx, numpy, scipy.sparse"]
    wall(solve)
    ratios = [wall(solve) / wall(bare) for _ in range(RUNS)]
    say(f"chainflow solve over bare imports: {statistics.median(ratios):.2f}")
    assert statistics.median(ratios) < 2.9


def test_a_year_of_a_field_on_a_stack_at_once() -> None:
    """8760 hours of one diode in direct coupling against the same hours one by one."""
    import pvlib

    from chainflow.equipment.sunlight import Sunlight

    weather = Path(pvlib.__file__).parent / "data" / "723170TYA.CSV"
    field = read_flowsheet(FLOWSHEETS / "hydrogen-direct-coupled.yaml").equipment["modules"]
    sun = Sunlight.model_validate(
        {"weather": str(weather), "aperture": "23000 m2", "plane": {"tilt": "36 deg"}}
    )
    year = sun.year()
    field.run({"light": year})  # warm caches
    some = range(0, 8760, 60)

    def one_by_one() -> None:
        for hour in some:
            field.run({"light": year.case(hour)})

    at_once = statistics.median(seconds(lambda: field.run({"light": year})) for _ in range(RUNS))
    hours = 8760 / len(some) * seconds(one_by_one)
    say(f"8760 hours one by one over all at once: {hours / at_once:.0f} ({at_once:.2f} s at once)")
    assert hours > 30 * at_once
    assert at_once < 1.0

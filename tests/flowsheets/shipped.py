"""The shipped flowsheets for tests: their texts, their solutions, and ways to rewrite them."""

import io
import random
from collections.abc import Callable, Mapping
from functools import cache
from pathlib import Path
from types import MappingProxyType
from typing import Any

from ruamel.yaml import YAML

from chainflow.equipment.ports import rate_of
from chainflow.flowsheet.building import read_text
from chainflow.solver.solution import Solution
from chainflow.solver.solve import solve_flowsheet
from chainflow.thermo.streams import Stream
from tests.flowsheets.ranges import RANGES

FOLDER = Path(__file__).parents[2] / "flowsheets"
SHIPPED = tuple(RANGES)
NAMES = tuple(name for name in SHIPPED if name != "battery")  # those that make hydrogen
CYCLES = ("methane-cycle", "methane-cycle-direct")
FIRED = ("gas-turbine", "steam-cycle")  # they burn bought methane; all others live on light
LIT = ("photoelectrode-hydrogen", "photoelectrode-methane")  # light makes hydrogen by itself
COUPLED = ("hydrogen-direct-coupled", "methane-direct-coupled")  # fields straight on their stacks
APART = (*COUPLED, "solar-heat-syngas")  # power that is not all for one stack
SUNNY = tuple(name for name in NAMES if name not in (*FIRED, *APART))
COLD_STACKS = tuple(name for name in SUNNY if name not in ("steam-methane", *LIT))  # 52 kWh/kg
HUGE = ("liquid-fuel",)  # so many components that what repeats a solve is for the slow tests
CLOSED = {"capture": "100 %", "purge": "0 %"}


@cache
def text_of(name: str) -> str:
    """Return a shipped flowsheet as it stands in its file."""
    return (FOLDER / f"{name}.yaml").read_text(encoding="utf-8")


@cache
def _solved(text: str, knobs: tuple[tuple[str, str], ...]) -> Solution:
    return solve_flowsheet(read_text(text, dict(knobs)))


def solved_text(text: str, **knobs: str) -> Solution:
    """Return the solution of a flowsheet text; each is solved once."""
    return _solved(text, tuple(sorted(knobs.items())))


def solved(name: str, **knobs: str) -> Solution:
    """Return the solution of a shipped flowsheet; each is solved once."""
    return solved_text(text_of(name), **knobs)


def flow(solution: Solution, key: str) -> Stream:
    """Return the matter that leaves a port."""
    found = solution.stream(key).flow
    assert isinstance(found, Stream)
    return found


def rate(solution: Solution, key: str) -> float:
    """Return the power or light [W] that leaves a port."""
    return rate_of(solution.stream(key).flow)


def numbers(solution: Solution) -> dict[str, list[float]]:
    """Return every stream as numbers: flows, temperature and pressure, or its rate."""
    found = {}
    for stream in solution.streams:
        if isinstance(stream.flow, Stream):
            level, pressure = float(stream.flow.temperature), float(stream.flow.pressure)
            found[stream.key] = [*stream.flow.flows.tolist(), level, pressure]
        else:
            found[stream.key] = [float(getattr(stream.flow, "rate", stream.flow))]
    return found


def heat_behind(solution: Solution) -> dict[str, float]:
    """Return the heat fed to a network [W], by the keys of its shortage and of its rest.

    Both are differences of large heats, so their round-off goes by those.
    """
    lines, pieces = solution.flowsheet.lines, solution.flowsheet.equipment
    fed: dict[str, float] = {}
    for line in lines:
        if line.inlet == "supply" and pieces[line.target].kind == "heat-network":
            fed[line.target] = fed.get(line.target, 0.0) + rate(solution, line.start)
    short = {line.start: fed[line.target] for line in lines if line.inlet == "shortage"}
    return short | {f"{network}.rest": heat for network, heat in fed.items()}


def largest_difference(
    first: dict[str, list[float]],
    second: dict[str, list[float]],
    behind: Mapping[str, float] = MappingProxyType({}),
) -> float:
    """Return the largest relative difference of two sets of numbers.

    Flows count by their stream's total, rates by themselves but at least by a thousandth of the
    plant's largest: a pump's power is a small difference of large enthalpies. `behind` names rates
    that are small differences of larger ones still.
    """
    assert first.keys() == second.keys()
    least = 1e-3 * max(abs(one[0]) for one in first.values() if len(one) == 1)
    worst = 0.0
    for key, one in first.items():
        if len(one) == 1:
            sizes = [max(abs(one[0]), least, behind.get(key, 0.0))]
        else:
            sizes = [sum(one[:-2]) or 1.0] * (len(one) - 2) + one[-2:]
        pairs = zip(one, second[key], sizes, strict=True)
        worst = max(worst, *(abs(a - b) / size for a, b, size in pairs))
    return worst


# --- other ways to write the same file -------------------------------------------------------


def as_data(text: str) -> dict[str, Any]:
    """Return a flowsheet text as plain data."""
    return YAML(typ="safe").load(text)


def as_text(data: dict[str, Any]) -> str:
    """Return plain data as a flowsheet text."""
    out = io.StringIO()
    yaml = YAML(typ="safe")
    yaml.width = 10000
    yaml.sort_base_mapping_type_on_output = False  # keep the order we give
    yaml.dump(data, out)
    return out.getvalue()


def shuffled(text: str, key: int) -> str:
    """Return the same flowsheet with equipment, lines, knobs and entries in another order."""
    draw = random.Random(key)
    data = as_data(text)

    def mixed(items: Any) -> list[Any]:
        return draw.sample(list(items), len(items))

    data["equipment"] = dict(mixed(data["equipment"].items()))
    data["knobs"] = dict(mixed(data["knobs"].items()))
    data["lines"] = mixed(data["lines"])
    return as_text(dict(mixed(data.items())))


def renamed(text: str) -> tuple[str, dict[str, str]]:
    """Return the same flowsheet with every piece of equipment renamed, and the new names."""
    data = as_data(text)
    names = {old: f"unit-{place}" for place, old in enumerate(reversed(data["equipment"]))}

    def address(word: str) -> str:
        first, dot, rest = word.strip().partition(".")
        return names[first] + dot + rest

    data["equipment"] = {names[old]: entry for old, entry in data["equipment"].items()}
    for entry in data["equipment"].values():
        if "coupling" in entry:
            entry["coupling"]["load"] = names[entry["coupling"]["load"]]
    data["lines"] = [" -> ".join(map(address, line.split("->"))) for line in data["lines"]]
    for hold in data.get("holds", []):
        hold["hold"], hold["by"] = address(hold["hold"]), address(hold["by"])
    if "costs" in data:
        data["costs"] = _renamed_costs(data["costs"], names, address)
    if "rungs" in data:
        data["rungs"] = {
            cut: [address(port) for port in ports] if isinstance(ports, list) else ports
            for cut, ports in data["rungs"].items()
        }
    return as_text(data), names


def _renamed_costs(
    costs: dict[str, Any], names: dict[str, str], address: Callable[[str], str]
) -> dict[str, Any]:
    """Return the costs with their equipment, addresses and prices of material renamed."""
    renamed = dict(costs)
    renamed["equipment"] = {
        names[old]: {
            key: address(value) if key in ("size", "per") else value for key, value in one.items()
        }
        for old, one in costs.get("equipment", {}).items()
    }
    for side in ("bought", "sold"):
        prices = costs.get(side, {})
        if "material" in prices:
            material = {names[old]: price for old, price in prices["material"].items()}
            renamed[side] = {**prices, "material": material}
    return renamed

"""How do several flowsheets compare on the same sunlight and the same basis?

Each is solved for itself; one that has no answer keeps its column and says why. What is an amount
per time is scaled to the sunlight of the first that is solved. Stores are told by what they hold
per mass and volume and how large they are for a given energy (`chainflow.studies.kept`).
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field, replace
from pathlib import Path

from chainflow.accounts.hazards import cautions
from chainflow.accounts.plant import PlantAccount, plant_account
from chainflow.accounts.worth import BASES
from chainflow.basis.faults import ChainflowError, FileFault, FlowsheetFault, NotSolved, UsageFault
from chainflow.basis.names import shorten, suggest
from chainflow.flowsheet.building import read_flowsheet
from chainflow.flowsheet.network import Flowsheet
from chainflow.solver.solution import Solution
from chainflow.solver.solve import solve_flowsheet
from chainflow.studies.kept import Kept, kept_in
from chainflow.studies.stages import Difference, Stages, difference, stages


@dataclass(frozen=True, slots=True)
class Route:
    """One flowsheet of a comparison: its answer, or why it has none."""

    name: str
    path: str
    title: str = ""
    solution: Solution | None = None
    account: PlantAccount | None = None
    stages: Stages | None = None
    kept: Kept | None = None
    problem: ChainflowError | None = None

    @property
    def solved(self) -> bool:
        """Whether it has an answer."""
        return self.solution is not None

    @property
    def hazards(self) -> tuple[str, ...]:
        """Codes of its cautions, each once."""
        found = () if self.solution is None else cautions(self.solution)
        return tuple(dict.fromkeys(remark.code for remark in found))

    @property
    def why_not_code(self) -> str | None:
        """Code of what is wrong, if it has one."""
        if isinstance(self.problem, NotSolved):
            return self.problem.code
        return self.problem.faults[0].code if isinstance(self.problem, FlowsheetFault) else None

    @property
    def why_not(self) -> str:
        """What is wrong with it, on one line; empty if it is solved."""
        if isinstance(self.problem, FlowsheetFault):
            faults = self.problem.faults
            first = f"{faults[0].place}: {faults[0].text}" if faults[0].place else faults[0].text
            more = f" (and {len(faults) - 1} more)" if len(faults) > 1 else ""
            return first + more
        return " ".join(str(self.problem).split()) if self.problem else ""

    @property
    def told(self) -> str:
        """`why_not` behind file, line and column, as an editor follows them."""
        if isinstance(self.problem, FileFault):
            return self.why_not  # it names the file
        has_place = isinstance(self.problem, FlowsheetFault) and self.problem.faults[0].place
        return f"{self.path}:{'' if has_place else ' '}{self.why_not}"


@dataclass(frozen=True, slots=True)
class Comparison:
    """Routes side by side; amounts per time are to be multiplied by `scales`."""

    basis: str
    routes: tuple[Route, ...]
    sunlight: float | None  # [W], to which all is scaled
    energy: float  # [J] that the stores are sized for
    scales: Mapping[str, float] = field(default_factory=dict)  # by name, of those that are solved
    notes: tuple[str, ...] = ()

    @property
    def exit_code(self) -> int:
        """0, or that of the first route without an answer."""
        return next((r.problem.exit_code for r in self.routes if r.problem is not None), 0)

    @property
    def solved(self) -> tuple[Route, ...]:
        """The routes that have an answer."""
        return tuple(route for route in self.routes if route.solved)

    def differences(self) -> Iterator[tuple[Route, Route, Difference | None]]:
        """Yield each solved route against the first one: (first, other, difference)."""
        for other in self.solved[1:]:
            first = self.solved[0]
            assert first.stages is not None
            assert other.stages is not None
            yield first, other, difference(first.stages, other.stages)


def compare(
    paths: Sequence[Path | str],
    overrides: Mapping[str, str] | None = None,
    basis: str | None = None,
    energy: float = 3.6e11,
) -> Comparison:
    """Solve several flowsheets and put them side by side.

    Parameters
    ----------
    paths : flowsheet files.
    overrides : other values by knob or address; each file takes those whose names it knows.
    basis : LHV, HHV or exergy; that of the files if they agree, else LHV.
    energy : what the stores are sized for [J], 100 MWh if left out.

    Raises `UsageFault` if no file knows the name of an override, or one does not fit.
    """
    if basis is not None and basis not in BASES:
        raise UsageFault(f"basis {shorten(basis)} is not possible, wanted {', '.join(BASES)}")
    names = _names([Path(path) for path in paths])
    taken: dict[str, list[str]] = {key: [] for key in overrides or {}}
    raw = [_route(name, path, overrides or {}, taken) for name, path in names]
    notes = list(_override_notes(taken, raw))
    chosen = basis or _basis(raw, notes)
    routes = tuple(_accounted(route, chosen) for route in raw)
    lights = {r.name: r.account.sunlight for r in routes if r.account is not None}
    sunlight = next((light for light in lights.values() if light > 0.0), None)
    scales = {n: sunlight / light if sunlight and light else 1.0 for n, light in lights.items()}
    notes += [*_light_notes(lights, scales), *_cost_notes(routes, scales)]
    return Comparison(chosen, routes, sunlight, energy, scales, tuple(notes))


def _names(paths: Sequence[Path]) -> list[tuple[str, Path]]:
    """Return a short name of its own for each file."""
    found: list[tuple[str, Path]] = []
    for path in paths:
        used = {name for name, _ in found}
        name, number = path.stem, 2
        while name in used:
            name, number = f"{path.stem} ({number})", number + 1
        found.append((name, path))
    return found


def _route(
    name: str, path: Path, overrides: Mapping[str, str], taken: dict[str, list[str]]
) -> Route:
    route = Route(name, str(path))
    try:
        flowsheet = read_flowsheet(path)
        mine = {key: text for key, text in overrides.items() if _knows(flowsheet, key)}
        for key in mine:
            taken[key].append(name)
        if mine:
            flowsheet = read_flowsheet(path, mine)
        route = replace(route, title=flowsheet.title)
        return replace(route, solution=solve_flowsheet(flowsheet))
    except UsageFault as problem:
        raise UsageFault(f"{path}: {problem}") from None
    except ChainflowError as problem:
        return replace(route, problem=problem)


def _knows(flowsheet: Flowsheet, key: str) -> bool:
    if "." in key:
        return key.partition(".")[0] in flowsheet.equipment
    return key in flowsheet.knobs


def _override_notes(taken: Mapping[str, list[str]], routes: Sequence[Route]) -> Iterator[str]:
    read = [route.name for route in routes if route.title or route.solved]
    known = [k for r in routes if r.solution for k in r.solution.flowsheet.knobs]
    for key, names in taken.items():
        if not names and read:
            hint = suggest(key, dict.fromkeys(known))
            raise UsageFault(f"--set {shorten(key)}: none of the flowsheets has it{hint}")
        without = [name for name in read if name not in names]
        if without:
            yield f"{key} is set in {', '.join(names)} only: {', '.join(without)} has no such name"


def _basis(routes: Sequence[Route], notes: list[str]) -> str:
    found = dict.fromkeys(r.solution.flowsheet.basis for r in routes if r.solution is not None)
    if len(found) > 1:
        notes.append("the files differ in their basis: all are on LHV here (see --basis)")
        return "LHV"
    return next(iter(found), "LHV")


def _light_notes(lights: Mapping[str, float], scales: Mapping[str, float]) -> Iterator[str]:
    other = [name for name, scale in scales.items() if abs(scale - 1.0) > 1e-9]
    if other:
        first = next(iter(lights))
        yield (
            f"the sunlight differs: amounts per time of {', '.join(other)} are scaled to that of "
            f"{first}"
        )
    dark = [name for name, light in lights.items() if light <= 0.0]
    if dark:
        yield f"no sunlight falls on {', '.join(dark)}: amounts there are not scaled"


def _cost_notes(routes: Sequence[Route], scales: Mapping[str, float]) -> Iterator[str]:
    costs = {r.name: r.account.costs for r in routes if r.account and r.account.costs}
    currencies = dict.fromkeys(one.currency for one in costs.values())
    if len(currencies) > 1:
        yield (
            f"the costs are in {', '.join(currencies)}: nothing is exchanged, so compare costs in "
            "one currency only"
        )
    other = [name for name in costs if abs(scales[name] - 1.0) > 1e-9]
    if other:
        yield (
            f"what is installed in {', '.join(other)} is scaled in proportion, without exponents; "
            "a kWh costs what it costs at the size of its plant"
        )


def _accounted(route: Route, basis: str) -> Route:
    if route.solution is None:
        return route
    account = plant_account(route.solution)
    return replace(
        route,
        account=account,
        stages=stages(route.solution, account, basis),
        kept=kept_in(route.solution, basis),
    )

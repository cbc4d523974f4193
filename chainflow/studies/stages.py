"""In which stage of its chain does a route lose what, so that two routes can be told apart?

A *stage* is a rung with what is drawn for it: power that equipment of a later rung draws for itself
is missing in the hydrogen, but is counted here as lost where it is used (the compressor's power in
compression and storage, not in electrolysis), and heat that is bought for a rung likewise, on the
heating values. Stages are shares of all that goes in; with what comes out they add up to one, and
the differences of two routes, stage by stage, to the difference of what comes out.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from chainflow.accounts.efficiency import Rung
from chainflow.accounts.plant import PlantAccount
from chainflow.accounts.worth import of_light
from chainflow.equipment.power import Grid
from chainflow.solver.solution import Solution

NAMES = {  # by the cut that a stage ends at
    "power": "making power",
    "hydrogen": "electrolysis",
    "fuel made": "synthesis",
    "fuel kept": "compression and storage",
    "power kept": "compression and storage",
    "power out": "use",
    "useful": "use",
}
LIT_HYDROGEN = "making hydrogen from light"
ORDER = tuple(dict.fromkeys((NAMES["power"], LIT_HYDROGEN, *NAMES.values())))
KEPT = ("fuel kept", "power kept")
_DRAWN = ("own power", "bought power")
_HEATED = "bought heat"


@dataclass(frozen=True, slots=True)
class Stages:
    """What each stage loses as a share of what goes in, and what is left at two places."""

    lost: Mapping[str, float]  # to the end of the chain
    out: float  # useful, of what goes in
    lost_to_store: Mapping[str, float]  # to what is kept, with what the use draws before it
    kept: float | None  # of what goes in; None if nothing is kept
    only_power: bool  # whether power alone is useful


def stages(solution: Solution, account: PlantAccount, basis: str) -> Stages:
    """Return the stages of a solution on one basis."""
    rungs = account.efficiency.rungs
    light = of_light(account.sunlight, solution.flowsheet.environment)
    entering = (light + account.bought.worth).by_basis[basis]
    drawn = _moved(rungs, basis, entering, _grids(solution))
    lost: dict[str, float] = {}
    to_store: dict[str, float] = {}
    left, kept = 1.0, None
    for rung, extra in zip(rungs, drawn, strict=True):
        after = left * (rung.ratio[basis] or 0.0)
        name = _name(rung)
        lost[name] = lost.get(name, 0.0) + left - after + extra
        to_store[name] = to_store.get(name, 0.0) + (
            extra if kept is not None else left - after + extra
        )
        left = after
        if rung.end in KEPT:
            kept = left
    only_power = bool(rungs) and account.sold.power_total > 0.0 and not _sells_else(account)
    return Stages(lost, left if rungs else 0.0, to_store, kept, only_power)


def _name(rung: Rung) -> str:
    """The stage of a rung; hydrogen made straight from light is no electrolysis."""
    if (rung.start, rung.end) == ("light", "hydrogen"):
        return LIT_HYDROGEN
    return NAMES.get(rung.end, f"{rung.start} to {rung.end}")


def _sells_else(account: PlantAccount) -> bool:
    matter = any(float(stream.total) > 0.0 for _, stream in account.sold.material)
    return matter or account.sold.heat_total > 0.0


def _grids(solution: Solution) -> frozenset[str]:
    pieces = solution.flowsheet.equipment.items()
    return frozenset(name for name, piece in pieces if isinstance(piece, Grid))


def _moved(
    rungs: tuple[Rung, ...], basis: str, entering: float, grids: frozenset[str]
) -> list[float]:
    """What is counted at another rung than where it is missing, as shares that add up to zero.

    What a grid serves is its users' own power, which is counted already.
    """
    shift = [0.0] * len(rungs)
    missing = next((i for i, rung in enumerate(rungs) if rung.start == "power"), None)
    for place, rung in enumerate(rungs):
        for what, source in ((_DRAWN, missing), ((_HEATED,), 0)):
            if source is None or source == place or (what == (_HEATED,) and basis == "exergy"):
                continue
            uses = (u.rate for u in rung.uses if u.what in what and u.equipment not in grids)
            share = sum(uses) / entering
            shift[place] += share
            shift[source] -= share
    return shift


@dataclass(frozen=True, slots=True)
class Difference:
    """One route against another: what comes out, and the points of each stage; these add up."""

    of: str  # "power" or "what is kept"
    first: float  # share of what goes in, of the route that is compared with
    second: float
    gained: Mapping[str, float]  # by stage, shares: positive where the second loses less


def difference(first: Stages, second: Stages) -> Difference | None:
    """Return the second route against the first; None if nothing can be compared.

    Routes that both end as power are compared to their end, others to what is kept.
    """
    if first.only_power and second.only_power:
        return _difference("power", first.out, second.out, first.lost, second.lost)
    if first.kept is None or second.kept is None:
        return None
    parts = (first.lost_to_store, second.lost_to_store)
    return _difference("what is kept", first.kept, second.kept, *parts)


def _difference(
    of: str, first: float, second: float, lost: Mapping[str, float], other: Mapping[str, float]
) -> Difference:
    names = [*ORDER, *lost, *other]
    gained = {
        name: lost.get(name, 0.0) - other.get(name, 0.0)
        for name in dict.fromkeys(names)
        if name in lost or name in other
    }
    return Difference(of, first, second, gained)

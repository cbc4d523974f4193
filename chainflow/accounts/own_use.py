"""On which rung does a plant use power for itself, and where does what it buys enter?

Every piece of equipment belongs to one rung: the first of whose upper cut the lines lead to it,
followed through lines whose amount the sender sets and not across the rung's lower cut; then what
draws fuel from a store there; equipment that only serves others (a pump on a called line, a
supply) belongs to the rung of what it serves, and what is left to that of what it draws from.
What nothing of this reaches belongs to the first rung.

*Own power* is what a piece asks for at a power inlet that calls, [W]; what hydrogen is made of is
the chain itself and not counted. It was in the cut above as power, and is missing in the one below.
*Bought* power, heat and material enter at the first cut of all and are shown where they are used.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from itertools import chain

from chainflow.accounts.cuts import Cut
from chainflow.accounts.fuel import is_fuel
from chainflow.accounts.purchases import Purchases
from chainflow.equipment.ports import rate_of
from chainflow.flowsheet.network import Flowsheet, Line
from chainflow.solver.solution import Solution
from chainflow.thermo.streams import Stream

_LEAST = 1e-9  # of the cut above; less is how far the loops close


@dataclass(frozen=True, slots=True)
class Use:
    """What one piece of equipment draws for itself or has bought for it [W]."""

    equipment: str
    what: str  # "own power", "bought power", "bought heat", "bought cold", "bought material"
    rate: float  # of material the lower heating value


def uses_by_rung(
    solution: Solution, cuts: tuple[Cut, ...], bought: Purchases
) -> tuple[tuple[Use, ...], ...]:
    """Return the uses on each rung, in the order of the rungs."""
    if len(cuts) < 2:
        return ()
    places = _rung_of_each(solution, cuts)
    makers = {
        port.partition(".")[0] for cut in cuts if cut.name == "hydrogen" for port in cut.ports
    }
    found: list[list[Use]] = [[] for _ in cuts[1:]]
    for use in _summed(_own(solution, makers), _bought(bought)):
        place = places.get(use.equipment, 0)
        if use.rate > _LEAST * cuts[place].worth.lhv:
            found[place].append(use)
    return tuple(tuple(sorted(uses, key=lambda use: -use.rate)) for uses in found)


def _summed(*parts: Iterable[Use]) -> Iterator[Use]:
    """Yield one use for each equipment and what it is, though it may need it in several pieces."""
    rates: dict[tuple[str, str], float] = {}
    for use in chain(*parts):
        key = (use.equipment, use.what)
        rates[key] = rates.get(key, 0.0) + use.rate
    return (Use(*key, rate) for key, rate in rates.items())


def _own(solution: Solution, makers: set[str]) -> Iterator[Use]:
    for line in solution.flowsheet.lines:
        if line.content == "power" and line.called and line.target not in makers:
            asked = solution.outcomes[line.target].drawn.get(line.inlet, 0.0)
            if solution.flowsheet.equipment[line.target].family != "power":
                yield Use(line.target, "own power", rate_of(asked))


def _bought(bought: Purchases) -> Iterator[Use]:
    yield from (Use(name, "bought power", power) for name, power in bought.power.items())
    yield from (Use(name, "bought heat", duty.heat) for name, duty in bought.heat)
    yield from (Use(name, "bought cold", -duty.heat) for name, duty in bought.cold)
    for name, stream in bought.material.items():
        yield Use(name, "bought material", float(stream.lhv))


def _rung_of_each(solution: Solution, cuts: tuple[Cut, ...]) -> dict[str, int]:
    """Return the rung of each piece of equipment, from 0; unreached equipment is left out."""
    sheet, places = solution.flowsheet, dict[str, int]()
    fuel = {s.key for s in solution.streams if isinstance(s.flow, Stream) and is_fuel(s.flow)}
    stops = [frozenset(cut.ports) for cut in cuts[1:]]
    for rung, above in enumerate(cuts[:-1]):
        starts = [line for line in sheet.lines if line.start in above.ports]
        _follow(sheet, starts if rung else _first(sheet), rung, stops[rung], places)
    for rung, cut in enumerate(cuts[1:]):
        for port in cut.ports:  # what runs on called power alone is not reached from above
            places.setdefault(port.partition(".")[0], rung)
    for rung, stop in enumerate(stops):
        while calling := _behind_stores(sheet, places, rung, fuel - stop):
            _follow(sheet, calling, rung, stop, places)
    _place_servants(sheet, places)
    return places


def _follow(
    sheet: Flowsheet, lines: list[Line], rung: int, stop: frozenset[str], places: dict[str, int]
) -> None:
    """Put all that the lines lead to on a rung, up to its lower cut."""
    queue = list(lines)
    while queue:
        line = queue.pop()
        if line.start not in stop and line.target not in places:
            places[line.target] = rung
            queue += [onward for onward in sheet.out_of(line.target) if not onward.called]


def _first(sheet: Flowsheet) -> list[Line]:
    """Return the lines from which all begins: light."""
    return [line for line in sheet.lines if line.content == "light"]


def _behind_stores(
    sheet: Flowsheet, places: dict[str, int], rung: int, fuel: set[str]
) -> list[Line]:
    """Return the last lines by which equipment without a rung draws fuel from this rung."""
    called = [line for line in sheet.lines if line.called and line.start in fuel]
    ends = [_end_of_call(sheet, line) for line in called if places.get(line.source) == rung]
    return [line for line in ends if line.target not in places and line.start in fuel]


def _end_of_call(sheet: Flowsheet, line: Line) -> Line:
    """Return the line that arrives where a call comes from, behind all that it passes through."""
    while sheet.calls_through(line.target):
        onward = [o for o in sheet.out_of(line.target) if o.called and o.content == "material"]
        if not onward:
            break
        line = onward[0]
    return line


def _place_servants(sheet: Flowsheet, places: dict[str, int]) -> None:
    """Give what only serves others their first rung, and what only draws from others their last.

    Nothing counts as drawing only before all that serves has its place: a pump may serve a heater
    that serves a stack.
    """
    while True:
        waiting = [name for name in sheet.equipment if name not in places]
        served = {name: _rungs(places, (x.target for x in sheet.out_of(name))) for name in waiting}
        drawn = {name: _rungs(places, (x.source for x in sheet.into(name))) for name in waiting}
        if any(served.values()):
            places.update((name, min(rungs)) for name, rungs in served.items() if rungs)
        elif any(drawn.values()):
            places.update((name, max(rungs)) for name, rungs in drawn.items() if rungs)
        else:
            return


def _rungs(places: dict[str, int], names: Iterable[str]) -> list[int]:
    return [places[name] for name in names if name in places]

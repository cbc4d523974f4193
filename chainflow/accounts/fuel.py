"""How much fuel does the plant make, and how much of it is still there when it is used?

Energy [W] on the three bases of `Worth`. The lines of a plant fall into a making part and a using
part, and the cut between them is found from the graph:

* A *fuel line* carries matter whose lower heating value is at least half of its exergy. Flue gas
  with a trace of CO, oxygen and condensate are none.
* Following fuel lines downstream from a line, through all that does not make things (valves,
  compressors, stores, condensers, separators, ...), one ends at makers (equipment with chemistry),
  at products, at vents, or at burners and engines. A burner or engine is a *use* if energy or
  matter goes on from it to a product, a grid's surplus or an outlet of power without a line:
  matter may go on as anything, heat as heat or power, power as power only, none of it through a
  maker. So hydrogen that is burnt to run the plant's own electrolyser is not fuel made.
* A store whose surplus has no line keeps the fuel: that is a use too, though nothing is delivered.
* A line is *final* if it reaches a use and no maker.
* What a use leaves of its fuel and gets back again (fuel cells whose spent fuel is led to their
  inlet) is no fuel line: it was counted when it came.

*Fuel made* is what passes the final lines that leave the making part: their sender is a maker, or
also gets fuel lines that are not final, or gets none. What a supply sends is bought, not made.
*Fuel kept* is what leaves the last stores before the uses or, where there is no store on the way,
what arrives at the uses. Every line counts once; lines that lead to vents only do not count.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from weakref import WeakKeyDictionary

from chainflow.accounts.border import Flows
from chainflow.accounts.worth import Worth, of_material
from chainflow.equipment.base import Equipment
from chainflow.equipment.boundary import Product, Supply
from chainflow.equipment.ports import rate_of
from chainflow.equipment.power import Grid
from chainflow.equipment.stores import Store
from chainflow.flowsheet.network import Line
from chainflow.solver.solution import Solution
from chainflow.thermo.streams import Stream

FUEL_SHARE = 0.5  # least LHV per exergy of a fuel line; our own convention
_GOES_ON = {  # what may leave equipment that was entered by a line of this content
    "material": ("material", "heat", "power"),
    "heat": ("heat", "power"),
    "power": ("power",),
    "light": (),
}


@dataclass(frozen=True, slots=True)
class FuelLines:
    """Lines of the two cuts, by the sending port."""

    made: tuple[str, ...]
    kept: tuple[str, ...]
    staying: tuple[str, ...] = ()  # outlets of stores that keep the fuel: it does not leave there


_FOUND: WeakKeyDictionary[Solution, FuelLines] = WeakKeyDictionary()  # every account asks for it


def fuel_lines(solution: Solution) -> FuelLines:
    """Return which lines carry the fuel made and the fuel kept."""
    found = _FOUND.get(solution)
    if found is None:
        search = _Search(solution)
        found = FuelLines(
            made=tuple(line.start for line in search.made()),
            kept=tuple(line.start for line in search.kept()),
            staying=search.staying(),
        )
        _FOUND[solution] = found
    return found


def worth_of_lines(solution: Solution, keys: tuple[str, ...]) -> Worth:
    """Return the worth of the matter that leaves the named ports."""
    found = [stream.flow for stream in solution.streams if stream.key in keys]
    surroundings = solution.flowsheet.environment
    return Worth.total(
        of_material(flow, surroundings) for flow in found if isinstance(flow, Stream)
    )


class _Search:
    """Walks the graph of one solution."""

    def __init__(self, solution: Solution) -> None:
        self.solution = solution
        self.flowsheet = solution.flowsheet
        flows = Flows(solution)
        self.fuel = [line for line in self.flowsheet.lines if _carries_fuel(flows, line)]
        again = self._going_back()
        self.fuel = [line for line in self.fuel if line.number not in again]
        self.final = [line for line in self.fuel if self._is_final(line)]

    def made(self) -> list[Line]:
        """Return the final lines that leave the making part."""
        return [line for line in self.final if self._leaves_making(line)]

    def kept(self) -> list[Line]:
        """Return the lines that leave the last stores, or arrive at uses without a store."""
        kept: dict[int, Line] = {}
        for line in self.final:
            if self._is_use(line.target) or self._fills(line.target):
                origin = self._stored(line, frozenset())
                kept |= {found.number: found for found in origin or (line,)}
        return list(kept.values())

    def staying(self) -> tuple[str, ...]:
        """Return the outlets without a line by which the surplus of filling stores goes."""
        filling = [line.target for line in self.final if self._fills(line.target)]
        return tuple(f"{name}.rest" for name in dict.fromkeys(filling))

    def _going_back(self) -> set[int]:
        """Numbers of the lines with what uses leave of their fuel and get back."""
        found = {
            line.number
            for line in self.fuel
            if self._is_use(line.source) and self._reaches(line, line.source)
        }
        more = found
        while more:
            more = {line.number for line in self.fuel if self._goes_on(line, found)} - found
            found |= more
        return found

    def _goes_on(self, line: Line, before: set[int]) -> bool:
        """Whether a line passes on nothing but what lines of `before` bring."""
        arriving = [other.number for other in self.fuel if other.target == line.source]
        return bool(arriving) and not self._piece(line.source).makes and before.issuperset(arriving)

    def _reaches(self, start: Line, name: str) -> bool:
        """Whether fuel lines lead to a piece of equipment through nothing that makes things."""
        seen, queue = {start.target}, [start.target]
        while queue:
            at = queue.pop()
            if at == name:
                return True
            if not self._piece(at).makes:
                fresh = [line.target for line in self._from(at) if line.target not in seen]
                seen |= set(fresh)
                queue += fresh
        return False

    def _piece(self, name: str) -> Equipment:
        return self.flowsheet.equipment[name]

    def _from(self, name: str) -> Iterator[Line]:
        return (line for line in self.fuel if line.source == name)

    def _is_final(self, start: Line) -> bool:
        """Whether fuel lines lead from here to a use and to no maker."""
        seen, queue, useful = {start.target}, [start.target], False
        while queue:
            name = queue.pop()
            if self._is_use(name):
                useful = True
                continue
            piece = self._piece(name)
            if piece.makes:
                if not piece.burns:
                    return False
                continue
            useful = useful or self._fills(name)
            for line in self._from(name):
                if line.target not in seen:
                    seen.add(line.target)
                    queue.append(line.target)
        return useful

    def _is_use(self, name: str) -> bool:
        piece = self._piece(name)
        return isinstance(piece, Product) or (piece.burns and self._delivers(name))

    def _delivers(self, name: str) -> bool:
        """Whether anything useful comes of what leaves a burner or engine."""
        lines = list(self.flowsheet.out_of(name))
        seen = {line.number for line in lines}
        if self._gives_power_away(name):
            return True
        while lines:
            line = lines.pop()
            target = self._piece(line.target)
            if isinstance(target, Product | Grid):
                return True
            if target.makes and not target.burns:
                continue
            if self._gives_power_away(line.target):
                return True
            onward = self.flowsheet.out_of(line.target)
            fresh = [
                o for o in onward if o.number not in seen and o.content in _GOES_ON[line.content]
            ]
            seen |= {one.number for one in fresh}
            lines += fresh
        return False

    def _gives_power_away(self, name: str) -> bool:
        return any(
            stream.source == name
            and stream.content == "power"
            and not stream.targets
            and rate_of(stream.flow) > 0.0
            for stream in self.solution.streams
        )

    def _fills(self, name: str) -> bool:
        """Whether fuel stays in a store: its rest has no line."""
        if not isinstance(self._piece(name), Store) or self.flowsheet.line_from(name, "rest"):
            return False
        rest = self.solution.outcomes[name].outlets["rest"]
        return isinstance(rest, Stream) and float(rest.total) > 0.0

    def _leaves_making(self, line: Line) -> bool:
        piece = self._piece(line.source)
        if piece.makes:
            return True
        arriving = [other for other in self.fuel if other.target == line.source]
        if not arriving:
            return bool(self.flowsheet.into(line.source)) and not isinstance(piece, Supply)
        return any(other not in self.final for other in arriving)

    def _stored(self, line: Line, seen: frozenset[str]) -> tuple[Line, ...] | None:
        """Return the store outlets that all of a line comes from; None if some comes from none."""
        if isinstance(self._piece(line.source), Store):
            return (line,)
        if self._leaves_making(line) or line.source in seen:
            return None
        found: dict[int, Line] = {}
        for other in self.final:
            if other.target == line.source:
                origin = self._stored(other, seen | {line.source})
                if origin is None:
                    return None
                found |= {one.number: one for one in origin}
        return tuple(found.values()) or None


def _carries_fuel(flows: Flows, line: Line) -> bool:
    stream = flows.material(line)
    return stream is not None and is_fuel(stream)


def is_fuel(stream: Stream) -> bool:
    """Whether at least half of the exergy of matter is lower heating value."""
    worth = of_material(stream)
    return worth.lhv > 0.0 and worth.lhv >= FUEL_SHARE * worth.exergy

"""Which species can be where, and whether every inventory of a closed loop is fixed.

Two structural tests that walk through stores, made before anything is solved: an element that
comes in and has no way out, and a conserved combination of elements that nothing pins.  Both are
refused, since in a closed cycle such an inventory stays wherever the start put it.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

import networkx as nx
import numpy as np

from chainflow.basis.faults import NotSolved
from chainflow.equipment.base import Equipment
from chainflow.equipment.ports import ANY_NAME
from chainflow.equipment.shares import resolved
from chainflow.equipment.stores import Store
from chainflow.flowsheet.network import Flowsheet, Line

Spot = tuple[str, str, str]  # equipment, outlet, species
_TOLERANCE = 1e-9


@dataclass(frozen=True, slots=True)
class Presence:
    """Species that can be at each outlet, and how they move on."""

    species: dict[tuple[str, str], tuple[str, ...]]  # by (equipment, outlet), in component order
    graph: nx.DiGraph  # of spots


@dataclass(frozen=True, slots=True)
class Conditional:
    """An inventory whose only way out is what stores have too much of; judged when solved."""

    stores: tuple[str, ...]
    text: str
    code: str


def find_presence(flowsheet: Flowsheet) -> Presence:
    """Follow every species from where it comes in to wherever it can get."""
    graph: nx.DiGraph = nx.DiGraph()
    queue: list[Spot] = []
    for name, piece in flowsheet.equipment.items():
        if isinstance(piece, Store) and not _makes_up(flowsheet, name):
            continue
        for outlet, species in piece.origins().items():
            for port in _outlets(flowsheet, name, piece) if outlet == ANY_NAME else (outlet,):
                queue += [(name, port, s) for s in species]
    graph.add_nodes_from(queue)
    while queue:
        spot = queue.pop(0)
        for following in _next_spots(flowsheet, spot):
            if following not in graph:
                queue.append(following)
            graph.add_edge(spot, following)
    met: dict[tuple[str, str], set[str]] = {}
    for name, outlet, component in graph.nodes:
        met.setdefault((name, outlet), set()).add(component)
    ordered = {
        key: tuple(c for c in flowsheet.components if c in found) for key, found in met.items()
    }
    return Presence(ordered, graph)


def _makes_up(flowsheet: Flowsheet, name: str) -> bool:
    """Whether a store may bring its contents into the plant by itself."""
    draws = any(li.content == "material" and li.outlet != "rest" for li in flowsheet.out_of(name))
    return draws and not flowsheet.line_into(name, "make_up")


def _outlets(flowsheet: Flowsheet, name: str, piece: Equipment) -> list[str]:
    """Material outlets of a piece; the names of a family come from the lines."""
    linked = [line.outlet for line in flowsheet.out_of(name) if line.content == "material"]
    own = [o for o in piece.material_outlets() if o != ANY_NAME]
    return list(dict.fromkeys([*linked, *own]))


def _next_spots(flowsheet: Flowsheet, spot: Spot) -> Iterable[Spot]:
    name, outlet, species = spot
    for line in flowsheet.line_from(name, outlet):
        piece = flowsheet.equipment[line.target]
        outlets = _outlets(flowsheet, line.target, piece)
        for port, made in piece.destinations(line.inlet, species, outlets, flowsheet.matter):
            yield line.target, port, made


def check_inventories(flowsheet: Flowsheet, presence: Presence) -> tuple[Conditional, ...]:
    """Refuse loops whose inventory nothing fixes; return what must be judged when solved.

    Raises
    ------
    NotSolved
        ``no-way-out`` or ``nothing-pins``, naming the element or combination and the loop.
    """
    conditional: list[Conditional] = []
    for members in _material_loops(flowsheet):
        loop = _Loop(flowsheet, presence, members)
        problem = loop.problem(sure_only=True)
        if problem is None:
            continue
        code, text = problem
        stores = loop.surplus_stores()
        if stores and loop.problem(sure_only=False) is None:
            conditional.append(Conditional(stores, text, code))
            continue
        raise NotSolved(code, text, {"loop": members})
    return tuple(conditional)


def _material_loops(flowsheet: Flowsheet) -> list[list[str]]:
    graph: nx.DiGraph = nx.DiGraph()
    graph.add_nodes_from(flowsheet.equipment)
    graph.add_edges_from(
        (li.source, li.target) for li in flowsheet.lines if li.content == "material"
    )
    order = {name: i for i, name in enumerate(flowsheet.equipment)}
    found = [
        sorted(c, key=order.__getitem__)
        for c in nx.strongly_connected_components(graph)
        if len(c) > 1 or any(graph.has_edge(name, name) for name in c)
    ]
    return sorted(found, key=lambda members: order[members[0]])


class _Loop:
    """The material of one strongly connected part of the flowsheet."""

    def __init__(self, flowsheet: Flowsheet, presence: Presence, members: list[str]) -> None:
        self.flowsheet, self.presence, self.members = flowsheet, presence, members
        inside = set(members)
        self.lines = [
            li
            for li in flowsheet.lines
            if li.content == "material" and li.source in inside and li.target in inside
        ]
        self.spots = [
            (li.source, li.outlet, s)
            for li in self.lines
            for s in presence.species.get((li.source, li.outlet), ())
        ]

    def _entering(self) -> list[Line]:
        inside = set(self.members)
        return [
            li
            for li in self.flowsheet.lines
            if li.content == "material" and li.target in inside and li.source not in inside
        ]

    def _is_exit(self, name: str, outlet: str, *, sure_only: bool) -> bool:
        """Whether what is at this outlet leaves the loop."""
        piece = self.flowsheet.equipment[name]
        lines = self.flowsheet.line_from(name, outlet)
        leaves = not lines or any(line.target not in self.members for line in lines)
        if not leaves:
            return False
        if isinstance(piece, Store) and outlet == "rest" and self._draws(name):
            return not sure_only
        return True

    def _draws(self, name: str) -> bool:
        return any(li.outlet not in ("rest", "heat") for li in self.flowsheet.out_of(name))

    def _exits(self, *, sure_only: bool) -> set[Spot]:
        """Spots of the loop's equipment from which matter leaves the loop."""
        found: set[Spot] = set()
        for spot in self.presence.graph.nodes:
            name, outlet, _ = spot
            if name in self.members and self._is_exit(name, outlet, sure_only=True):
                found.add(spot)
        if not sure_only:
            found = found.union(*(self._surplus_spots(name) for name in self.members))
        for name in self.members:  # a pure store refuses what is not its contents, always
            piece = self.flowsheet.equipment[name]
            if isinstance(piece, Store) and piece.pure:
                kept = resolved(piece.contents)
                found |= {
                    s
                    for s in self.presence.graph.nodes
                    if s[0] == name
                    and s[1] == "rest"
                    and kept.get(s[2], 0.0) == 0.0
                    and self._is_exit(name, "rest", sure_only=False)
                }
        return found

    def surplus_stores(self) -> tuple[str, ...]:
        """Stores with draws whose `rest` leaves the loop and may carry something out."""
        return tuple(name for name in self.members if self._surplus_spots(name))

    def _surplus_spots(self, name: str) -> set[Spot]:
        """Spots at `rest` of a store with draws that not only its own make-up can reach."""
        piece = self.flowsheet.equipment[name]
        if not (isinstance(piece, Store) and self._draws(name)):
            return set()
        if not self._is_exit(name, "rest", sure_only=False):
            return set()
        arriving: set[Spot] = set()
        for spot in self._foreign(name):
            arriving |= nx.descendants(self.presence.graph, spot)
        return {spot for spot in arriving if spot[:2] == (name, "rest")}

    def _foreign(self, name: str) -> set[Spot]:
        """Where matter comes into the loop by another way than one store's own make-up."""
        own = set()
        for line in self.flowsheet.line_into(name, "make_up"):
            own |= self._upstream(line.source)
        starts = [(li.source, li.outlet) for li in self._entering() if li.source not in own]
        found = {(*port, s) for port in starts for s in self.presence.species.get(port, ())}
        for other in self.members:
            piece = self.flowsheet.equipment[other]
            if other != name and isinstance(piece, Store) and _makes_up(self.flowsheet, other):
                kept = resolved(piece.contents)
                found |= {s for s in self.presence.graph.nodes if s[0] == other and s[2] in kept}
        return found

    def _upstream(self, name: str) -> set[str]:
        found = {name}
        queue = [name]
        while queue:
            for line in self.flowsheet.into(queue.pop()):
                if (
                    line.content == "material"
                    and line.source not in found
                    and line.source not in self.members
                ):
                    found.add(line.source)
                    queue.append(line.source)
        return found

    def problem(self, *, sure_only: bool) -> tuple[str, str] | None:
        """What is not fixed in this loop: (code, sentence), or None."""
        if not self.spots:
            return "nothing-enters", (
                f"nothing ever enters the loop {self._loop_text()}: link a supply, "
                "or put a store with a draw into it"
            )
        exits = self._exits(sure_only=sure_only)
        pinned = self._store_pins()
        elements = [
            e
            for e in self.flowsheet.matter.elements
            if any(self._holds(s, e) for _, _, s in self.spots)
        ]
        sure = {e for e in elements if any(self._holds(s, e) for _, _, s in exits)} | {
            e for e in elements if any(self._holds(s, e) for pin in pinned for s in pin)
        }
        one_way = [
            pin
            for pin in self._call_pins()
            if all(e in sure for s in pin for e in elements if self._holds(s, e))
        ]
        columns = [self._column({s: 1.0}) for s in dict.fromkeys(s for _, _, s in exits)]
        columns += [self._column(pin) for pin in (*pinned, *one_way)]
        return self._trapped(exits, pinned, elements) or self._unpinned(columns, elements)

    def _holds(self, species: str, element: str) -> bool:
        matter = self.flowsheet.matter
        return bool(matter.formula[matter.elements.index(element), matter.index[species]] > 0)

    def _column(self, mixture: dict[str, float]) -> np.ndarray:
        matter = self.flowsheet.matter
        return np.sum(
            [share * matter.formula[:, matter.index[s]] for s, share in mixture.items()], axis=0
        )

    def _store_pins(self) -> list[dict[str, float]]:
        """Contents of stores with draws: they make up and let out, whichever is needed."""
        pins = []
        for name in self.members:
            piece = self.flowsheet.equipment[name]
            if isinstance(piece, Store) and self._draws(name):
                pins.append(
                    {s: share for s, share in resolved(piece.contents).items() if share > 0.0}
                )
        return pins

    def _call_pins(self) -> list[dict[str, float]]:
        """What calls of the loop get from outside: they can only bring in."""
        pins = []
        for line in self._entering():
            if line.called and not (
                isinstance(self.flowsheet.equipment[line.target], Store) and line.inlet == "make_up"
            ):
                species = self.presence.species.get((line.source, line.outlet), ())
                pins.append(self._served(line, species))
        return [pin for pin in pins if pin]

    def _served(self, line: Line, species: tuple[str, ...]) -> dict[str, float]:
        for name in self._upstream(line.source):
            given = getattr(self.flowsheet.equipment[name], "composition", None)
            if given is not None:
                shares = resolved(given)
                most = max(shares.values(), default=0.0)
                return {s: 1.0 for s in species if shares.get(s, 0.0) == most}
        return dict.fromkeys(species[:1], 1.0)

    def _trapped(
        self,
        exits: set[Spot],
        pinned: list[dict[str, float]],
        elements: list[str],
    ) -> tuple[str, str] | None:
        """An element that enters where no exit can be reached, and that no store lets out.

        A call only brings in: the nitrogen of an engine's air is no way out for that of a recycle.
        """
        for element in elements:
            if any(self._holds(s, element) for pin in pinned for s in pin):
                continue
            free = {spot for spot in exits if self._holds(spot[2], element)}
            waiting = list(free)
            while waiting:  # back from the ways out
                before = set(self.presence.graph.predecessors(waiting.pop())) - free
                free |= before
                waiting += before
            stuck = [s for s in self.spots if self._holds(s[2], element) and s not in free]
            if stuck:
                return "no-way-out", self._no_way_out(element, stuck)
        return None

    def _no_way_out(self, element: str, stuck: list[Spot]) -> str:
        species = sorted({s for _, _, s in stuck}, key=self.flowsheet.components.index)
        graph = self.presence.graph
        before = set(stuck).union(*(nx.ancestors(graph, spot) for spot in stuck))
        sources = [
            f"{li.source}.{li.outlet}"
            for li in self._entering()
            if any(
                self._holds(s, element) and (li.source, li.outlet, s) in before
                for s in self.presence.species.get((li.source, li.outlet), ())
            )
        ]
        starts = f" enters at {', '.join(sources)}" if sources else " is in the loop"
        carried = f" (as {', '.join(species)})" if species != [element] else ""
        return (
            f"{element}{carried}{starts} and has no way out of the loop {self._loop_text()}: "
            "open a purge (a splitter share that leaves the plant), "
            "or take it out of what is bought"
        )

    def _loop_text(self) -> str:
        names = self.members
        return ", ".join(names[:6]) + (f" and {len(names) - 6} more" if len(names) > 6 else "")

    def _unpinned(self, columns: list[np.ndarray], elements: list[str]) -> tuple[str, str] | None:
        """A combination of elements that neither leaves freely nor is pinned."""
        rows = [self.flowsheet.matter.elements.index(e) for e in elements]
        table = np.array(columns)[:, rows].T if columns else np.zeros((len(rows), 1))
        left, sizes, _ = np.linalg.svd(table, full_matrices=True)
        rank = int((sizes > _TOLERANCE * max(1.0, sizes.max(initial=0.0))).sum())
        free = left[:, rank:]
        inside = np.array(
            [self._column({s: 1.0})[rows] for s in dict.fromkeys(s for _, _, s in self.spots)]
        )
        held, strength, _ = np.linalg.svd(free.T @ inside.T, full_matrices=False)
        free = free @ held[:, strength > _TOLERANCE]  # combinations that what is inside has
        if free.shape[1] == 0:
            return None
        combination = _simple(free, elements)
        text = (
            f"nothing fixes how much of {combination} is in the loop {self._loop_text()}: "
            "it neither leaves nor is pinned; "
            "put a store with a draw into the loop, or open a purge"
        )
        return "nothing-pins", text


def _simple(free: np.ndarray, elements: list[str]) -> str:
    """The conserved combination with small whole numbers, such as 4 C + 2 O - H."""
    vector = free[:, 0]
    for column in free.T:
        if (np.abs(column) > _TOLERANCE).sum() < (np.abs(vector) > _TOLERANCE).sum():
            vector = column
    smallest = np.abs(vector[np.abs(vector) > 1e-6]).min()
    scaled = vector / smallest
    if scaled[np.argmax(np.abs(scaled))] < 0:
        scaled = -scaled
    words: list[str] = []
    for number, element in sorted(zip(scaled, elements, strict=True), key=lambda pair: -pair[0]):
        if abs(number) < 1e-6:
            continue
        size = "" if abs(abs(number) - 1.0) < 1e-6 else f"{abs(number):.4g} "
        words.append(f"{'- ' if number < 0 else '+ ' if words else ''}{size}{element}")
    return " ".join(words)

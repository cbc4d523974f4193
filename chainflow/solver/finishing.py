"""From the closed values to a solution: every piece of equipment once more, in full detail."""

from __future__ import annotations

import copy
import heapq
from collections.abc import Collection, Mapping

import networkx as nx

from chainflow.equipment.base import Equipment, Outcome
from chainflow.equipment.ports import Feeds, Flow, Heat, Light, Role, rate_of
from chainflow.flowsheet.network import Flowsheet, Line
from chainflow.solver.nodes import EquipmentStep, Source, Values, outside_the_data
from chainflow.solver.program import Program, amount_key, site_of
from chainflow.solver.solution import SolvedStream
from chainflow.thermo.streams import Stream
from chainflow.thermo.validity import StateError


class Finish:
    """Outcomes, arriving flows and tagged streams for closed values."""

    def __init__(self, program: Program, values: Values) -> None:
        self.program, self.flowsheet, self.values = program, program.flowsheet, values
        self.outcomes: dict[str, Outcome] = {}
        self.feeds: dict[str, Feeds] = {}
        self._order = flow_order(self.flowsheet)
        self._settled = self._with_choices(self.flowsheet)
        self.pieces = self._pieces()
        for name in self.flowsheet.equipment:
            self._operate(name, self.pieces[name])
        self.streams = self._streams()

    def again(self, program: Program, values: Values, names: Collection[str]) -> Finish:
        """The same for slightly other values or settings, with only some equipment run anew.

        Parameters
        ----------
        program, values : as before, with the same lines.
        names : equipment whose settings or arriving flows are others.
        """
        other = copy.copy(self)
        other.program, other.flowsheet, other.values = program, program.flowsheet, values
        other.outcomes, other.feeds = dict(self.outcomes), dict(self.feeds)
        if program is not self.program:
            other._settled = dict(program.flowsheet.equipment)
        other.pieces = other._pieces()
        for name in names:
            other._operate(name, other.pieces[name])
        other.streams = other._streams()
        return other

    def reads(self, name: str) -> set[str]:
        """The variables that a piece of equipment is run on."""
        keys = {key for key, hold in self.program.settings.items() if hold.piece == name}
        for line in self.flowsheet.into(name):
            if not line.called:
                keys.add(line.start)
                continue
            keys.add(amount_key(line))
            if line.content == "material":
                keys.update(self.state(line).keys)
        for line in self.flowsheet.out_of(name):
            if line.called:
                keys.add(amount_key(line))
        return keys

    def _with_choices(self, flowsheet: Flowsheet) -> dict[str, Equipment]:
        """Equipment with its settled choices."""
        pieces = dict(flowsheet.equipment)
        for step in self.program.steps:
            if isinstance(step, EquipmentStep) and step.equipment is not None:
                pieces[step.name] = step.equipment
        return pieces

    def _pieces(self) -> dict[str, Equipment]:
        """Equipment with its settled choices and held settings."""
        pieces = dict(self._settled)
        for setting, hold in self.program.settings.items():
            number = self.values[setting]
            assert isinstance(number, float)
            pieces[hold.piece] = pieces[hold.piece].with_setting(hold.path, number)
        return pieces

    def _operate(self, name: str, piece: Equipment) -> None:
        through = self.flowsheet.calls_through(name)
        feeds: dict[str, tuple[Flow, ...]] = {}
        actual: dict[str, tuple[Flow, ...]] = {}
        for line in self.flowsheet.into(name):
            flow = self._sample(line)
            whole = self._whole(line)
            if whole is not None:
                actual[line.inlet] = (*actual.get(line.inlet, ()), whole)
            if flow is not None:
                used = whole if through and line.called else flow
                assert used is not None
                feeds[line.inlet] = (*feeds.get(line.inlet, ()), used)
        asked = self._asked(name, piece)
        many = {p.name for p in piece.port_list() if p.is_inlet and p.many}
        given = {port: flows if port in many else flows[0] for port, flows in feeds.items()}
        site = site_of(self.flowsheet, name, detail=True)
        try:
            self.outcomes[name] = piece.operate(given, asked, site)
        except StateError as problem:
            raise outside_the_data(name, problem) from problem
        self.feeds[name] = {
            port: flows if port in many else flows[0] for port, flows in actual.items()
        }

    def _sample(self, line: Line) -> Flow | None:
        """What equipment gets at an inlet: the flow, or one mol of it where it calls."""
        if not line.called:
            return self.values[line.start]
        return self.state(line).of(self.values) if line.content == "material" else None

    def state(self, line: Line) -> Source:
        """Where one mol of a called material line comes from."""
        states = self.program.states
        return (
            states[(line.source, line.outlet)]
            if (line.source, line.outlet) in states
            else states[(line.source, "*")]
        )

    def _amount(self, line: Line) -> Flow:
        return self.values[amount_key(line)]

    def _whole(self, line: Line) -> Flow | None:
        """What passes a line."""
        if not line.called:
            return self.values[line.start]
        amount = self._amount(line)
        if line.content != "material":
            return amount
        one = self.state(line).of(self.values)
        assert isinstance(one, Stream) and isinstance(amount, float)
        return one.scaled(amount)

    def _asked(self, name: str, piece: Equipment) -> dict[str, float | Heat]:
        asked: dict[str, float | Heat] = {}
        for line in self.flowsheet.out_of(name):
            port = piece.port(line.outlet, inlet=False)
            if not line.called or port is None or port.role is not Role.SERVES:
                continue
            amount = self._amount(line)
            if isinstance(amount, Heat):
                asked[line.outlet] = amount
            else:
                before = asked.get(line.outlet, 0.0)
                assert isinstance(amount, float) and not isinstance(before, Heat)
                asked[line.outlet] = before + amount
        return asked

    # --- streams -----------------------------------------------------------------------------

    def _streams(self) -> tuple[SolvedStream, ...]:
        found = []
        for name in self._order:
            for outlet, flow in self.outcomes[name].outlets.items():
                lines = self.flowsheet.line_from(name, outlet)
                if not lines and not _flows(flow):
                    continue
                content = lines[0].content if lines else _content(flow)
                found.append((name, outlet, tuple(line.end for line in lines), content, flow))
        return tuple(SolvedStream(tag, *parts) for tag, parts in enumerate(found, start=1))


def flow_order(flowsheet: Flowsheet) -> list[str]:
    """Equipment from where things come in to where they leave; loops are entered in file order."""
    graph: nx.DiGraph = nx.DiGraph()
    graph.add_nodes_from(flowsheet.equipment)
    graph.add_edges_from((line.source, line.target) for line in flowsheet.lines)
    place = {name: i for i, name in enumerate(flowsheet.equipment)}
    waiting = {name: sum(p != name for p in graph.predecessors(name)) for name in graph}
    free = [place[name] for name, count in waiting.items() if count == 0]
    touched: list[int] = []  # entered loops that wait for the rest of their inlets
    unseen = list(place.values())
    for heap in (free, touched, unseen):
        heapq.heapify(heap)
    names, done = list(flowsheet.equipment), set[int]()
    ordered: list[str] = []
    while len(ordered) < len(names):
        number = heapq.heappop(free or touched or unseen)
        if number in done:
            continue
        done.add(number)
        ordered.append(names[number])
        for follower in graph.successors(names[number]):
            waiting[follower] -= follower != names[number]
            heapq.heappush(free if waiting[follower] == 0 else touched, place[follower])
    return ordered


def _flows(flow: Flow) -> bool:
    if isinstance(flow, Stream):
        return float(flow.total) > 0.0
    return rate_of(flow) != 0.0


def _content(flow: Flow) -> str:
    for cls, content in ((Stream, "material"), (Heat, "heat"), (Light, "light")):
        if isinstance(flow, cls):
            return content
    return "power"


def arriving_whole(feeds: Mapping[str, Feeds], name: str) -> list[Flow]:
    """Every flow that arrives at a piece of equipment."""
    flows: list[Flow] = []
    for flow in feeds[name].values():
        flows += list(flow) if isinstance(flow, tuple) else [flow]
    return flows

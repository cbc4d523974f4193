"""The order of a pass: what runs once before, what is iterated, what runs once after.

Cuts the graph of information at the torn variables and sorts the steps; ties keep file order.
"""

from __future__ import annotations

import heapq
from dataclasses import dataclass, field

import networkx as nx

from chainflow.solver.nodes import Step
from chainflow.solver.program import Program
from chainflow.solver.tears import choose_tears

_RATE_BONUS = 0.5  # a switchboard's rest wins a tie
_FILE_ORDER = 1e-6  # and then what comes first in the file


@dataclass
class Order:
    """Steps in the order they run, and the variables at which loops are cut."""

    before: list[Step] = field(default_factory=list)
    loop: list[Step] = field(default_factory=list)
    after: list[Step] = field(default_factory=list)
    tears: list[str] = field(default_factory=list)
    loops: list[list[str]] = field(default_factory=list)  # variables of each loop of information


def order_steps(program: Program) -> Order:
    """Cut the loops and sort the steps."""
    graph = information_graph(program)
    loops = loops_of(graph)
    settings = list(program.settings)
    weights = _weights(program, graph)
    tears = list(settings)
    for members in loops:
        forced = [s for s in settings if s in members]
        tears += [
            t for t in choose_tears(graph.subgraph(members), weights, forced) if t not in tears
        ]
    order = Order(tears=tears, loops=loops)
    steps = _sorted_steps(program, set(tears))
    _deal(steps, program, order)
    return order


def information_graph(program: Program) -> nx.DiGraph:
    """An edge from every variable that is read to every one that is written from it."""
    graph: nx.DiGraph = nx.DiGraph()
    graph.add_nodes_from(program.variables)
    for step in program.steps:
        graph.add_edges_from((read, written) for read in step.reads for written in step.writes)
    graph.add_edges_from((result, setting) for _, setting, result in program.holds)
    return graph


def loops_of(graph: nx.DiGraph) -> list[list[str]]:
    """The variables of each loop of information, in the order of the graph."""
    place = {key: i for i, key in enumerate(graph.nodes)}
    found = [
        sorted(part, key=place.__getitem__)
        for part in nx.strongly_connected_components(graph)
        if len(part) > 1 or any(graph.has_edge(n, n) for n in part)
    ]
    return sorted(found, key=lambda members: place[members[0]])


def _weights(program: Program, graph: nx.DiGraph) -> dict[str, float]:
    weights = {}
    for number, (key, variable) in enumerate(program.variables.items()):
        size = 1000.0 if variable.form in ("heat", "light") else float(variable.size)  # levels too
        bonus = _RATE_BONUS if variable.rate else 0.0
        weights[key] = size - bonus + _FILE_ORDER * number
    return {key: weights[key] for key in graph.nodes}


def _sorted_steps(program: Program, torn: set[str]) -> list[Step]:
    """Topological order of the steps, torn variables cut; smallest file position first."""
    writer = {key: i for i, step in enumerate(program.steps) for key in step.writes}
    waiting = []
    followers: dict[int, list[int]] = {i: [] for i in range(len(program.steps))}
    for i, step in enumerate(program.steps):
        needed = {writer[key] for key in step.reads if key in writer and key not in torn}
        for j in needed:
            followers[j].append(i)
        waiting.append(len(needed))
    ready = [i for i, count in enumerate(waiting) if count == 0]
    heapq.heapify(ready)
    ordered = []
    while ready:
        i = heapq.heappop(ready)
        ordered.append(program.steps[i])
        for j in followers[i]:
            waiting[j] -= 1
            if waiting[j] == 0:
                heapq.heappush(ready, j)
    assert len(ordered) == len(program.steps), "the torn variables leave a loop"
    return ordered


def _deal(steps: list[Step], program: Program, order: Order) -> None:
    """Only what depends on torn variables and is needed for them is iterated."""
    moving = set(order.tears)
    for step in steps:
        if moving & set(step.reads):
            moving |= set(step.writes)
    needed = set(order.tears) | {result for _, _, result in program.holds}
    inside: set[int] = set()
    for step in reversed(steps):
        if needed & set(step.writes):
            needed |= set(step.reads)
            if moving & set(step.writes) and (moving & set(step.reads)):
                inside.add(id(step))
    for step in steps:
        if id(step) in inside:
            order.loop.append(step)
        elif moving & set(step.writes):
            order.after.append(step)
        else:
            order.before.append(step)

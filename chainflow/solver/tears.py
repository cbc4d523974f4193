"""Where to cut the loops of information: the torn variables with the fewest numbers, exactly.

The graph's nodes are variables, with an edge from each that a step reads to each that it writes.
Torn variables are a smallest weighted set that leaves no cycle.  Reductions that keep the optimum
come first; what is left is a set cover with cycles added until none is missed.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping

import networkx as nx
import numpy as np


def choose_tears(
    graph: nx.DiGraph, weights: Mapping[str, float], forced: Iterable[str] = ()
) -> list[str]:
    """Smallest-weight set of nodes that cuts every cycle.

    Parameters
    ----------
    graph : the graph of information.
    weights : weight of each node, ties already broken.
    forced : nodes that are torn in any case.
    """
    rest = graph.copy()
    tears = [node for node in forced if node in rest]
    rest.remove_nodes_from(tears)
    tears += _reduce(rest, weights)
    if rest.number_of_nodes():
        tears += _cover(rest, weights)
    order = {node: i for i, node in enumerate(graph.nodes)}
    return sorted(tears, key=order.__getitem__)


def _reduce(graph: nx.DiGraph, weights: Mapping[str, float]) -> list[str]:
    """Take out what no smallest set needs to look at; nodes that loop to themselves are torn."""
    torn: list[str] = []
    waiting = dict.fromkeys(graph.nodes)
    while waiting:
        node = next(iter(waiting))
        del waiting[node]
        if node not in graph:
            continue
        before, after = list(graph.predecessors(node)), list(graph.successors(node))
        if node in after:
            torn.append(node)
            graph.remove_node(node)
        elif not before or not after:
            graph.remove_node(node)
        elif len(before) == 1 and weights[before[0]] <= weights[node]:
            graph.remove_node(node)
            graph.add_edges_from((before[0], target) for target in after)
        elif len(after) == 1 and weights[after[0]] <= weights[node]:
            graph.remove_node(node)
            graph.add_edges_from((source, after[0]) for source in before)
        else:
            continue
        waiting |= dict.fromkeys(n for n in (*before, *after) if n in graph)
    return torn


def _cover(graph: nx.DiGraph, weights: Mapping[str, float]) -> list[str]:
    """Exact set cover over cycles that are found as they are missed."""
    from scipy.optimize import Bounds, LinearConstraint, milp

    nodes = list(graph.nodes)
    place = {node: i for i, node in enumerate(nodes)}
    cycles: list[list[str]] = _missed(graph, [])
    while True:
        rows = np.zeros((len(cycles), len(nodes)))
        for row, cycle in enumerate(cycles):
            rows[row, [place[node] for node in cycle]] = 1.0
        found = milp(
            [weights[node] for node in nodes],
            integrality=np.ones(len(nodes)),
            bounds=Bounds(0, 1),
            constraints=LinearConstraint(rows, lb=1.0),
            options={"mip_rel_gap": 0.0},
        )
        chosen = [node for node in nodes if found.x[place[node]] > 0.5]
        missed = _missed(graph, chosen)
        if not missed:
            return chosen
        cycles += missed


def _missed(graph: nx.DiGraph, torn: list[str]) -> list[list[str]]:
    """Cycles without a torn node, each cutting away the one before; empty if there is none."""
    rest = graph.copy()
    rest.remove_nodes_from(torn)
    found = []
    for part in list(nx.strongly_connected_components(rest)):
        piece = rest.subgraph(part).copy()
        while piece.number_of_nodes() > 1 or any(piece.has_edge(n, n) for n in piece):
            cycle = _short_cycle(piece)
            if not cycle:
                break
            found.append(cycle)
            piece.remove_node(cycle[0])
    return found


def _short_cycle(graph: nx.DiGraph) -> list[str]:
    """A shortest cycle through the first node, in graph order, that lies on one."""
    for node in graph.nodes:
        best: list[str] = []
        for before in graph.predecessors(node):
            if before == node:
                return [node]
            try:
                path = nx.shortest_path(graph, node, before)
            except nx.NetworkXNoPath:
                continue
            if not best or len(path) < len(best):
                best = path
        if best:
            return best
    return []

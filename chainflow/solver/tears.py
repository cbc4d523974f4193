"""Where to cut the loops of information: the torn variables with the fewest numbers, exactly.

The graph's nodes are variables, with an edge from each that a step reads to each that it writes.
Torn variables are a smallest weighted set that leaves no cycle.  Reductions that keep the optimum
come first; small knots are then searched, large ones are a set cover with cycles added until none
is missed.
"""

from __future__ import annotations

from collections.abc import Callable, Collection, Iterable, Mapping

import networkx as nx
import numpy as np

_MOST_TRIALS = 400  # of the search; larger knots go to the set cover
_TIE = 0.1  # weights closer than this count as equal where a knot is made smaller
_LARGEST_EXCHANGE = 100  # nodes of a loop up to which ties are looked at
_KEPT = 1e12  # weight of a node that this branch leaves whole


def choose_tears(
    graph: nx.DiGraph, weights: Mapping[str, float], forced: Iterable[str] = ()
) -> list[str]:
    """Smallest-weight set of nodes that cuts every cycle.

    Parameters
    ----------
    graph : the graph of information.
    weights : weight of each node; parts below 0.1 only break ties.
    forced : nodes that are torn in any case.
    """
    rest = graph.copy()
    forced = tuple(forced)
    tears = [node for node in forced if node in rest]
    rest.remove_nodes_from(tears)
    tears += _reduce(rest, weights)
    for part in list(nx.strongly_connected_components(rest)):
        if len(part) > 1:
            knot = rest.subgraph([node for node in rest if node in part])
            tears += _branch(knot, weights) or _cover(knot, weights)
    tears = _preferred(graph, tears, weights, frozenset(forced))
    order = {node: i for i, node in enumerate(graph.nodes)}
    return sorted(tears, key=order.__getitem__)


def _preferred(
    graph: nx.DiGraph, tears: list[str], weights: Mapping[str, float], forced: frozenset[str]
) -> list[str]:
    """Exchange torn nodes one by one for lighter ones that cut the same cycles."""
    torn = dict.fromkeys(tears)
    for node in sorted(tears, key=lambda n: weights[n]):
        if node in forced:
            continue
        others = torn.keys() - {node}
        ahead = _reached(graph.successors, node, others)
        members = ahead & _reached(graph.predecessors, node, others)
        if len(members) > _LARGEST_EXCHANGE:
            continue
        knot = graph.subgraph(members).copy()
        for better in sorted(knot, key=lambda n: weights[n]):
            if weights[better] >= weights[node]:
                break
            rest = knot.subgraph(n for n in knot if n != better)
            if nx.is_directed_acyclic_graph(rest):
                del torn[node]
                torn[better] = None
                break
    return list(torn)


def _reached(
    step: Callable[[str], Iterable[str]], start: str, blocked: Collection[str]
) -> set[str]:
    """Nodes that can be reached without entering a blocked one."""
    seen, waiting = {start}, [start]
    while waiting:
        for node in step(waiting.pop()):
            if node not in seen and node not in blocked:
                seen.add(node)
                waiting.append(node)
    return seen


def _branch(graph: nx.DiGraph, weights: Mapping[str, float]) -> list[str]:
    """Exact search for small knots: one node of a short cycle is torn, whichever is cheapest.

    Returns nothing if the knot needs more than a few hundred trials.
    """
    best: list[list[str]] = [[]]
    least = [float("inf")]
    trials = [0]

    def search(rest: nx.DiGraph, torn: list[str], kept: frozenset[str]) -> None:
        trials[0] += 1
        if trials[0] > _MOST_TRIALS:
            return
        costs = {n: _KEPT if n in kept else weights[n] for n in rest}
        torn = torn + _reduce(rest, costs)
        spent = sum(_KEPT if n in kept else weights[n] for n in torn)
        if spent >= least[0]:
            return
        cycle = _short_cycle(rest)
        if not cycle:
            best[0], least[0] = torn, spent
            return
        open_nodes = sorted((n for n in cycle if n not in kept), key=lambda n: weights[n])
        for number, node in enumerate(open_nodes):
            without = rest.copy()
            without.remove_node(node)
            search(without, [*torn, node], kept | frozenset(open_nodes[:number]))

    search(graph.copy(), [], frozenset())
    return best[0] if trials[0] <= _MOST_TRIALS else []


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
        elif len(before) == 1 and weights[before[0]] <= weights[node] + _TIE:
            graph.remove_node(node)
            graph.add_edges_from((before[0], target) for target in after)
        elif len(after) == 1 and weights[after[0]] <= weights[node] + _TIE:
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
            integrality=np.ones(len(nodes), dtype=int),
            bounds=Bounds(0, 1),
            constraints=LinearConstraint(rows, lb=1.0),
            options={"mip_rel_gap": 0.0},
        )
        assert found.x is not None, "a set cover always has an answer"
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

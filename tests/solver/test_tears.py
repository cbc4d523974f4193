"""Torn variables are a smallest set that cuts every cycle."""

from __future__ import annotations

from itertools import combinations

import networkx as nx
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from chainflow.solver import tears as tears_module
from chainflow.solver.tears import choose_tears


def is_cut(graph: nx.DiGraph, tears: list[str]) -> bool:
    rest = graph.copy()
    rest.remove_nodes_from(tears)
    return nx.is_directed_acyclic_graph(rest)


def smallest_weight(graph: nx.DiGraph, weights: dict[str, float]) -> float:
    """By trying all subsets."""
    best = sum(weights.values())
    nodes = list(graph.nodes)
    for size in range(len(nodes) + 1):
        for subset in combinations(nodes, size):
            weight = sum(weights[n] for n in subset)
            if weight < best and is_cut(graph, list(subset)):
                best = weight
    return best


@st.composite
def weighted_graphs(draw: st.DrawFn) -> tuple[nx.DiGraph, dict[str, float]]:
    count = draw(st.integers(1, 7))
    names = [f"v{i}" for i in range(count)]
    graph = nx.DiGraph()
    graph.add_nodes_from(names)
    pairs = [(a, b) for a in names for b in names]
    graph.add_edges_from(draw(st.lists(st.sampled_from(pairs), max_size=16)))
    weights = {n: float(draw(st.integers(1, 9))) + 1e-6 * i for i, n in enumerate(names)}
    return graph, weights


@given(weighted_graphs())
@settings(max_examples=150, deadline=None)
def test_tears_cut_every_cycle_with_the_least_weight(
    case: tuple[nx.DiGraph, dict[str, float]],
) -> None:
    graph, weights = case
    tears = choose_tears(graph, weights)
    assert is_cut(graph, tears)
    # the parts of 1e-6 only break ties
    assert sum(weights[t] for t in tears) == pytest.approx(
        smallest_weight(graph, weights), abs=1e-4
    )


def test_forced_tears_are_taken_and_not_doubled() -> None:
    graph = nx.DiGraph([("a", "b"), ("b", "a"), ("b", "c"), ("c", "b")])
    weights = {"a": 1.0, "b": 5.0, "c": 1.0}
    assert choose_tears(graph, weights, ["b"]) == ["b"]
    assert choose_tears(graph, weights) == ["a", "c"]


def test_a_graph_without_cycles_needs_no_tear() -> None:
    assert choose_tears(nx.DiGraph([("a", "b"), ("b", "c")]), dict.fromkeys("abc", 1.0)) == []


def test_dense_knot_is_cut_exactly() -> None:
    """Every node points at every other: all but one are torn, the heaviest stays."""
    names = [f"v{i}" for i in range(9)]
    graph = nx.DiGraph([(a, b) for a in names for b in names if a != b])
    weights = {n: 1.0 + i for i, n in enumerate(names)}
    assert choose_tears(graph, weights) == names[:-1]


@given(weighted_graphs())
@settings(max_examples=60, deadline=None)
def test_search_and_set_cover_agree(case: tuple[nx.DiGraph, dict[str, float]]) -> None:
    graph, weights = case
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(tears_module, "_MOST_TRIALS", 0)  # the search gives up at once
        covered = choose_tears(graph, weights)
    searched = choose_tears(graph, weights)
    assert sum(weights[t] for t in covered) == pytest.approx(
        sum(weights[t] for t in searched), abs=1e-4
    )
